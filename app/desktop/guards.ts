import type { BrowserWindowConstructorOptions } from 'electron';

/** The window's options: no Node in the page, a context of its own for the bridge, and the sandbox. */
export function windowOptions(preload: string): BrowserWindowConstructorOptions {
  return {
    width: 1280,
    height: 832,
    minWidth: 1024,
    minHeight: 680,
    show: false,
    title: 'Spinwright',
    webPreferences: {
      preload,
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      nodeIntegrationInWorker: false,
      nodeIntegrationInSubFrames: false,
      webSecurity: true,
      webviewTag: false,
      navigateOnDragDrop: false,
      spellcheck: false,
    },
  };
}

/** The parts of Electron's web contents that are guarded. */
export interface GuardedContents {
  setWindowOpenHandler(handler: () => { action: 'deny' }): void;
  on(
    event: 'will-navigate' | 'will-redirect' | 'will-attach-webview',
    listener: (event: { preventDefault(): void }) => void,
  ): unknown;
}

/** The page stays the page: no new windows, no navigation, no embedded pages. */
export function guardContents(contents: GuardedContents): void {
  contents.setWindowOpenHandler(() => ({ action: 'deny' }));
  for (const event of ['will-navigate', 'will-redirect', 'will-attach-webview'] as const)
    contents.on(event, (e) => e.preventDefault());
}

/** The parts of Electron's session that are guarded. */
export interface GuardedSession {
  setPermissionRequestHandler(
    handler: (contents: unknown, permission: string, done: (granted: boolean) => void) => void,
  ): void;
  setPermissionCheckHandler(handler: (contents: unknown, permission: string) => boolean): void;
}

/** Copying a table is all that the page may ask the system for. */
const ALLOWED = ['clipboard-sanitized-write'];

export function guardSession(session: GuardedSession): void {
  session.setPermissionRequestHandler((_contents, permission, done) => done(ALLOWED.includes(permission)));
  session.setPermissionCheckHandler((_contents, permission) => ALLOWED.includes(permission));
}
