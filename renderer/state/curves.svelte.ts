import type { EncodingShape } from '../../core/encode';
import type { VariantEstimate } from '../../core/plan/comparison';
import { toHartree } from '../../core/units';
import type { Ask } from '../engine/protocol';
import { overTargets } from '../ledger/reprice';

/** Chemical accuracy by the usual reading, 1 kcal/mol: common practice, no source. */
export const CHEMICAL_ACCURACY = toHartree(1, 'kcal/mol');
const POINTS = 25;

export type Curve = readonly { readonly hartree: number; readonly toffoli: number }[];

/** Targets of a curve, hartree: from about 1 cm⁻¹ to beyond chemical accuracy, wider where the own target asks for it. */
export function targetsAround(own: number): number[] {
  const low = Math.min(own / 5, CHEMICAL_ACCURACY / 351);
  const high = Math.max(own * 5, CHEMICAL_ACCURACY * 1.6);
  return Array.from({ length: POINTS }, (_, i) => low * (high / low) ** (i / (POINTS - 1)));
}

/**
 * Curves of cost against target, computed one at a time between other work: all of them at once would hold up the
 * page longer than a key stroke may take.
 */
export class Curves {
  readonly #kept = new WeakMap<VariantEstimate, { ask: Ask; curve: Curve }>();
  readonly #waiting = new Map<VariantEstimate, { shape: EncodingShape; ask: Ask }>();
  #version = $state(0);
  #scheduled = false;
  readonly #later: (work: () => void) => void;

  constructor(later: (work: () => void) => void = (work) => setTimeout(work)) {
    this.#later = later;
  }

  /** The curve, or null until it is computed; whoever asks inside an effect is asked again then. */
  of(e: VariantEstimate, shape: EncodingShape, ask: Ask): Curve | null {
    void this.#version;
    const kept = this.#kept.get(e);
    if (kept?.ask === ask) return kept.curve;
    this.#waiting.set(e, { shape, ask });
    this.#schedule();
    return null;
  }

  #schedule(): void {
    if (this.#scheduled || this.#waiting.size === 0) return;
    this.#scheduled = true;
    this.#later(() => {
      this.#scheduled = false;
      const [next] = this.#waiting;
      if (!next) return;
      const [e, { shape, ask }] = next;
      this.#waiting.delete(e);
      const own = toHartree(ask.target.value, ask.target.unit);
      this.#kept.set(e, { ask, curve: overTargets(e, shape, ask, targetsAround(own)) });
      this.#version++;
      this.#schedule();
    });
  }
}
