// Which of the three ways `npm start` takes, and why. Pure, so that it can be tested without any of them.
import { NO_BROWSER } from './browser.mjs';

/**
 * @param {{ platform: string, env: Record<string, string | undefined>, desktopAsked: boolean,
 *   electron: string | null, browser: string | null }} situation electron, browser: paths of what is installed
 * @returns {{ shell: 'desktop' | 'browser' | 'terminal', why: string }}
 */
export function chooseShell({ platform, env, desktopAsked, electron, browser }) {
  if (platform === 'linux' && !env.DISPLAY && !env.WAYLAND_DISPLAY) {
    return {
      shell: 'terminal',
      why: 'there is no display (neither DISPLAY nor WAYLAND_DISPLAY is set). To open the window, run `npm start` in a desktop session.',
    };
  }
  if (electron) return { shell: 'desktop', why: 'the desktop runtime is installed.' };
  if (desktopAsked) return { shell: 'desktop', why: '--desktop was given; the runtime is downloaded first.' };
  if (browser) {
    return {
      shell: 'browser',
      why: `the desktop runtime is not installed (\`npm start -- --desktop\` fetches it); using ${browser}.`,
    };
  }
  return {
    shell: 'terminal',
    why: `${NO_BROWSER}; or \`npm start -- --desktop\` fetches the desktop runtime.`,
  };
}
