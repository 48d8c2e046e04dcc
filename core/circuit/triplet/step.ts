import type { ItemSizes } from '../../encode';
import type { Subroutine } from '../recipe';
import type { LookupPolicy } from '../recipes/scope';
import { chooseBlocks } from './blocks';
import type { SpinTreatment } from './product';
import { tripletRecipe } from './recipe';
import { tripletLayout } from './sizes';
import type { WalkBlocks } from './walk';

export interface StepBits {
  /** ℵ of all alias tables. */
  readonly keepBits: number;
  /** b: angles on the grid 2π/2^b. */
  readonly rotationBits: number;
  /** Bits of the phase register, ⌈log₂(steps + 1)⌉. */
  readonly phaseBits: number;
}

/** A recipe, and the block sizes that its circuit is to be emitted with. */
export interface TripletStep {
  readonly recipe: Subroutine;
  readonly blocks: WalkBlocks;
}

/**
 * The walk step of a triplet encoding at its cheapest block sizes, inside the registers of phase estimation. Where
 * a cap on the qubits is given, look-ups are narrowed until the peak fits, or cannot shrink further.
 *
 * Two Toffoli are for the phase register: the reflection's control and the step of the counter that unfolds the
 * register into walk steps (R. Babbush et al., Phys. Rev. X 8, 041015 (2018)).
 */
export function tripletStep(
  sizes: ItemSizes,
  spin: SpinTreatment,
  { keepBits, rotationBits, phaseBits }: StepBits,
  policy: LookupPolicy,
): TripletStep {
  const bits = { keep: keepBits, innerKeep: keepBits, rotation: rotationBits };
  const layout = tripletLayout(sizes, bits);
  const phase = {
    controls: 2,
    registers: [
      { name: 'phase register', qubits: phaseBits },
      { name: 'step counter ladder', qubits: Math.max(phaseBits - 1, 0) },
    ],
  };
  const build = (limit: number | null): TripletStep => {
    const blocks = chooseBlocks(layout, bits, policy, limit);
    return { recipe: tripletRecipe(sizes, layout, bits, spin, blocks, phase), blocks };
  };
  let step = build(null);
  if (policy.qubitCap === null) return step;
  for (let limit = layout.rowWidth * step.blocks.rows.read; peak(step.recipe) > policy.qubitCap; limit /= 2) {
    step = build(limit);
    if (limit < 1) break;
  }
  return step;
}

function peak(node: Subroutine): number {
  const own = (node.registers ?? []).reduce((sum, register) => sum + register.qubits, 0);
  return own + Math.max(0, ...(node.children ?? []).map(peak));
}
