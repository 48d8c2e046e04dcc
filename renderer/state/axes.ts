import { AXES, DEFAULT_VARIANTS, expandVariants, formatVariant, parseVariant } from '../../core/encode';
import { InputError } from '../../core/job';

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
  '-': 'no grouping',
  index: 'in index',
  'swap-layers': 'swap layers',
};

/** Values that can be reckoned today; the others have no encoding yet. */
export const OFFERED: Readonly<Record<Axis, readonly string[]>> = {
  factorisation: ['sparse', 'triplet', 'compressed', 'hypercontracted', 'mixed', 'spinor'],
  grouping: ['joint', 'separate', '-'],
  spin: ['index', 'swap-layers'],
  shift: ['none', 'median', 'optimised'],
  lookup: ['plain', 'clean', 'dirty'],
};

/** The variants that are compared where nothing else was asked for. */
export const USUAL: readonly string[] = DEFAULT_VARIANTS.map(formatVariant);

/** Why a name is no variant, or null where it is sound. */
export function whyNot(name: string): string | null {
  try {
    parseVariant(name);
    return null;
  } catch (error) {
    if (error instanceof InputError) return error.found;
    throw error;
  }
}

/** Every sound variant with the given values, all offered ones where an axis is not given. */
export function product(chosen: Readonly<Partial<Record<Axis, readonly string[]>>>): string[] {
  const names = new Set<string>();
  for (const factorisation of chosen.factorisation ?? OFFERED.factorisation) {
    const [groupings, spins, shifts, lookups] = AXIS_NAMES.slice(1).map((axis) => {
      const sound = soundValues(factorisation, axis);
      const fitting = sound.filter((value) => (chosen[axis] ?? sound).includes(value));
      // Where nothing chosen fits the factorisation, it takes its first (or only) value instead of being left out.
      return fitting.length > 0 ? fitting : sound.slice(0, 1);
    }) as [string[], string[], string[], string[]];
    for (const grouping of groupings)
      for (const spin of spins)
        for (const shift of shifts)
          for (const lookup of lookups) {
            const name = [factorisation, grouping, spin, shift, lookup].join('/');
            if (whyNot(name) === null) names.add(name);
          }
  }
  return [...names];
}

/** Values of an axis that some sound variant of a factorisation has. */
function soundValues(factorisation: string, axis: Axis): string[] {
  const patterns = AXES[axis].map((value) =>
    AXIS_NAMES.map((own) => (own === 'factorisation' ? factorisation : own === axis ? value : '*')).join('/'),
  );
  return AXES[axis].filter((_, i) => {
    try {
      return expandVariants(patterns[i]!).length > 0;
    } catch (error) {
      if (error instanceof InputError) return false;
      throw error;
    }
  });
}

const wordOf = (name: string, axis: Axis) => name.split('/')[AXIS_NAMES.indexOf(axis)]!;

/** Values of an axis that occur among the names, in the order they are offered. */
export function valuesIn(names: readonly string[], axis: Axis): string[] {
  const used = new Set(names.map((name) => wordOf(name, axis)));
  return OFFERED[axis].filter((value) => used.has(value));
}

/**
 * The names after one word of an axis was switched: on adds its combinations with the words in use, off removes
 * every name that has it.
 */
export function toggled(names: readonly string[], axis: Axis, value: string): string[] {
  if (valuesIn(names, axis).includes(value)) return names.filter((name) => wordOf(name, axis) !== value);
  const chosen: Partial<Record<Axis, readonly string[]>> = {};
  for (const each of AXIS_NAMES) {
    const used = valuesIn(names, each);
    if (used.length) chosen[each] = used;
  }
  const added = product({ ...chosen, [axis]: [value] }).filter((name) => wordOf(name, axis) === value);
  return [...names, ...added.filter((name) => !names.includes(name))];
}
