import type { OpenedFiles, Shell } from '../shell';
import { fetchListed, fetchListing } from './listing';

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
      resolve(files.length ? { name, files, chosenOneByOne: !folder } : null);
    });
    field.click();
  });
}

/** The window in an installed browser: file fields, drops and downloads. */
export function browserShell(): Shell {
  // Tells the server that the page is still there; it ends 10 s after it was last told.
  const pulse = new Worker(new URL('./heartbeat-worker.ts', import.meta.url), { type: 'module' });
  pulse.postMessage(new URL('heartbeat', document.baseURI).href);
  return {
    kind: 'browser',
    open: (what) => askForFiles(what === 'folder'),
    demo: async () => fetchListed(await fetchListing('demo/listing.json')),
    async given() {
      const listing = await fetchListing('given/listing.json');
      if (listing.demo) return fetchListed(await fetchListing('demo/listing.json'));
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
