/** What can leave the page, what cannot, and how that is checked. */

/** @type {Record<string, string>} */
export const SEAL_WORDS = {
  sealed: "Sealed: what cannot leave this page, and how to check it",
  "sealed.busy": "Being computed",
  "sealed.changed":
    "It cannot be told here: something has changed the document before the program began, perhaps an extension of the browser or the server it came from.",
  "sealed.unknown": "It cannot be told here, because the engine has not started.",
};

/** Headings with what stands below them. @type {[string, string[]][]} */
export const SEAL_PARTS = [
  [
    "What the policy in the file stops",
    [
      "Every request that the page or its workers could make: to any server, for data, pictures, styles, fonts, scripts, frames or media, by forms, sockets or beacons.",
      "Scripts and styles other than those the file was built with.",
    ],
  ],
  [
    "What no policy stops",
    [
      "Going to another address, opening a window and, in some browsers, direct connections to other machines (WebRTC). The program has no code for these, for storage, or for running text as code: every build is scanned for it.",
      "Extensions of the browser, which may read every page; the machine and what else runs on it; and what becomes of files, copies and paper that you make here.",
    ],
  ],
  [
    "The one exception",
    [
      "Embedded in another page, which its address must name by #host=, it can hand data to that page and take data from it. A banner then names that page, and each hand-over needs your click. The page around can lay things over this one: click there only if you trust it.",
    ],
  ],
  [
    "See for yourself",
    [
      "Open the browser’s developer tools at the network panel and use the page: beyond the file itself nothing is listed but blob and data, which stay in the browser.",
      "Switch the network off and use the page: all of it works.",
      "Look at the source of the page: the policy (Content-Security-Policy) stands at its top.",
      "Try a request in the console of the tools, such as fetch with any address: the policy refuses it.",
    ],
  ],
];

export const SEAL_DIGEST = {
  title: "SHA-256 of this file",
  caution:
    "A forged page could show any number. Compare with what your system’s own tool says of the file, and with the figure published with the release:",
  tools: ["sha256sum inward.html", "shasum -a 256 inward.html", "certutil -hashfile inward.html SHA256"],
};
