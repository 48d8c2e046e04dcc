import type { Command, Shell } from '../shell';
import { fetchListed, fetchListing, type Listing } from './listing';

/** What the preload script puts on `window.desktop`. */
export interface DesktopBridge {
  open(what: 'files' | 'folder'): Promise<Listing | null>;
  save(name: string, text: string): Promise<boolean>;
  recent(): Promise<readonly { readonly id: string; readonly name: string }[]>;
  openRecent(id: string): Promise<Listing | null>;
  onCommand(listener: (command: string) => void): () => void;
}

declare global {
  interface Window {
    readonly desktop?: DesktopBridge;
  }
}

/** The window in the desktop shell: dialogs and the menu live in the main process. */
export function desktopShell(bridge: DesktopBridge): Shell {
  const fetched = async (listing: Listing | null) => (listing ? fetchListed(listing) : null);
  return {
    kind: 'desktop',
    open: async (what) => fetched(await bridge.open(what)),
    demo: async () => fetchListed(await fetchListing('demo/listing.json')),
    async given() {
      const listing = await fetchListing('given/listing.json');
      if (listing.demo) return fetchListed(await fetchListing('demo/listing.json'));
      return listing.files.length ? fetchListed(listing) : null;
    },
    save: (name, text) => bridge.save(name, text),
    recent: () => bridge.recent(),
    openRecent: async (id) => fetched(await bridge.openRecent(id)),
    onCommand: (listener) => bridge.onCommand((command) => listener(command as Command)),
  };
}
