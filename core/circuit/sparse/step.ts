import type { TermSizes } from '../../encode';
import { bestBlock } from '../formulas';
import type { Blocks } from '../primitives/look-up';
import { outputWires } from '../primitives/reading';
import { addressBits } from '../primitives/unary-iteration';
import type { Subroutine } from '../recipe';
import type { LookupPolicy } from '../recipes/scope';
import { borrowedBlocks } from '../squares/blocks';
import { type SparseBits, type SparseLayout, shareBits, sparseLayout } from './layout';
import { preparationToffoli, sparseRecipe, tableToffoli } from './recipe';
import { sparseIdleQubits } from './walk';

/** Most bits of the factor that are tried: a further one would save less than 1 % of the rows. */
const MOST_REFINED = 6;

/** A recipe, and what its circuit is to be emitted with. */
export interface SparseStep {
  readonly recipe: Subroutine;
  readonly bits: SparseBits;
  readonly refinement: number;
  readonly layout: SparseLayout;
  readonly blocks: Blocks;
}

/**
 * The walk step of a sparse encoding at its cheapest table, inside the registers of phase estimation. Where a cap on
 * the qubits is given, the look-up is narrowed until the peak fits, or cannot shrink further.
 *
 * Two Toffoli are for the phase register: the reflection's control and the step of the counter that unfolds the
 * register into walk steps (R. Babbush et al., Phys. Rev. X 8, 041015 (2018)).
 */
export function sparseStep(
  sizes: TermSizes,
  { keepBits, phaseBits }: { readonly keepBits: number; readonly phaseBits: number },
  policy: LookupPolicy,
): SparseStep {
  const bits = { keep: keepBits, share: shareBits(sizes, keepBits) };
  const phase = {
    controls: 2,
    registers: [
      { name: 'phase register', qubits: phaseBits },
      { name: 'step counter ladder', qubits: Math.max(phaseBits - 1, 0) },
    ],
  };
  const build = (limit: number | null): SparseStep => {
    const chosen = cheapestTable(sizes, bits, policy, limit);
    return { ...chosen, bits, recipe: sparseRecipe(chosen.layout, chosen.blocks, phase) };
  };
  let step = build(null);
  if (policy.qubitCap === null) return step;
  for (let limit = step.blocks.read / 2; limit >= 1 && peak(step.recipe) > policy.qubitCap; limit /= 2) {
    step = build(limit);
  }
  return step;
}

/** @param limit - largest block, or null. */
function cheapestTable(
  sizes: TermSizes,
  bits: SparseBits,
  policy: LookupPolicy,
  limit: number | null,
): Pick<SparseStep, 'refinement' | 'layout' | 'blocks'> {
  let best: (Pick<SparseStep, 'refinement' | 'layout' | 'blocks'> & { cost: number }) | null = null;
  for (let refinement = 0; refinement <= MOST_REFINED; refinement++) {
    const layout = sparseLayout(sizes, bits, refinement);
    const blocks = chooseBlocks(layout, policy, limit);
    const table = tableToffoli(layout.address.rows, layout.rowWidth, blocks);
    // The upper address bits widen the reflection too.
    const cost =
      table.read +
      table.erase +
      preparationToffoli(layout) +
      layout.address.highBits +
      layout.address.lowBits;
    if (best === null || cost < best.cost) best = { refinement, layout, blocks, cost };
  }
  return best!;
}

function chooseBlocks(layout: SparseLayout, { mode, block }: LookupPolicy, limit: number | null): Blocks {
  const { address, rowWidth } = layout;
  const { rows } = address;
  const largest = Math.min(2 ** addressBits(rows), limit ?? Number.POSITIVE_INFINITY);
  const cost = (read: number, erase: number) => tableToffoli(rows, rowWidth, { read, erase });
  const cheapest = () =>
    bestBlock(
      rows,
      (k) => cost(k, 1).read,
      (k) => k <= largest,
    );
  const reading = (): Omit<Blocks, 'erase'> => {
    if (mode === 'plain') return { read: 1 };
    if (mode === 'clean') return { read: block === 'auto' ? cheapest() : Math.min(block, largest) };
    const table = {
      width: rowWidth,
      limit: 2 ** addressBits(rows),
      idle: sparseIdleQubits(layout),
      blocksOf: (k: number) => Math.ceil(rows / k),
    };
    return borrowedBlocks(table, block === 'auto' ? null : block, limit);
  };
  const chosen = reading();
  const output = outputWires(rowWidth, { ...chosen, erase: 1 });
  return {
    ...chosen,
    // No more flags than the measured output has wires for.
    erase: bestBlock(
      rows,
      (k) => cost(1, k).erase,
      (k) => k <= output,
    ),
  };
}

function peak(node: Subroutine): number {
  const own = (node.registers ?? []).reduce((sum, register) => sum + register.qubits, 0);
  return own + Math.max(0, ...(node.children ?? []).map(peak));
}
