// Where a Chrome or Chromium is on this machine. Plain JavaScript without dependencies: it runs before packages are installed.
import { accessSync, constants, statSync } from 'node:fs';
import { delimiter, join } from 'node:path';

const NAMES = [
  'chromium',
  'chromium-browser',
  'google-chrome',
  'google-chrome-stable',
  'chrome',
  'microsoft-edge',
  'msedge',
];

const USUAL_PLACES = [
  '/usr/bin/chromium',
  '/usr/bin/google-chrome',
  '/snap/bin/chromium',
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
  '/Applications/Chromium.app/Contents/MacOS/Chromium',
  '/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge',
  'C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe',
  'C:\\Program Files (x86)\\Google\\Chrome\\Application\\chrome.exe',
  'C:\\Program Files (x86)\\Microsoft\\Edge\\Application\\msedge.exe',
];

/** @returns {string | undefined} path of the browser: `CHROME_PATH`, then the PATH, then the usual places */
export function findBrowser() {
  const stated = process.env.CHROME_PATH;
  const folders = (process.env.PATH ?? '').split(delimiter).filter((folder) => folder !== '');
  const endings = process.platform === 'win32' ? ['.exe'] : [''];
  const onPath = folders.flatMap((folder) =>
    NAMES.flatMap((name) => endings.map((ending) => join(folder, name + ending))),
  );
  return [...(stated ? [stated] : []), ...onPath, ...USUAL_PLACES].find(isExecutable);
}

/** @param {string} file */
function isExecutable(file) {
  try {
    accessSync(file, constants.X_OK);
    return statSync(file).isFile();
  } catch {
    return false;
  }
}
