import { describe, expect, it } from 'vitest';
import { chooseShell } from '../../../build/choose-shell.mjs';

const here = {
  platform: 'linux',
  env: { DISPLAY: ':0' },
  desktopAsked: false,
  electron: null,
  browser: null,
};

describe('how npm start opens', () => {
  it('goes to the terminal without a display, whatever is installed', () => {
    const choice = chooseShell({ ...here, env: {}, electron: '/e', browser: '/b', desktopAsked: true });
    expect(choice.shell).toBe('terminal');
    expect(choice.why).toContain('no display');
  });

  it('counts Wayland as a display, and asks for none on other systems', () => {
    const wayland = { ...here, env: { WAYLAND_DISPLAY: 'wayland-0' }, browser: '/b' };
    expect(chooseShell(wayland).shell).toBe('browser');
    expect(chooseShell({ ...here, env: {}, platform: 'darwin', browser: '/b' }).shell).toBe('browser');
  });

  it('prefers an installed desktop runtime, and fetches it only when asked', () => {
    expect(chooseShell({ ...here, electron: '/e', browser: '/b' }).shell).toBe('desktop');
    expect(chooseShell({ ...here, browser: '/b' })).toMatchObject({ shell: 'browser' });
    expect(chooseShell({ ...here, browser: '/b', desktopAsked: true }).shell).toBe('desktop');
  });

  it('prints in the terminal where there is neither, with the cure', () => {
    const choice = chooseShell(here);
    expect(choice.shell).toBe('terminal');
    expect(choice.why).toMatch(/install one .*SPINWRIGHT_BROWSER/);
  });
});
