import type { StringsKind } from './kinds';
import { type Four, type HeldParts, type LinearForm, type Slot, SlotTable } from './linear-forms';

/**
 * Which Majorana products four orbitals give, whatever the orbitals are: tables that depend on nothing but which of
 * the four are equal and which parts the Hamiltonian has. A part of H is a sum over pairs of Hermitian one-body
 * elements; a product γ_aγ_bγ_cγ_d of four distinct Majorana operators gets something from each of its three pairings.
 *
 * Products of the same four modes (orbital and spin) that differ in their kinds x belong together. By symmetry under
 * a change of phase of all modes, U(1), their coefficients, up to signs, sum to zero among the four products of even
 * and among the four of odd Σx (first kind 0; the others follow by the rotation through π/2). So they are a sum of
 * differences of two, and each difference is a row that keeps the electron number: a product of two pair operators,
 * see {@link PatternRow}. Matching positive with negative coefficients makes the rows' weights sum to the one-norm.
 */

/** A row of one-norm 1, see {@link StringsKind}; its p, q, r, s are at `positions` of the quartet. */
export interface PatternRow {
  readonly positions: readonly [number, number, number, number];
  readonly kind: StringsKind;
  /** Weight of the row = |coefficient| · scale. */
  readonly scale: number;
  /** Sum of squares over the elements of g that the row stands for = weight² · square. */
  readonly square: number;
}

/** Products with one coefficient to be determined each. */
export interface PatternClass {
  /** Linear forms in the values of the slots: coefficient of the product, signs arranged so that they sum to 0. */
  readonly forms: readonly LinearForm[];
  /** Row of a product alone (one form), or row (i, j) at 4i + j: form i minus form j. */
  readonly rows: readonly (PatternRow | null)[];
  /** Sign of the row's operator against form i. */
  readonly signs: readonly (1 | -1)[];
}

export interface Pattern {
  readonly slots: readonly Slot[];
  readonly classes: readonly PatternClass[];
}

/**
 * @param equal - whether neighbours in the descending quartet p ≥ q ≥ r ≥ s are equal: bit 0 for p = q, bit 1 for
 *   q = r, bit 2 for r = s.
 */
export function buildPattern(equal: number, held: HeldParts): Pattern {
  const first = [0, 0, 0, 0];
  for (let i = 1; i < 4; i++) first[i] = (equal >>> (i - 1)) & 1 ? first[i - 1]! : i;
  const table = new SlotTable(first, held);
  const classes = [...modeSets(first)].flatMap(({ modes, copies }) => classesOf(modes, copies, table));
  return { slots: table.slots, classes };
}

interface Mode {
  readonly at: number;
  readonly spin: number;
}

/** All sets of four modes on the quartet, one of each two that a flip of all spins makes of one another. */
function* modeSets(first: readonly number[]): Generator<{ modes: Mode[]; copies: number }> {
  const seen = new Set<string>();
  for (let spins = 0; spins < 16; spins++) {
    const modes = first.map((at, i) => ({ at, spin: (spins >>> i) & 1 }));
    const flipped = modes.map(({ at, spin }) => ({ at, spin: 1 - spin }));
    const [key, partner] = [keyOf(modes), keyOf(flipped)];
    // No mode holds more than its two Majorana operators.
    const isPossible = modes.every(
      (a) => modes.filter((b) => a.at === b.at && a.spin === b.spin).length <= 2,
    );
    if (!isPossible || seen.has(key) || seen.has(partner)) continue;
    seen.add(key);
    yield { modes, copies: key === partner ? 1 : 2 };
  }
}

const keyOf = (modes: readonly Mode[]) =>
  modes
    .map(({ at, spin }) => 2 * at + spin)
    .sort((a, b) => a - b)
    .join();

function classesOf(given: readonly Mode[], copies: number, table: SlotTable): PatternClass[] {
  const isDoubled = (mode: Mode) => given.filter((m) => m.at === mode.at && m.spin === mode.spin).length > 1;
  // Modes that occur twice come first, each beside itself; the first mode has spin 0.
  const sorted = [...given].sort(
    (a, b) => Number(isDoubled(b)) - Number(isDoubled(a)) || a.at - b.at || a.spin - b.spin,
  );
  const [a, b, c, d] = sorted.map(({ at, spin }) => ({ at, spin: spin ^ sorted[0]!.spin })) as [
    Mode,
    Mode,
    Mode,
    Mode,
  ];
  const doubled = given.filter(isDoubled).length;
  if (doubled === 0) {
    return [0, 1].flatMap((parity) => {
      const found = differences([a, b, c, d], parity, copies, table);
      return found ? [found] : [];
    });
  }
  const kinds = doubled === 4 ? [1] : [0, 1];
  return kinds.flatMap((r2) => {
    const form = table.coefficient([
      { ...a, kind: 0 },
      { ...b, kind: 1 },
      { ...c, kind: 0 },
      { ...d, kind: r2 },
    ]);
    if (form.slots.length === 0) return [];
    const row = rowOf([a, b, c, d], 1, r2, (doubled === 4 ? 1 : 2) * copies, copies);
    return [{ forms: [form], rows: [row], signs: [1 as const] }];
  });
}

