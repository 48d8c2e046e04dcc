import { type AXES, formatVariant, type VariantName } from '../../core/encode/variant';

export type Axis = keyof typeof AXES;
export const AXIS_NAMES = [
  'factorisation',
  'grouping',
  'spin',
  'shift',
  'lookup',
] as const satisfies readonly Axis[];

/** How the window spells the axes and their values. */
export const AXIS_WORDS: Readonly<Record<Axis, string>> = {
  factorisation: 'factorisation',
  grouping: 'grouping',
  spin: 'spin',
  shift: 'shift',
  lookup: 'look-up',
};
export const VALUE_WORDS: Readonly<Record<string, string>> = {
  index: 'in index',
  'swap-layers': 'swap layers',
};

/** Values that can be reckoned today; the others have no encoding yet. */
export const OFFERED: Readonly<Record<Axis, readonly string[]>> = {
  factorisation: ['sparse', 'triplet', 'spinor'],
  grouping: ['joint', 'separate'],
  spin: ['index', 'swap-layers'],
  shift: ['none', 'median'],
  lookup: ['plain', 'clean', 'dirty'],
};

export function parseName(name: string): VariantName {
  const [factorisation, grouping, spin, shift, lookup] = name.split('/');
  return { factorisation, grouping, spin, shift, lookup } as VariantName;
}

/** Why a combination of values is no variant, or null where it is sound. */
export function whyNot({ factorisation, grouping, spin, shift }: VariantName): string | null {
  if (factorisation === 'sparse') {
    if (grouping !== '-') return 'sparse coefficients are not grouped';
    if (spin !== 'index') return 'sparse + swap layers has no second form';
    return shift === 'none' ? null : 'the median shift needs factors';
  }
  if (grouping === '-') return 'factors are joint or separate';
  if (factorisation === 'spinor') {
    if (spin !== 'index') return 'spinor + swap layers has no second form';
    if (grouping === 'joint') return 'spinor factors are built from the separate blocks';
  }
  return null;
}

const all = (axis: Axis): readonly string[] => OFFERED[axis];

/** Every sound variant with the given values, all offered ones where an axis is not given. */
export function product(chosen: Readonly<Partial<Record<Axis, readonly string[]>>>): string[] {
  const names = new Set<string>();
  const pick = (axis: Axis) => chosen[axis] ?? all(axis);
  for (const factorisation of pick('factorisation')) {
    const sparse = factorisation === 'sparse';
    // An axis without meaning for the factorisation takes its only value instead of being crossed.
    for (const grouping of sparse ? ['-'] : pick('grouping'))
      for (const spin of factorisation === 'triplet' ? pick('spin') : ['index'])
        for (const shift of sparse ? ['none'] : pick('shift'))
          for (const lookup of pick('lookup')) {
            const name = { factorisation, grouping, spin, shift, lookup } as VariantName;
            if (whyNot(name) === null) names.add(formatVariant(name));
          }
  }
  return [...names];
}

/** Values of an axis that occur among the names. */
export function valuesIn(names: readonly string[], axis: Axis): string[] {
  const used = new Set(names.map((name) => parseName(name)[axis] as string));
  return all(axis).filter((value) => used.has(value));
}

/** The names after one word of an axis was switched: on adds its combinations with the words in use, off removes them. */
export function toggled(names: readonly string[], axis: Axis, value: string): string[] {
  if (valuesIn(names, axis).includes(value)) {
    return names.filter((name) => parseName(name)[axis] !== value);
  }
  const chosen: Partial<Record<Axis, readonly string[]>> = {};
  for (const each of AXIS_NAMES) {
    const used = valuesIn(names, each);
    if (used.length) chosen[each] = used;
  }
  const added = product({ ...chosen, [axis]: [value] });
  return [...names, ...added.filter((name) => !names.includes(name))];
}

/** The variants that are compared where nothing else was asked for. */
export const USUAL: readonly string[] = [
  'triplet/joint/index/median/clean',
  'triplet/joint/swap-layers/median/clean',
  'triplet/separate/index/median/clean',
  'triplet/separate/swap-layers/median/clean',
  'triplet/separate/swap-layers/none/clean',
  'spinor/separate/index/median/clean',
  'sparse/-/index/none/clean',
];
