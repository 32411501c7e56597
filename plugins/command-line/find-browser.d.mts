/** Path of a Chrome or Chromium on this machine, if there is one. */
export function findBrowser(): string | undefined;
