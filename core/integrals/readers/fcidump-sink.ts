import { InputError, type JobContext } from '../../job';
import type { SpinFreeContents, SpinorContents } from '../raw';
import type { EntryParser } from './fcidump-entry';

/** Two lines give one integral different values. */
export interface Clash {
  /** Identifies the integral: `slotOf` of either line. */
  readonly slot: number;
  readonly line: number;
  readonly difference: number;
}

/** Where the entries of an FCIDUMP go. */
export interface FcidumpSink {
  add(entry: EntryParser, line: number): void;
  /** A number that is the same for two entries exactly if they give the same integral. */
  slotOf(entry: EntryParser): number;
  clash(): Clash | null;
  finish(context: JobContext): Promise<SpinFreeContents | SpinorContents>;
}

/** The core energy, and what is wrong with it; shared by both kinds of file. */
export class CoreEnergy {
  value = 0;
  private line = 0;

  constructor(private readonly path: string) {}

  add(value: number, imaginary: number, line: number): void {
    const tolerance = 1e-10 * Math.max(1, Math.abs(value));
    if (Math.abs(imaginary) > tolerance) {
      throw new InputError({
        code: 'complex-constant',
        where: `${this.path}:${line}`,
        found: `a core energy with imaginary part ${imaginary}`,
        expected: 'a real core energy',
        mend: 'Correct this line.',
      });
    }
    if (this.line > 0 && Math.abs(value - this.value) > tolerance) {
      throw new InputError({
        code: 'duplicate-entry',
        where: `${this.path}:${line}`,
        found: `a second core energy ${value}, after ${this.value} in line ${this.line}`,
        expected: 'one core energy (0 0 0 0)',
        mend: 'Remove one of the lines; files with separate sections for each spin are not read.',
      });
    }
    if (this.line === 0) this.value = value;
    this.line = line;
  }

  /** @throws InputError where there was none: the line comes last, so its absence tells of a cut file. */
  require(lastLine: number): void {
    if (this.line > 0) return;
    throw new InputError({
      code: 'no-core-energy',
      where: `${this.path}:${lastLine}`,
      found: 'the end of the file, without a core energy',
      expected: 'a line "E 0 0 0 0"',
      mend: 'If the file was cut short, copy it again; if the constant is zero, add the line "0.0 0 0 0 0".',
    });
  }
}

/** Counts, as entries arrive, what a careful reader should be told at the end. */
export class Tally {
  hMax = 0;
  gMax = 0;
  lastLine = 0;
  private energies = 0;
  private trailing = 0;
  private readonly used: Uint8Array;

  constructor(orbitals: number) {
    this.used = new Uint8Array(orbitals + 1);
  }

  /** @param size - magnitude of the value. */
  add({ kind, i, j, k, l, trailing }: EntryParser, size: number, line: number): void {
    const { used } = this;
    this.lastLine = line;
    if (trailing) this.trailing++;
    if (kind === 'two-electron') {
      used[i] = used[j] = used[k] = used[l] = 1;
      if (size > this.gMax) this.gMax = size;
    } else if (kind === 'one-electron') {
      used[i] = used[j] = 1;
      if (size > this.hMax) this.hMax = size;
    } else if (kind === 'orbital-energy') this.energies++;
  }

  /** @param what - `orbital` or `spinor`. */
  notes(what: string): string[] {
    const notes: string[] = [];
    const unused = [...this.used.keys()].filter((i) => i > 0 && this.used[i] === 0);
    if (unused.length > 0) {
      const shown = unused.slice(0, 8).join(', ') + (unused.length > 8 ? ', …' : '');
      notes.push(`No entry names ${what} ${shown}: is NORB too large?`);
    }
    if (this.hMax === 0) notes.push('The file has no one-electron entries.');
    if (this.gMax === 0) notes.push('The file has no two-electron entries.');
    if (this.energies > 0) notes.push(`${this.energies} orbital energies (i 0 0 0) were not needed.`);
    if (this.trailing > 0) {
      notes.push(`${this.trailing} lines have more than five fields; the rest was not read.`);
    }
    return notes;
  }
}
