/** Files the user opened, as blobs with their paths inside the data set. */
export interface OpenedFiles {
  readonly name: string;
  readonly files: readonly { readonly path: string; readonly blob: Blob }[];
  /** True where the user named each file, false where a folder stands for the data set in it. */
  readonly chosenOneByOne: boolean;
}

export interface RecentFiles {
  readonly id: string;
  readonly name: string;
}

/** What a menu outside the page may ask for. */
export const COMMANDS = [
  'open-files',
  'open-folder',
  'demo',
  'copy-table',
  'reckon',
  'stop-job',
  'keys',
  'stop-1',
  'stop-2',
  'stop-3',
  'stop-4',
  'stop-5',
  'stop-6',
] as const;
export type Command = (typeof COMMANDS)[number];

/** All that differs between the desktop window and a browser's. */
export interface Shell {
  readonly kind: 'desktop' | 'browser';
  /** Asks for files or for a folder; null where the user thought better of it. */
  open(what: 'files' | 'folder'): Promise<OpenedFiles | null>;
  /** The bundled demo. */
  demo(): Promise<OpenedFiles>;
  /** What to open by itself at the start: files of the command line, the demo, or nothing. */
  given(): Promise<OpenedFiles | null>;
  /** Saves text under a name the user may change. @returns false where the user thought better of it. */
  save(name: string, text: string): Promise<boolean>;
  recent(): Promise<readonly RecentFiles[]>;
  openRecent(id: string): Promise<OpenedFiles | null>;
  /** Commands from a menu outside the page. @returns a function that stops listening. */
  onCommand(listener: (command: Command) => void): () => void;
}
