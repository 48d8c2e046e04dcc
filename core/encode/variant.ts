import { InputError } from '../job';

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

const AXIS_NAMES = ['factorisation', 'grouping', 'spin', 'shift', 'lookup'] as const;

/** What `compare` puts side by side when no variants are named. */
export const DEFAULT_VARIANTS: readonly VariantName[] = [
  'triplet/joint/index/median/clean',
  'triplet/joint/swap-layers/median/clean',
  'triplet/separate/index/median/clean',
  'triplet/separate/swap-layers/median/clean',
  'triplet/separate/swap-layers/none/clean',
  'spinor/separate/index/median/clean',
  'sparse/-/index/optimised/clean',
  // Last: it takes longest.
  'mixed/separate/swap-layers/optimised/clean',
].map((text) => parseVariant(text));

/** `triplet/joint/swap-layers/median/clean` and the like. */
export function formatVariant(name: VariantName): string {
  return AXIS_NAMES.map((axis) => name[axis]).join('/');
}

/** Why a combination cannot be had, as found, expected and mend; null where it can. */
function objection(name: VariantName): { found: string; expected: string; mend: string } | null {
  const { factorisation, grouping, spin, shift } = name;
  if (factorisation === 'hypercontracted' && (grouping !== 'separate' || shift === 'median')) {
    return {
      found: `grouping "${grouping}" and shift "${shift}" with a hypercontracted charge part`,
      expected:
        'separate, and none or optimised: the fit has a shift of its own, and no factors with medians',
      mend: 'Write hypercontracted/separate/…/optimised/….',
    };
  }
  if (factorisation === 'mixed' && (grouping !== 'separate' || shift !== 'optimised')) {
    return {
      found: `grouping "${grouping}" and shift "${shift}" with a mixed encoding`,
      expected: 'separate and optimised: every part has its own treatment',
      mend: 'Write mixed/separate/…/optimised/….',
    };
  }
  if (factorisation === 'compressed' && shift !== 'optimised') {
    return {
      found: `shift "${shift}" with compressed factors`,
      expected: 'optimised: factors are optimised together with their shifts',
      mend: 'Write compressed/…/optimised/….',
    };
  }
  if (factorisation === 'sparse') {
    if (grouping === 'separate') {
      return {
        found: 'grouping "separate" with the sparse form, which has no factors to keep apart',
        expected: 'grouping "-", or "joint": equal Majorana products joined in all parts',
        mend: 'Write sparse/-/… or sparse/joint/….',
      };
    }
    if (spin !== 'index') {
      return {
        found: 'swap layers with the sparse form, which rotates nothing that they could halve',
        expected: 'spin "index"',
        mend: 'Write sparse/-/index/….',
      };
    }
    if (shift === 'median') {
      return {
        found: 'shift "median" with the sparse form: it acts on the eigenvalues of factors',
        expected: 'shift "none" or "optimised"',
        mend: 'Write sparse/-/index/none/… or sparse/-/index/optimised/….',
      };
    }
    return null;
  }
  if (grouping === '-') {
    return {
      found: `grouping "-" with ${factorisation} factors`,
      expected: 'joint or separate',
      mend: 'Only the sparse form has no grouping.',
    };
  }
  if (factorisation === 'spinor' && spin !== 'index') {
    return {
      found: 'swap layers with spinor factors, whose vectors mix both spins',
      expected: 'spin "index"',
      mend: 'Swap layers exchange spins that a rotation keeps apart; use triplet factors for them.',
    };
  }
  return null;
}

function refuse(text: string, problem: { found: string; expected: string; mend: string }): never {
  throw new InputError({ code: 'bad-variant', where: `variant "${text}"`, ...problem });
}

/** Values of each axis that a pattern names. */
function axesOf(text: string): readonly (readonly string[])[] {
  const words = text.trim().split('/');
  if (words.length !== AXIS_NAMES.length) {
    refuse(text, {
      found: `${words.length} part${words.length === 1 ? '' : 's'}`,
      expected: 'five parts, factorisation/grouping/spin/shift/lookup',
      mend: 'For example triplet/joint/swap-layers/median/clean.',
    });
  }
  return words.map((word, i) => {
    const axis = AXIS_NAMES[i]!;
    const allowed: readonly string[] = AXES[axis];
    if (word === '*') return allowed;
    if (!allowed.includes(word)) {
      refuse(text, {
        found: `${axis} "${word}"`,
        expected: `one of ${allowed.join(', ')} or *`,
        mend: 'Correct the word.',
      });
    }
    return [word];
  });
}

function product(axes: readonly (readonly string[])[]): VariantName[] {
  const [factorisations, groupings, spins, shifts, lookups] = axes as unknown as [
    FactorisationAxis[],
    GroupingAxis[],
    SpinAxis[],
    ShiftAxis[],
    LookupAxis[],
  ];
  return factorisations.flatMap((factorisation) =>
    groupings.flatMap((grouping) =>
      spins.flatMap((spin) =>
        shifts.flatMap((shift) =>
          lookups.map((lookup) => ({ factorisation, grouping, spin, shift, lookup })),
        ),
      ),
    ),
  );
}

/**
 * One variant by its full name.
 *
 * @throws InputError `bad-variant` for an unknown word, a `*`, or a combination that makes no sense, with the reason.
 */
export function parseVariant(text: string): VariantName {
  const names = product(axesOf(text));
  if (names.length !== 1) {
    refuse(text, { found: '"*"', expected: 'one value for each axis', mend: 'Name the value.' });
  }
  const problem = objection(names[0]!);
  if (problem) refuse(text, problem);
  return names[0]!;
}

/**
 * Comma list of names; `*` stands for all values of an axis that make sense together with the others. Each variant
 * comes once, in the order of first mention.
 *
 * @throws InputError `bad-variant` also where a pattern leaves nothing.
 */
export function expandVariants(list: string): VariantName[] {
  const found = new Map<string, VariantName>();
  for (const text of list.split(',').map((word) => word.trim())) {
    if (text === '') continue;
    const names = product(axesOf(text));
    const sound = names.filter((name) => objection(name) === null);
    if (sound.length === 0) refuse(text, objection(names[0]!)!);
    for (const name of sound) found.set(formatVariant(name), name);
  }
  if (found.size === 0) {
    refuse(list, {
      found: 'no name',
      expected: 'a comma list of variants',
      mend: 'Leave the option out for the default list.',
    });
  }
  return [...found.values()];
}
