import type { IpcMainInvokeEvent, OpenDialogOptions, SaveDialogOptions } from 'electron';
import type { Grants, Listing } from '../web/grants';
import type { Recent } from './recent';

/** The parts of Electron that answering the page takes; fakes in tests. */
export interface IpcLike {
  handle(channel: string, listener: (event: IpcMainInvokeEvent, ...args: unknown[]) => unknown): void;
}
export interface DialogLike {
  showOpenDialog(options: OpenDialogOptions): Promise<{ canceled: boolean; filePaths: string[] }>;
  showSaveDialog(options: SaveDialogOptions): Promise<{ canceled: boolean; filePath: string }>;
}

export interface IpcOptions {
  readonly ipc: IpcLike;
  readonly dialog: DialogLike;
  readonly grants: Grants;
  readonly recent: Recent;
  /** Writes a whole file, or nothing. */
  readonly writeFile: (path: string, text: string) => Promise<void>;
  /** True for the address of the window's own page; no other frame is answered. */
  readonly isTrusted: (url: string) => boolean;
}

/** Channels of the bridge. The preload script repeats them, because it must be one file. */
export const CHANNELS = {
  open: 'files:open',
  save: 'files:save',
  recent: 'files:recent',
  openRecent: 'files:open-recent',
  command: 'window:command',
} as const;

/** Longest text a page may save: tables are a thousand times smaller. */
const MOST_TEXT = 64 * 2 ** 20;

const FILTERS = [
  { name: 'Integral files', extensions: ['json', 'npy', 'npz', 'h5', 'hdf5', 'txt', 'dat', 'fcidump'] },
  { name: 'All files', extensions: ['*'] },
];

/** A file name without a folder: what a page may propose. */
function isPlainName(value: unknown): value is string {
  return (
    typeof value === 'string' && value.length <= 255 && /^[^/\\\0]+$/.test(value) && !/^\.+$/.test(value)
  );
}

/**
 * Answers the page. Every call is refused unless it comes from the window's own page with arguments of the right
 * kind; paths never cross in either direction, only opaque ids and names.
 */
export function registerIpc({ ipc, dialog, grants, recent, writeFile, isTrusted }: IpcOptions): void {
  const answer = (channel: string, respond: (...args: unknown[]) => Promise<unknown>) =>
    ipc.handle(channel, async (event, ...args) => {
      const url = event.senderFrame?.url ?? '';
      if (!isTrusted(url)) throw new Error(`refused a call from ${url || 'an unknown frame'}`);
      return respond(...args);
    });

  const granted = async (paths: readonly string[]): Promise<Listing> => {
    const listing = await grants.grant(paths);
    await recent.add({ name: listing.name, paths });
    return listing;
  };

  answer(CHANNELS.open, async (what) => {
    if (what !== 'files' && what !== 'folder') throw new Error('bad arguments: expected "files" or "folder"');
    const { canceled, filePaths } = await dialog.showOpenDialog(
      what === 'folder'
        ? { properties: ['openDirectory'] }
        : { properties: ['openFile', 'multiSelections'], filters: FILTERS },
    );
    return canceled || filePaths.length === 0 ? null : granted(filePaths);
  });

  answer(CHANNELS.save, async (name, text) => {
    if (!isPlainName(name)) throw new Error('bad arguments: expected a file name');
    if (typeof text !== 'string' || text.length > MOST_TEXT) throw new Error('bad arguments: expected text');
    const { canceled, filePath } = await dialog.showSaveDialog({ defaultPath: name });
    if (canceled || filePath === '') return false;
    await writeFile(filePath, text);
    return true;
  });

  answer(CHANNELS.recent, async () => (await recent.list()).map(({ id, name }) => ({ id, name })));

  answer(CHANNELS.openRecent, async (id) => {
    if (typeof id !== 'string') throw new Error('bad arguments: expected an id');
    const found = (await recent.list()).find((r) => r.id === id);
    return found ? granted(found.paths) : null;
  });
}
