import type { SpinorSizes } from '../../encode';
import { countBlocks, lookUpToffoli } from '../primitives/look-up';
import type { Subroutine } from '../recipe';
import type { LookupPolicy } from '../recipes/scope';
import { chooseTableBlocks } from '../squares/blocks';
import { idleQubits, squaresTables } from '../squares/recipe';
import { phaseEstimationPart, type StepBits, withinCap } from '../squares/step';
import type { KeepBits } from '../squares/tables';
import { ANGLE_GROUPS, type AngleGroup, type Merge, type SpinorLayout, spinorLayout } from './layout';
import { spinorPlus, spinorRecipe } from './recipe';
import type { SpinorBlocks } from './walk';

/** A recipe, and what its circuit is to be emitted with. */
export interface SpinorStep {
  readonly recipe: Subroutine;
  readonly layout: SpinorLayout;
  readonly blocks: SpinorBlocks;
}

/** The walk step of a spinor encoding at its cheapest tables and blocks, inside the registers of phase estimation. */
export function spinorStep(
  sizes: SpinorSizes,
  { keepBits, rotationBits, phaseBits }: StepBits,
  policy: LookupPolicy,
): SpinorStep {
  const bits = { keep: keepBits, innerKeep: keepBits };
  const phase = phaseEstimationPart(phaseBits);
  return withinCap(
    (limit) => {
      const chosen = chooseSpinorTables(sizes, { ...bits, rotation: rotationBits }, policy, limit);
      return { ...chosen, recipe: spinorRecipe(chosen.layout, bits, chosen.blocks, phase) };
    },
    ({ layout, blocks }) => layout.rowWidth * blocks.rows.read,
    policy.qubitCap,
  );
}

/**
 * Which groups of angles to merge into the main table, and all blocks, with the fewest Toffoli. A table of its own is
 * read less often; a merged one shares the iteration over the rows.
 */
export function chooseSpinorTables(
  sizes: SpinorSizes,
  bits: KeepBits & { readonly rotation: number },
  policy: Pick<LookupPolicy, 'mode' | 'block'>,
  limit: number | null,
): Pick<SpinorStep, 'layout' | 'blocks'> {
  const options: Merge[][] = [[], ['phases'], ['shared phases'], ['spins'], [...ANGLE_GROUPS]];
  let best: (Pick<SpinorStep, 'layout' | 'blocks'> & { toffoli: number }) | null = null;
  for (const merge of options) {
    const layout = spinorLayout(sizes, bits.rotation, merge);
    // The second use could not leave out what the main table holds.
    if (layout.spinUses === 'first' && merge.includes('spins')) continue;
    const blocks = chooseBlocks(layout, bits, policy, limit);
    const toffoli = readToffoli(layout, blocks);
    if (best === null || toffoli < best.toffoli) best = { layout, blocks, toffoli };
  }
  return best!;
}

function chooseBlocks(
  layout: SpinorLayout,
  bits: KeepBits,
  policy: Pick<LookupPolicy, 'mode' | 'block'>,
  limit: number | null,
): SpinorBlocks {
  const { outer, items, inner } = squaresTables(layout, bits, layout.flags.length);
  // Angle tables are wider than what is idle: they are not read through borrowed wires.
  const idle = idleQubits(layout, bits, 2 * layout.orbitals, spinorPlus(layout));
  const largest = 2 ** layout.rowBits;
  const rows = { addresses: layout.rowAddresses, width: layout.rowWidth, limit: largest, main: true };
  const group = (name: AngleGroup) => {
    const table = layout.tables.get(name);
    return table ? chooseTableBlocks({ ...table, limit: largest, controlled: true }, policy, limit).read : 1;
  };
  return {
    outer: chooseTableBlocks({ ...outer, idle: idle.outer }, policy, limit),
    items: chooseTableBlocks({ ...items, idle: idle.items }, policy, limit),
    inner: chooseTableBlocks({ ...inner, idle: idle.inner }, policy, limit),
    rows: chooseTableBlocks(rows, policy, limit),
    groups: { phases: group('phases'), spins: group('spins') },
  };
}

/** Of reading the angles once and taking shared phases apart. */
function readToffoli(
  { rowAddresses, rowWidth, tables, orbitals, sharedBits }: SpinorLayout,
  { rows, groups }: SpinorBlocks,
): number {
  let sum = lookUpToffoli(countBlocks(rowAddresses, rows.read), rowWidth, rows.read);
  for (const [group, { addresses, width }] of tables) {
    const k = groups[group];
    sum += lookUpToffoli(countBlocks(addresses, k), width, k, true);
  }
  return sum + (orbitals - 1) * sharedBits;
}
