import type { OpenedFiles, Shell } from '../shell';
import { fetchListed, fetchListing } from './listing';

/** How often the page tells its server that it is still there; the server ends 10 s after the last one. */
const HEARTBEAT_MS = 2_000;

/** Paths inside the data set: the folder's own name is not part of them. */
export function relativePath(path: string): string {
  const parts = path.split('/');
  return parts.length > 1 ? parts.slice(1).join('/') : path;
}

function askForFiles(folder: boolean): Promise<OpenedFiles | null> {
  return new Promise((resolve) => {
    const field = document.createElement('input');
    field.type = 'file';
    field.multiple = true;
    field.webkitdirectory = folder;
    field.addEventListener('cancel', () => resolve(null));
    field.addEventListener('change', () => {
      const chosen = [...(field.files ?? [])];
      const files = chosen.map((file) => ({
        path: file.webkitRelativePath ? relativePath(file.webkitRelativePath) : file.name,
        blob: file,
      }));
      const name = chosen[0]?.webkitRelativePath.split('/')[0] || (chosen[0]?.name ?? '');
      resolve(files.length ? { name, files } : null);
    });
    field.click();
  });
}

/** The window in an installed browser: file fields, drops and downloads. */
export function browserShell(): Shell {
  const beat = () => void fetch('heartbeat', { method: 'POST' }).catch(() => {});
  beat();
  setInterval(beat, HEARTBEAT_MS);
  return {
    kind: 'browser',
    open: () => askForFiles(false),
    demo: async () => fetchListed(await fetchListing('demo/listing.json')),
    async given() {
      const listing = await fetchListing('given/listing.json');
      return listing.files.length ? fetchListed(listing) : null;
    },
    async save(name, text) {
      const link = document.createElement('a');
      link.href = URL.createObjectURL(new Blob([text], { type: 'text/plain' }));
      link.download = name;
      link.click();
      setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
      return true;
    },
    // A page cannot reopen a file by itself: the browser shell has no recent files.
    recent: async () => [],
    openRecent: async () => null,
    onCommand: () => () => {},
  };
}
