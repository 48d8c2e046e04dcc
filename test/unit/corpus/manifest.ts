import { existsSync, readFileSync, statSync } from 'node:fs';
import { basename, dirname, join, relative } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Finding } from '../../../core/job';

/** One malformed file. Paths are relative to the corpus folder. */
export interface Row {
  readonly path: string;
  /** What is wrong with it, in a few words. */
  readonly damage: string;
  /** What a user would type, in the corpus folder. */
  readonly command: string;
  readonly exit: number;
  readonly code: string;
  /** Parts of the message. */
  readonly where: string;
  readonly what: string;
  readonly cure: string;
  /** Also run as a process of its own: the rows that claim to be huge. */
  readonly spawn?: boolean;
}

/** A file that is read, with something to note. */
export interface FindingRow extends Row {
  readonly severity: Finding['severity'];
}

export interface Manifest {
  readonly about: string;
  /** What no row may take. */
  readonly limits: { readonly seconds: number; readonly mebibytes: number };
  readonly errors: readonly Row[];
  readonly findings: readonly FindingRow[];
  /** Sound files that rows need. */
  readonly support: readonly string[];
}

/** Ends with a slash. */
export const CORPUS = fileURLToPath(new URL('../../fixtures/corpus/', import.meta.url));

export const manifest: Manifest = JSON.parse(readFileSync(join(CORPUS, 'manifest.json'), 'utf8'));

/** The words of a command, its paths made absolute. */
export function wordsOf({ command }: Row): string[] {
  return command.split(' ').map((word) => (isInput(word) ? join(CORPUS, word) : word));
}

/** The file, recipe or folder that a command reads, relative to the corpus. */
export function inputOf({ command }: Row): string {
  const input = command.split(' ').find(isInput);
  if (input === undefined) throw new Error(`no file in "${command}"`);
  return input;
}

const isInput = (word: string): boolean => word.includes('/') && existsSync(join(CORPUS, word));

/** What a user of the window would hand over for a row: a folder, a file, or a recipe with the files it names. */
export function handedOver(row: Row): { name: string; paths: string[]; chosenOneByOne: boolean } {
  const input = inputOf(row);
  const full = join(CORPUS, input);
  if (statSync(full).isDirectory()) {
    const listed = [...manifest.errors.map(({ path }) => path), ...manifest.support];
    const paths = listed.filter((path) => dirname(path) === input);
    return { name: basename(input), paths: paths.sort(), chosenOneByOne: false };
  }
  const names = /\.recipe\.json$/.test(input)
    ? [...readFileSync(full, 'latin1').matchAll(/"file": "([^"]+)"/g)].map((match) => match[1]!)
    : [];
  const named = [...new Set(names)].map((name) => join(dirname(input), name));
  const folder = join(CORPUS, dirname(input));
  const present = named.filter(
    (path) => !relative(folder, join(CORPUS, path)).startsWith('..') && existsSync(join(CORPUS, path)),
  );
  return { name: basename(input), paths: [input, ...present], chosenOneByOne: true };
}
