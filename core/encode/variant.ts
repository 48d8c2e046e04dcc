/** Axes of a variant. A name is `factorisation/grouping/spin/shift/lookup`. */
export const AXES = {
  factorisation: ['sparse', 'triplet', 'spinor', 'compressed', 'hypercontracted', 'mixed'],
  grouping: ['joint', 'separate', '-'],
  spin: ['index', 'swap-layers'],
  shift: ['none', 'median', 'optimised'],
  lookup: ['plain', 'clean', 'dirty'],
} as const;

export type FactorisationAxis = (typeof AXES.factorisation)[number];
export type GroupingAxis = (typeof AXES.grouping)[number];
export type SpinAxis = (typeof AXES.spin)[number];
export type ShiftAxis = (typeof AXES.shift)[number];
export type LookupAxis = (typeof AXES.lookup)[number];

export interface VariantName {
  readonly factorisation: FactorisationAxis;
  readonly grouping: GroupingAxis;
  readonly spin: SpinAxis;
  readonly shift: ShiftAxis;
  readonly lookup: LookupAxis;
}

/** `triplet/joint/swap-layers/median/clean` and the like. */
export function formatVariant(name: VariantName): string {
  return `${name.factorisation}/${name.grouping}/${name.spin}/${name.shift}/${name.lookup}`;
}
