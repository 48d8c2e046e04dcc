// Finds an installed Chromium-family browser: for `npm start` and for the browser tests alike.
import { accessSync, constants, statSync } from 'node:fs';
import { delimiter, isAbsolute, join } from 'node:path';

/** Commands tried on the path, in this order. */
export const COMMANDS = [
  'chromium',
  'chromium-browser',
  'google-chrome-stable',
  'google-chrome',
  'microsoft-edge',
  'brave-browser',
];

/** Where the systems' installers put them. */
function platformPaths(platform, env) {
  if (platform === 'darwin') {
    const apps = ['Chromium', 'Google Chrome', 'Microsoft Edge', 'Brave Browser'];
    return ['/Applications', join(env.HOME ?? '/', 'Applications')].flatMap((folder) =>
      apps.map((app) => join(folder, `${app}.app`, 'Contents', 'MacOS', app)),
    );
  }
  if (platform === 'win32') {
    const roots = [env.PROGRAMFILES, env['PROGRAMFILES(X86)'], env.LOCALAPPDATA].filter(Boolean);
    const programs = [
      ['Chromium', 'Application', 'chrome.exe'],
      ['Google', 'Chrome', 'Application', 'chrome.exe'],
      ['Microsoft', 'Edge', 'Application', 'msedge.exe'],
      ['BraveSoftware', 'Brave-Browser', 'Application', 'brave.exe'],
    ];
    return roots.flatMap((root) => programs.map((parts) => join(root, ...parts)));
  }
  return [
    '/snap/bin/chromium',
    '/opt/google/chrome/chrome',
    '/opt/microsoft/msedge/msedge',
    '/usr/lib/chromium/chromium',
  ];
}

/**
 * Path of the browser to use, or null. SPINWRIGHT_BROWSER (a path or a command) comes first and alone: where it
 * is set but not to be found, no other browser is taken in its place.
 * @param {{ env?: NodeJS.ProcessEnv, platform?: NodeJS.Platform }} [options]
 * @returns {string | null}
 */
export function findBrowser({ env = process.env, platform = process.platform } = {}) {
  const onPath = (command) =>
    (env.PATH ?? '')
      .split(delimiter)
      .filter(Boolean)
      .flatMap((folder) =>
        (platform === 'win32' ? [`${command}.exe`, command] : [command]).map((c) => join(folder, c)),
      )
      .find(isProgram) ?? null;
  const wanted = env.SPINWRIGHT_BROWSER;
  if (wanted) return isAbsolute(wanted) ? (isProgram(wanted) ? wanted : null) : onPath(wanted);
  for (const command of COMMANDS) {
    const found = onPath(command);
    if (found) return found;
  }
  return platformPaths(platform, env).find(isProgram) ?? null;
}

/** One line for whoever has none. */
export const NO_BROWSER =
  'no Chromium-family browser found: install one (Debian, Ubuntu: `apt-get install chromium`) or set SPINWRIGHT_BROWSER to its path';

/** Chromium refuses its sandbox to root: the flag is given then, and only then. */
export const sandboxFlags = (uid = process.getuid?.()) => (uid === 0 ? ['--no-sandbox'] : []);

function isProgram(path) {
  try {
    accessSync(path, constants.X_OK);
    return statSync(path).isFile();
  } catch {
    return false;
  }
}
