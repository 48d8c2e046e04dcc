import { SPINOR_KINDS, type SpinorSizes } from '../../encode';
import { raggedAddresses, type SquaresLayout, squaresLayout } from '../squares/layout';

/**
 * Groups of angles beside those of the chain that only some rows have: phases of the orbitals (rows that are not
 * real), spins of the orbitals (rows over all 2N modes).
 */
export const ANGLE_GROUPS = ['phases', 'spins'] as const;
export type AngleGroup = (typeof ANGLE_GROUPS)[number];

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
  /** In which uses of the rows the spins of orbitals are turned: in the first alone where only κ has any. */
  readonly spinUses: 'none' | 'first' | 'both';
  readonly hasPhases: boolean;
  /** Whether some items have a spin axis of their own. */
  readonly hasAxes: boolean;
  /** Angles of the chain. */
  readonly chainWidth: number;
  /** Everything in the main table: chain, merged groups, signs. */
  readonly rowWidth: number;
  /** Groups that stand in the main table, in order. */
  readonly merged: readonly AngleGroup[];
  /** The others. */
  readonly tables: ReadonlyMap<AngleGroup, GroupTable>;
  readonly flags: readonly ItemFlag[];
}

/** Angle registers of a group. */
export const groupAngles = (group: AngleGroup, orbitals: number): number =>
  group === 'phases' ? orbitals - 1 : 2 * orbitals;

/**
 * @param rotation - b: angles on the grid 2π/2^b
 * @param merge - groups to put into the main table; those that no row has are left out
 */
export function spinorLayout(
  sizes: SpinorSizes,
  rotation: number,
  merge: readonly AngleGroup[],
): SpinorLayout {
  const { orbitals, kinds, rows, partners, oneBodyItems } = sizes;
  const squares = squaresLayout(sizes);
  const real = SPINOR_KINDS.indexOf('real');
  const full = SPINOR_KINDS.indexOf('full');
  const inSquares = kinds.subarray(0, kinds.length - oneBodyItems).includes(full);
  const spinUses = inSquares ? 'both' : kinds.includes(full) ? 'first' : 'none';
  const hasPhases = orbitals > 1 && kinds.some((kind) => kind !== real);
  const has = { phases: hasPhases, spins: spinUses !== 'none' };
  const angleBits = rotation - 1;
  const chainWidth = (orbitals - 1) * angleBits;
  const width = (group: AngleGroup) => groupAngles(group, orbitals) * angleBits;
  const merged = ANGLE_GROUPS.filter((group) => has[group] && merge.includes(group));
  const owns = {
    phases: (t: number) => kinds[t] !== real,
    spins: (t: number) => kinds[t] === full,
  };
  const tables = new Map(
    ANGLE_GROUPS.filter((group) => has[group] && !merge.includes(group)).map((group) => [
      group,
      { width: width(group), addresses: raggedAddresses(rows, squares.rowBits, owns[group]) },
    ]),
  );
  const hasAxes = kinds.includes(SPINOR_KINDS.indexOf('axial'));
  const flags: ItemFlag[] = [];
  if (tables.has('phases')) flags.push('phases', 'phases of a square');
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
    spinUses,
    hasPhases,
    hasAxes,
    chainWidth,
    rowWidth:
      chainWidth + merged.reduce((sum, group) => sum + width(group), 0) + 1 + (squares.hasFaces ? 1 : 0),
    merged,
    tables,
    flags,
  };
}
