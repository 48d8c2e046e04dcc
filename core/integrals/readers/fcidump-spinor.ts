import { InputError } from '../../job';
import type { SpinorContents } from '../raw';
import type { EntryParser } from './fcidump-entry';
import type { FcidumpHeader } from './fcidump-header';
import { type Clash, CoreEnergy, type FcidumpSink, unusedNote } from './fcidump-sink';
import { Disagreement, SlotSet } from './listed';

/** Bytes of the arrays that {@link SpinorSink} builds: two planes of M⁴. */
export const spinorBytes = (m: number): number => 16 * m ** 4;

/**
 * Complex spinors. (ij|kl) = (kl|ij) always holds, so an entry fills both. Hermiticity, (ij|kl) = (ji|lk)* and
 * h_ij = h_ji*, fills in only what the file does not list; where it lists both, both are kept as they are,
 * for validation to compare.
 */
export class SpinorSink implements FcidumpSink {
  private readonly h: { re: Float64Array; im: Float64Array };
  private readonly g: { re: Float64Array; im: Float64Array };
  private readonly hListed: SlotSet;
  private readonly gListed: SlotSet;
  private readonly hClash = new Disagreement();
  private readonly gClash = new Disagreement();
  private hMax = 0;
  private gMax = 0;
  private readonly used: Uint8Array;
  private readonly core: CoreEnergy;
  private energies = 0;
  private trailing = 0;
  private lastLine = 0;

  constructor(
    private readonly path: string,
    private readonly header: FcidumpHeader,
  ) {
    const m = header.orbitals;
    if (m % 2 !== 0) {
      throw new InputError({
        code: 'odd-spinors',
        where: header.at('NORB'),
        found: `NORB=${m} for complex values`,
        expected: 'an even number of spinors: spinors 2m-1 and 2m are a Kramers pair',
        mend: 'Count spinors, not spatial orbitals, in NORB, and keep both partners of each pair.',
      });
    }
    this.h = { re: new Float64Array(m * m), im: new Float64Array(m * m) };
    this.g = { re: new Float64Array(m ** 4), im: new Float64Array(m ** 4) };
    this.hListed = new SlotSet(m * m);
    this.gListed = new SlotSet(m ** 4);
    this.used = new Uint8Array(m + 1);
    this.core = new CoreEnergy(path);
  }

  add(entry: EntryParser, line: number): void {
    const { kind, re, im } = entry;
    this.lastLine = line;
    if (entry.trailing) this.trailing++;
    if (kind === 'two-electron') {
      const slot = this.twoElectronSlot(entry);
      const { re: gr, im: gi } = this.g;
      this.used[entry.i] = this.used[entry.j] = this.used[entry.k] = this.used[entry.l] = 1;
      this.gMax = Math.max(this.gMax, Math.hypot(re, im));
      if (this.gListed.has(slot)) this.gClash.note(slot, Math.hypot(gr[slot] - re, gi[slot] - im), line);
      else {
        this.gListed.add(slot);
        gr[slot] = re;
        gi[slot] = im;
      }
    } else if (kind === 'one-electron') {
      const slot = (entry.i - 1) * this.header.orbitals + entry.j - 1;
      const { re: hr, im: hi } = this.h;
      this.used[entry.i] = this.used[entry.j] = 1;
      this.hMax = Math.max(this.hMax, Math.hypot(re, im));
      if (this.hListed.has(slot)) this.hClash.note(slot, Math.hypot(hr[slot] - re, hi[slot] - im), line);
      else {
        this.hListed.add(slot);
        hr[slot] = re;
        hi[slot] = im;
      }
    } else if (kind === 'constant') this.core.add(re, im, line);
    else this.energies++;
  }

  slotOf(entry: EntryParser): number {
    if (entry.kind === 'two-electron') return this.twoElectronSlot(entry);
    return entry.kind === 'one-electron'
      ? -1 - ((entry.i - 1) * this.header.orbitals + entry.j - 1)
      : Number.NaN;
  }

  clash(): Clash | null {
    const h = this.hClash.beyond(this.hMax);
    return h ? { ...h, slot: -1 - h.slot } : this.gClash.beyond(this.gMax);
  }

  finish(): SpinorContents {
    const { header, h, g } = this;
    this.core.require(this.lastLine);
    this.fillOneElectron();
    this.fillTwoElectron();
    const notes = [...header.notes, ...unusedNote(this.used, 'spinor')];
    if (this.hMax === 0) notes.push('The file has no one-electron entries.');
    if (this.gMax === 0) notes.push('The file has no two-electron entries.');
    if (this.energies > 0) notes.push(`${this.energies} orbital energies (i 0 0 0) were not needed.`);
    if (this.trailing > 0)
      notes.push(`${this.trailing} lines have more than five fields; the rest was not read.`);
    return {
      kind: 'spinor',
      origin: this.path,
      spinors: header.orbitals,
      electrons: header.electrons,
      constant: this.core.value,
      h,
      g,
      notes,
    };
  }

  /** The smaller of the two slots that (ij|kl) = (kl|ij) makes equal. */
  private twoElectronSlot({ i, j, k, l }: EntryParser): number {
    const m = this.header.orbitals;
    const bra = (i - 1) * m + j - 1;
    const ket = (k - 1) * m + l - 1;
    return bra <= ket ? bra * m * m + ket : ket * m * m + bra;
  }

  private fillOneElectron(): void {
    const m = this.header.orbitals;
    const { re, im } = this.h;
    for (let i = 0; i < m; i++) {
      for (let j = 0; j < m; j++) {
        if (this.hListed.has(i * m + j) || !this.hListed.has(j * m + i)) continue;
        re[i * m + j] = re[j * m + i];
        im[i * m + j] = -im[j * m + i];
      }
    }
  }

  private fillTwoElectron(): void {
    const m = this.header.orbitals;
    const pairs = m * m;
    const { re, im } = this.g;
    // First the conjugate partners of what is listed, among the slots bra ≤ ket; then the other half.
    for (let bra = 0; bra < pairs; bra++) {
      const braT = (bra % m) * m + Math.floor(bra / m);
      for (let ket = bra; ket < pairs; ket++) {
        const slot = bra * pairs + ket;
        if (this.gListed.has(slot)) continue;
        const ketT = (ket % m) * m + Math.floor(ket / m);
        const partner = braT <= ketT ? braT * pairs + ketT : ketT * pairs + braT;
        if (!this.gListed.has(partner)) continue;
        re[slot] = re[partner];
        im[slot] = -im[partner];
      }
    }
    for (let bra = 1; bra < pairs; bra++) {
      for (let ket = 0; ket < bra; ket++) {
        re[bra * pairs + ket] = re[ket * pairs + bra];
        im[bra * pairs + ket] = im[ket * pairs + bra];
      }
    }
  }
}
