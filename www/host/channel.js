/**
 * The one place where the page talks to the page around it, and only to that: messages are heard from the parent
 * window at the given origin alone and are addressed to that origin. A scan of the build refuses it elsewhere.
 */

import { PROTOCOL } from "./protocol.js";

/** The origin that a text names, such as `https://wiki.example.org:8443`; null for anything else. @param {string} text */
export function originNamed(text) {
  try {
    const { origin, protocol, href } = new URL(text);
    // An opaque origin, as of files and sandboxed frames, is shared by all of them.
    return /^https?:$/.test(protocol) && href === `${origin}/` ? origin : null;
  } catch {
    return null;
  }
}

export const isEmbedded = () => parent !== window;

/** @param {string} origin @param {(message: unknown) => void} hear */
export function openChannel(origin, hear) {
  /** @param {MessageEvent} event */
  const listen = (event) => {
    // What others say is not answered: an answer would tell them that somebody listens.
    if (event.source === parent && event.origin === origin) hear(event.data);
  };
  addEventListener("message", listen);
  return {
    /** @param {{ kind: string, [key: string]: unknown }} message */
    send: (message) => parent.postMessage({ inward: PROTOCOL, ...message }, origin),
    close: () => removeEventListener("message", listen),
  };
}
