import { numSymmetricPairs, pairsTriangleLength, symmetricPair } from '../integral-set';
import type { SpinFreeContents } from '../raw';
import type { EntryParser } from './fcidump-entry';
import type { FcidumpHeader } from './fcidump-header';
import { type Clash, CoreEnergy, type FcidumpSink, Tally } from './fcidump-sink';
import { Disagreement, SlotSet } from './listed';

/** Bytes of the arrays that {@link SpatialSink} builds: n⁴ for the two-electron part. */
export const spatialBytes = (n: number): number => 8 * pairsTriangleLength(n);

/** Real spatial orbitals: (pq|rs) has eight permutations, any of which may be listed. */
export class SpatialSink implements FcidumpSink {
  private readonly h: Float64Array;
  private readonly g: Float64Array;
  private readonly hListed: SlotSet;
  private readonly gListed: SlotSet;
  private readonly hClash = new Disagreement();
  private readonly gClash = new Disagreement();
  private readonly tally: Tally;
  private readonly core: CoreEnergy;

  constructor(
    private readonly path: string,
    private readonly header: FcidumpHeader,
  ) {
    const n = header.orbitals;
    this.h = new Float64Array(numSymmetricPairs(n));
    this.g = new Float64Array(pairsTriangleLength(n));
    this.hListed = new SlotSet(this.h.length);
    this.gListed = new SlotSet(this.g.length);
    this.tally = new Tally(n);
    this.core = new CoreEnergy(path);
  }

  add(entry: EntryParser, line: number): void {
    const { kind, re } = entry;
    this.tally.add(entry, Math.abs(re), line);
    if (kind === 'two-electron') {
      const slot = twoElectronSlot(entry);
      if (this.gListed.has(slot)) this.gClash.note(slot, Math.abs(this.g[slot] - re), line);
      else {
        this.gListed.add(slot);
        this.g[slot] = re;
      }
    } else if (kind === 'one-electron') {
      const slot = symmetricPair(entry.i - 1, entry.j - 1);
      if (this.hListed.has(slot)) this.hClash.note(slot, Math.abs(this.h[slot] - re), line);
      else {
        this.hListed.add(slot);
        this.h[slot] = re;
      }
    } else if (kind === 'constant') this.core.add(re, entry.im, line);
  }

  slotOf(entry: EntryParser): number {
    if (entry.kind === 'two-electron') return twoElectronSlot(entry);
    return entry.kind === 'one-electron' ? -1 - symmetricPair(entry.i - 1, entry.j - 1) : Number.NaN;
  }

  clash(): Clash | null {
    const h = this.hClash.beyond(this.tally.hMax);
    return h ? { ...h, slot: -1 - h.slot } : this.gClash.beyond(this.tally.gMax);
  }

  async finish(): Promise<SpinFreeContents> {
    const { header, h } = this;
    this.core.require(this.tally.lastLine);
    const n = header.orbitals;
    const full = new Float64Array(n * n);
    for (let p = 0, slot = 0; p < n; p++) {
      for (let q = 0; q <= p; q++, slot++) full[p * n + q] = full[q * n + p] = h[slot];
    }
    return {
      kind: 'spin-free',
      origin: this.path,
      orbitals: n,
      electrons: header.electrons,
      ms2: header.ms2,
      constant: this.core.value,
      oneElectron: full,
      twoElectron: this.g,
      notes: [...header.notes, ...this.tally.notes('orbital')],
    };
  }
}

function twoElectronSlot({ i, j, k, l }: EntryParser): number {
  const bra = i >= j ? (i * (i - 1)) / 2 + j - 1 : (j * (j - 1)) / 2 + i - 1;
  const ket = k >= l ? (k * (k - 1)) / 2 + l - 1 : (l * (l - 1)) / 2 + k - 1;
  return bra >= ket ? (bra * (bra + 1)) / 2 + ket : (ket * (ket + 1)) / 2 + bra;
}
