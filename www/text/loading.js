/** What is said while the page's own script, and with it all other words, is still packed. */

export const LOADING = {
  failed: "Inward could not be started.",
  refused: "The browser refused its script: this file is not as it was built. Please get a fresh copy.",
  damaged: "What the file carries is damaged: it is not as it was built. Please get a fresh copy.",
};
