import { SPINOR_KINDS, type SpinorSizes } from '../../encode';
import { raggedAddresses } from '../squares/indexing';
import { type SquaresLayout, squaresLayout } from '../squares/layout';

/**
 * Groups of angles beside those of the chain that only some rows have: phases of the orbitals (rows that are not
 * real), spins of the orbitals (rows over all 2N modes).
 */
export const ANGLE_GROUPS = ['phases', 'spins'] as const;
export type AngleGroup = (typeof ANGLE_GROUPS)[number];

/**
 * What may stand in the main table: groups of angles, or the phases in the low bits of the chain, which axial rows do
 * without where they have fewer angle bits than others.
 */
export type Merge = AngleGroup | 'shared phases';

/** A table that adds a group of angles to the rows that have it. */
export interface GroupTable {
  readonly width: number;
  readonly addresses: Uint32Array;
}

/** Bits of an item beside the common ones; a layout lists those it needs. */
export type ItemFlag =
  /** Rows with phases, in any use, and in squares alone; likewise with spins. */
  | 'phases'
  | 'phases of a square'
  | 'spins'
  | 'spins of a square'
  /** The spin axis is not z; it is y. */
  | 'tilted'
  | 'along y'
  /** Partners count with the opposite sign on the first face. */
  | 'odd'
  /** The second face has another sign. */
  | 'sign change';

/** Addresses and widths of the tables of a spinor walk, from sizes alone: those of the tables that are filled. */
export interface SpinorLayout extends SquaresLayout {
  readonly orbitals: number;
  readonly partners: boolean;
  readonly oneBodyItems: number;
  readonly angleBits: number;
  /** Bits of a phase, and of a chain's angle in axial rows: the upper ones. Fewer than `angleBits`, or as many. */
  readonly phaseBits: number;
  /** In which uses of the rows the spins of orbitals are turned: in the first alone where only κ has any. */
  readonly spinUses: 'none' | 'first' | 'both';
  readonly hasPhases: boolean;
  /** Whether some items have a spin axis of their own. */
  readonly hasAxes: boolean;
  /** One angle of the chain in the main table, and what of a shared phase does not fit its low bits. */
  readonly wordBits: number;
  /** Low bits of a chain's angle that hold a phase in axial rows. */
  readonly sharedBits: number;
  /** Words of the chain. */
  readonly chainWidth: number;
  /** Everything in the main table: chain, merged groups, signs. */
  readonly rowWidth: number;
  /** What stands in the main table beside the chain. */
  readonly merged: readonly Merge[];
  /** The others. */
  readonly tables: ReadonlyMap<AngleGroup, GroupTable>;
  readonly flags: readonly ItemFlag[];
}

/** Angle registers of a group. */
export const groupAngles = (group: AngleGroup, orbitals: number): number =>
  group === 'phases' ? orbitals - 1 : 2 * orbitals;

type Widths = Pick<SpinorLayout, 'orbitals' | 'angleBits' | 'phaseBits'>;

/** Bits of each of them. */
export const groupBits = (group: AngleGroup, { angleBits, phaseBits }: Widths): number =>
  group === 'phases' ? phaseBits : angleBits;

const groupWidth = (group: AngleGroup, widths: Widths): number =>
  groupAngles(group, widths.orbitals) * groupBits(group, widths);

/** Coarsest angles of axial rows: 2π/16. */
const LEAST_BITS = 4;

/**
 * @param rotation - b: angles on the grid 2π/2^b
 * @param merge - what to put into the main table; what no row has is left out
 */
export function spinorLayout(sizes: SpinorSizes, rotation: number, merge: readonly Merge[]): SpinorLayout {
  const { orbitals, kinds, rows, partners, oneBodyItems } = sizes;
  const squares = squaresLayout(sizes);
  const real = SPINOR_KINDS.indexOf('real');
  const full = SPINOR_KINDS.indexOf('full');
  const inSquares = kinds.subarray(0, kinds.length - oneBodyItems).includes(full);
  const spinUses = inSquares ? 'both' : kinds.includes(full) ? 'first' : 'none';
  const hasPhases = orbitals > 1 && kinds.some((kind) => kind !== real);
  const has = { phases: hasPhases, spins: spinUses !== 'none' };
  const angleBits = rotation - 1;
  // Rows over all modes have phases too, to all bits.
  const fewer = spinUses === 'none' ? Math.min(sizes.spared, Math.max(0, rotation - LEAST_BITS)) : 0;
  const phaseBits = angleBits - fewer;
  const widths = { orbitals, angleBits, phaseBits };
  const sharesPhases = hasPhases && fewer > 0 && merge.includes('shared phases');
  const wordBits = sharesPhases ? Math.max(angleBits, 2 * phaseBits) : angleBits;
  const chainWidth = (orbitals - 1) * wordBits;
  const inMain = (group: AngleGroup) => merge.includes(group) || (group === 'phases' && sharesPhases);
  const groups = ANGLE_GROUPS.filter(
    (group) => has[group] && merge.includes(group) && !(group === 'phases' && sharesPhases),
  );
  const merged: Merge[] = sharesPhases ? ['shared phases', ...groups] : groups;
  const owns = {
    phases: (t: number) => kinds[t] !== real,
    spins: (t: number) => kinds[t] === full,
  };
  const tables = new Map(
    ANGLE_GROUPS.filter((group) => has[group] && !inMain(group)).map((group) => [
      group,
      { width: groupWidth(group, widths), addresses: raggedAddresses(rows, squares.bases, owns[group]) },
    ]),
  );
  const hasAxes = kinds.includes(SPINOR_KINDS.indexOf('axial'));
  const flags: ItemFlag[] = [];
  if (tables.has('phases') || sharesPhases) flags.push('phases');
  if (tables.has('phases')) flags.push('phases of a square');
  if (tables.has('spins')) flags.push('spins');
  if (tables.has('spins') && spinUses === 'both') flags.push('spins of a square');
  if (hasAxes) flags.push('tilted', 'along y');
  if (partners && kinds.some((kind) => kind !== real)) flags.push('odd');
  if (squares.hasFaces) flags.push('sign change');
  return {
    ...squares,
    orbitals,
    partners,
    oneBodyItems,
    angleBits,
    phaseBits,
    spinUses,
    hasPhases,
    hasAxes,
    wordBits,
    sharedBits: sharesPhases ? Math.min(fewer, phaseBits) : 0,
    chainWidth,
    rowWidth:
      chainWidth +
      groups.reduce((sum, group) => sum + groupWidth(group, widths), 0) +
      1 +
      (squares.hasFaces ? 1 : 0),
    merged,
    tables,
    flags,
  };
}
