/** The browser without a sandbox (tests may run as root) and without anything that it would do on its own. */
export const BROWSER_OPTIONS = {
  args: [
    '--no-sandbox',
    '--disable-gpu',
    '--no-first-run',
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
  ],
};
