/** What is said while the page's own script, and with it all other words, is still packed. */

export const LOADING = {
  failed: "Inward could not be started.",
  refused: "The browser refused its script: this file is not as it was built. Please get a fresh copy.",
  old: "This browser lacks DecompressionStream: open the file in one of 2023 or later.",
};