/** The three ways to make two pairs of a, b, c, d, and the sign of their product against that of (ab)(cd). */
const PAIRINGS = [
  { order: [0, 1, 2, 3], sign: 1 },
  { order: [0, 2, 1, 3], sign: -1 },
  { order: [0, 3, 1, 2], sign: 1 },
] as const;

/** Four distinct modes: the products of one parity of Σx, as differences. */
function differences(
  modes: readonly [Mode, Mode, Mode, Mode],
  parity: number,
  copies: number,
  table: SlotTable,
): PatternClass | null {
  const kinds = [0, 1, 2, 3].map((i) => [0, i & 1, i >>> 1, parity ^ (i & 1) ^ (i >>> 1)]);
  const indexOf = (of: readonly number[]) => of[1]! + 2 * of[2]!;
  const edges: { i: number; j: number; signI: 1 | -1; signJ: 1 | -1; row: PatternRow }[] = [];
  for (const { order, sign } of PAIRINGS) {
    for (const r1 of [0, 1]) {
      const r2 = parity ^ r1;
      const [i, j] = [0, 1].map((y) => {
        const x = [0, 0, 0, 0];
        x[order[1]] = r1;
        x[order[2]] = y;
        x[order[3]] = y ^ r2;
        return indexOf(x);
      }) as [number, number];
      const inOrder = order.map((m) => modes[m]!) as [Mode, Mode, Mode, Mode];
      const row = rowOf(inOrder, r1, r2, 4 * copies, copies);
      edges.push({ i, j, signI: sign, signJ: r2 === 1 ? (-sign as 1 | -1) : sign, row });
    }
  }
  // Signs that make every edge a difference.
  const signs: (1 | -1 | 0)[] = [1, 0, 0, 0];
  for (let round = 0; round < 3; round++) {
    for (const { i, j, signI, signJ } of edges) {
      if (signs[i] !== 0 && signs[j] === 0) signs[j] = (-signs[i]! * signI * signJ) as 1 | -1;
      else if (signs[j] !== 0 && signs[i] === 0) signs[i] = (-signs[j]! * signI * signJ) as 1 | -1;
    }
  }
  const rows: (PatternRow | null)[] = new Array(16).fill(null);
  const rowSigns: (1 | -1)[] = new Array(16).fill(1);
  for (const { i, j, signI, signJ, row } of edges) {
    if (signs[i]! * signI !== -signs[j]! * signJ) throw new Error('no signs make these products differences');
    rows[4 * i + j] = row;
    rowSigns[4 * i + j] = (signs[i]! * signI) as 1 | -1;
    rows[4 * j + i] = row;
    rowSigns[4 * j + i] = (signs[j]! * signJ) as 1 | -1;
  }
  const forms = kinds.map((of, i) => {
    const four = modes.map((mode, m) => ({ ...mode, kind: of[m]! })) as unknown as Four;
    const form = table.coefficient(four);
    return { ...form, factors: form.factors.map((factor) => factor * signs[i]!) };
  });
  return forms.every((form) => form.slots.length === 0) ? null : { forms, rows, signs: rowSigns };
}

function rowOf(
  [a, b, c, d]: readonly [Mode, Mode, Mode, Mode],
  r1: number,
  r2: number,
  scale: number,
  copies: number,
): PatternRow {
  const flags = (a.spin ^ b.spin) + 2 * (c.spin ^ d.spin) + 4 * (a.spin ^ c.spin) + 8 * r1 + 16 * r2;
  // A pair of two modes has two elements of size 1, a mode with itself one of size 2.
  const elements = (x: Mode, y: Mode) => (x.at === y.at && x.spin === y.spin ? 4 : 2);
  const square = (elements(a, b) * elements(c, d)) / (2 * copies);
  return { positions: [a.at, b.at, c.at, d.at], kind: STRINGS[flags]!, scale, square };
}

/** All kinds of strings, one object each. */
const STRINGS: readonly StringsKind[] = Array.from({ length: 32 }, (_, flags) => ({
  form: 'strings',
  flags,
}));
