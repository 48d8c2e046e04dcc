import { InputError, type JobContext } from '../../job';
import type { SpinorContents } from '../raw';
import type { EntryParser } from './fcidump-entry';
import type { FcidumpHeader } from './fcidump-header';
import { type Clash, CoreEnergy, type FcidumpSink, Tally } from './fcidump-sink';
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
  private readonly tally: Tally;
  private readonly core: CoreEnergy;

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
    this.tally = new Tally(m);
    this.core = new CoreEnergy(path);
  }

  add(entry: EntryParser, line: number): void {
    const { kind, re, im } = entry;
    this.tally.add(entry, Math.hypot(re, im), line);
    if (kind === 'two-electron') {
      const slot = this.twoElectronSlot(entry);
      const { re: gr, im: gi } = this.g;
      if (this.gListed.has(slot)) this.gClash.note(slot, Math.hypot(gr[slot] - re, gi[slot] - im), line);
      else {
        this.gListed.add(slot);
        const mirror = this.mirror(slot);
        gr[slot] = gr[mirror] = re;
        gi[slot] = gi[mirror] = im;
      }
    } else if (kind === 'one-electron') {
      const slot = (entry.i - 1) * this.header.orbitals + entry.j - 1;
      const { re: hr, im: hi } = this.h;
      if (this.hListed.has(slot)) this.hClash.note(slot, Math.hypot(hr[slot] - re, hi[slot] - im), line);
      else {
        this.hListed.add(slot);
        hr[slot] = re;
        hi[slot] = im;
      }
    } else if (kind === 'constant') this.core.add(re, im, line);
  }

  slotOf(entry: EntryParser): number {
    if (entry.kind === 'two-electron') return this.twoElectronSlot(entry);
    return entry.kind === 'one-electron'
      ? -1 - ((entry.i - 1) * this.header.orbitals + entry.j - 1)
      : Number.NaN;
  }

  clash(): Clash | null {
    const h = this.hClash.beyond(this.tally.hMax);
    return h ? { ...h, slot: -1 - h.slot } : this.gClash.beyond(this.tally.gMax);
  }

  async finish(context: JobContext): Promise<SpinorContents> {
    const { header, h, g } = this;
    this.core.require(this.tally.lastLine);
    this.fillOneElectron();
    await this.fillTwoElectron(context);
    return {
      kind: 'spinor',
      origin: this.path,
      spinors: header.orbitals,
      electrons: header.electrons,
      constant: this.core.value,
      h,
      g,
      notes: [...header.notes, ...this.tally.notes('spinor')],
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

  /** The slot of (kl|ij), given that of (ij|kl). */
  private mirror(slot: number): number {
    const pairs = this.header.orbitals ** 2;
    const bra = Math.floor(slot / pairs);
    return (slot - bra * pairs) * pairs + bra;
  }

  private async fillTwoElectron(context: JobContext): Promise<void> {
    const m = this.header.orbitals;
    const pairs = m * m;
    const { re, im } = this.g;
    const transposed = Int32Array.from({ length: pairs }, (_, pair) => (pair % m) * m + Math.floor(pair / m));
    let seen = 0;
    for (const slot of this.gListed.members()) {
      if (++seen % 65536 === 0) await context.checkpoint();
      const bra = Math.floor(slot / pairs);
      const braT = transposed[bra];
      const ketT = transposed[slot - bra * pairs];
      const partner = braT <= ketT ? braT * pairs + ketT : ketT * pairs + braT;
      if (this.gListed.has(partner)) continue;
      const mirror = this.mirror(partner);
      re[partner] = re[mirror] = re[slot];
      im[partner] = im[mirror] = -im[slot];
    }
  }
}
