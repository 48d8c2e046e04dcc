import type { ItemSizes } from '../../encode';
import type { Subroutine } from '../recipe';
import type { LookupPolicy } from '../recipes/scope';
import { phaseEstimationPart, type StepBits, withinCap } from '../squares/step';
import { chooseBlocks } from './blocks';
import type { SpinTreatment } from './product';
import { tripletRecipe } from './recipe';
import { tripletLayout } from './sizes';
import type { WalkBlocks } from './walk';

/** A recipe, and the block sizes that its circuit is to be emitted with. */
export interface TripletStep {
  readonly recipe: Subroutine;
  readonly blocks: WalkBlocks;
}

/** The walk step of a triplet encoding at its cheapest block sizes, inside the registers of phase estimation. */
export function tripletStep(
  sizes: ItemSizes,
  spin: SpinTreatment,
  { keepBits, rotationBits, phaseBits }: StepBits,
  policy: LookupPolicy,
): TripletStep {
  const bits = { keep: keepBits, innerKeep: keepBits, rotation: rotationBits };
  const layout = tripletLayout(sizes, bits);
  const phase = phaseEstimationPart(phaseBits);
  return withinCap(
    (limit): TripletStep => {
      const blocks = chooseBlocks(sizes.orbitals, layout, bits, policy, limit);
      return { recipe: tripletRecipe(sizes.orbitals, layout, bits, spin, blocks, phase), blocks };
    },
    ({ blocks }) => layout.rowWidth * blocks.rows.read,
    policy.qubitCap,
  );
}
