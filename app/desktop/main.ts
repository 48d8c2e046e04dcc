// The desktop shell: wires Electron to functions that know nothing of it at run time, and holds no logic itself.
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { app, BrowserWindow, dialog, ipcMain, Menu, protocol, session } from 'electron';
import { GrantError, Grants, type Listing, NOTHING } from '../web/grants';
import { guardContents, guardSession, windowOptions } from './guards';
import { CHANNELS, registerIpc } from './ipc';
import { menuTemplate } from './menu';
import { Recent } from './recent';
import { writeWhole } from './save';
import { isOwnPage, makeSchemeHandler, ORIGIN, SCHEME } from './scheme';

protocol.registerSchemesAsPrivileged([
  { scheme: SCHEME, privileges: { standard: true, secure: true, supportFetchAPI: true, stream: true } },
]);

/** Files of the command line; a checkout that is started without any shows the demo. */
async function givenFiles(grants: Grants): Promise<Listing> {
  const named = process.argv.slice(app.isPackaged ? 1 : 2).filter((arg) => !arg.startsWith('-'));
  if (named.length === 0) return { ...NOTHING, demo: !app.isPackaged };
  try {
    return await grants.grant(named);
  } catch (error) {
    if (!(error instanceof GrantError)) throw error;
    dialog.showErrorBox('These files could not be opened', error.message);
    return NOTHING;
  }
}

async function start(): Promise<void> {
  await app.whenReady();
  const grants = new Grants();
  const root = join(import.meta.dirname, '../renderer');
  protocol.handle(SCHEME, makeSchemeHandler({ root, grants, given: await givenFiles(grants) }));
  guardSession(session.defaultSession);
  const list = join(app.getPath('userData'), 'recent.json');
  registerIpc({
    ipc: ipcMain,
    dialog,
    grants,
    recent: new Recent({ read: () => readFile(list, 'utf8'), write: (text) => writeWhole(list, text) }),
    writeFile: writeWhole,
    isTrusted: isOwnPage,
  });
  const send = (command: string) =>
    BrowserWindow.getFocusedWindow()?.webContents.send(CHANNELS.command, command);
  Menu.setApplicationMenu(Menu.buildFromTemplate(menuTemplate(process.platform, send)));
  await openWindow();
  app.on('activate', () => {
    if (BrowserWindow.getAllWindows().length === 0) void openWindow();
  });
}

async function openWindow(): Promise<void> {
  const window = new BrowserWindow(windowOptions(join(import.meta.dirname, '../preload/preload.cjs')));
  guardContents(window.webContents);
  window.once('ready-to-show', () => window.show());
  await window.loadURL(ORIGIN);
}

app.on('window-all-closed', () => {
  if (process.platform !== 'darwin') app.quit();
});
void start();
