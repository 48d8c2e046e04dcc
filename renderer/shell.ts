/** Files the user opened, as blobs with their paths inside the data set. */
export interface OpenedFiles {
  readonly name: string;
  readonly files: readonly { readonly path: string; readonly blob: Blob }[];
}

export interface RecentFiles {
  readonly id: string;
  readonly name: string;
}

/** What a menu outside the page may ask for. */
export const COMMANDS = [
  'open',
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
  /** Asks for files or a folder; null where the user thought better of it. */
  open(): Promise<OpenedFiles | null>;
  /** The bundled demo. */
  demo(): Promise<OpenedFiles>;
  /** Files named on the command line, or null. */
  given(): Promise<OpenedFiles | null>;
  /** Saves text under a name the user may change. @returns false where the user thought better of it. */
  save(name: string, text: string): Promise<boolean>;
  recent(): Promise<readonly RecentFiles[]>;
  openRecent(id: string): Promise<OpenedFiles | null>;
  /** Commands from a menu outside the page. @returns a function that stops listening. */
  onCommand(listener: (command: Command) => void): () => void;
}
