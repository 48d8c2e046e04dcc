import type { SpatialHamiltonian } from '../../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../../integrals/integral-set';
import type { HeldParts, LinearForm, Slot } from './linear-forms';
import { buildPattern, type Pattern, type PatternRow } from './patterns';
import { emptyRow, ROW_PARTS, type RowSource, type SparseRow } from './rows';

/** Coefficients up to this part of what they are summed from are rounding. */
const ROUNDING = 1e-14;

/** The rows of Majorana products over quartets of orbitals, equal products joined before their norm is taken. */
export class Quartets {
  readonly parts: readonly string[];
  readonly #patterns: readonly CompiledPattern[];
  readonly #row: SparseRow;
  readonly #shares = new Float64Array(ROW_PARTS.length);
  readonly #coefficients = new Float64Array(4);
  /** Where the row last told of comes from. */
  #class: CompiledClass | null = null;
  #values: Float64Array = new Float64Array(0);

  constructor(hamiltonian: SpatialHamiltonian) {
    const held = heldParts(hamiltonian);
    this.#patterns = Array.from({ length: 8 }, (_, equal) => compile(buildPattern(equal, held), hamiltonian));
    this.parts = [
      ...(held.charge ? ['coulomb'] : []),
      ...(held.spinOrbit === null ? [] : ['same-orbit', 'other-orbit']),
      ...(held.spinSpin ? ['spin-spin'] : []),
    ];
    const shares = () => this.#sharesOfRow();
    this.#row = {
      ...emptyRow(),
      // Few passes ask for them.
      get parts() {
        return shares();
      },
    };
  }

  /** Visits the rows of one quartet p ≥ q ≥ r ≥ s. */
  visit(quartet: Int32Array, visitor: (row: SparseRow) => void): void {
    const [p, q, r, s] = quartet as unknown as [number, number, number, number];
    const equal = (p === q ? 1 : 0) | (q === r ? 2 : 0) | (r === s ? 4 : 0);
    const { fetch, values, classes } = this.#patterns[equal]!;
    for (let i = 0; i < fetch.length; i++) values[i] = fetch[i]!(quartet);
    this.#values = values;
    for (const own of classes) this.#visitClass(own, values, quartet, visitor);
  }

  /** What each part put into the products of the row's class, as shares. */
  #sharesOfRow(): Float64Array {
    const { terms } = this.#class!;
    const shares = this.#shares.fill(0);
    let total = 0;
    for (let e = 0; e < terms.parts.length; e++) {
      const term = Math.abs(terms.factors[e]! * this.#values[terms.slots[e]!]!);
      shares[terms.parts[e]!]! += term;
      total += term;
    }
    for (let part = 0; part < shares.length; part++) shares[part]! /= total;
    return shares;
  }

  #visitClass(
    own: CompiledClass,
    values: Float64Array,
    quartet: Int32Array,
    visitor: (row: SparseRow) => void,
  ): void {
    const { rows, signs, start, slots, factors } = own;
    const coefficients = this.#coefficients;
    const count = start.length - 1;
    let total = 0;
    for (let i = 0; i < count; i++) {
      let sum = 0;
      for (let e = start[i]!; e < start[i + 1]!; e++) {
        const term = factors[e]! * values[slots[e]!]!;
        sum += term;
        total += Math.abs(term);
      }
      coefficients[i] = sum;
    }
    if (total === 0) return;
    this.#class = own;
    const noise = ROUNDING * total;
    if (count === 1) {
      const amount = Math.abs(coefficients[0]!);
      if (amount > noise) this.#tell(rows[0]!, amount, coefficients[0]! < 0, quartet, visitor);
      return;
    }
    // Positive coefficients matched with negative ones, heaviest first: at most three differences.
    for (let round = 0; round < 3; round++) {
      let high = 0;
      let low = 0;
      for (let i = 1; i < 4; i++) {
        if (coefficients[i]! > coefficients[high]!) high = i;
        if (coefficients[i]! < coefficients[low]!) low = i;
      }
      const amount = Math.min(coefficients[high]!, -coefficients[low]!);
      if (!(amount > noise)) break;
      coefficients[high]! -= amount;
      coefficients[low]! += amount;
      const edge = 4 * high + low;
      this.#tell(rows[edge]!, amount, signs[edge]! < 0, quartet, visitor);
    }
  }

  #tell(
    { positions, kind, scale, square }: PatternRow,
    amount: number,
    isNegative: boolean,
    quartet: Int32Array,
    visitor: (row: SparseRow) => void,
  ): void {
    const row = this.#row;
    row.weight = amount * scale;
    row.isNegative = isNegative;
    row.kind = kind;
    row.p = quartet[positions[0]]!;
    row.q = quartet[positions[1]]!;
    row.r = quartet[positions[2]]!;
    row.s = quartet[positions[3]]!;
    row.square = square * row.weight * row.weight;
    visitor(row);
  }
}

/** Calls `visit` for every p ≥ q ≥ r ≥ s, with a step after each p, q. */
export function* forQuartets(orbitals: number, visit: (quartet: Int32Array) => void): Generator<void> {
  const quartet = new Int32Array(4);
  for (let p = 0; p < orbitals; p++) {
    for (let q = 0; q <= p; q++) {
      for (let r = 0; r <= q; r++) {
        for (let s = 0; s <= r; s++) {
          quartet[0] = p;
          quartet[1] = q;
          quartet[2] = r;
          quartet[3] = s;
          visit(quartet);
        }
      }
      yield;
    }
  }
}

/** The whole two-body part, equal Majorana products joined. */
export function joinedRows(hamiltonian: SpatialHamiltonian): RowSource {
  const quartets = new Quartets(hamiltonian);
  return {
    parts: quartets.parts,
    visit: (visitor) => forQuartets(hamiltonian.orbitals, (quartet) => quartets.visit(quartet, visitor)),
  };
}

function heldParts({ g }: SpatialHamiltonian): HeldParts {
  const other = g.spinOrbit?.other;
  return {
    charge: g.charge !== null,
    spinOrbit: other === undefined ? null : other instanceof Float64Array ? 'independent' : other.timesSame,
    spinSpin: g.spinSpin !== null,
  };
}

interface CompiledPattern {
  readonly fetch: readonly ((quartet: Int32Array) => number)[];
  readonly values: Float64Array;
  readonly classes: readonly CompiledClass[];
}

interface CompiledClass {
  readonly rows: readonly (PatternRow | null)[];
  readonly signs: readonly (1 | -1)[];
  /** Terms of form i are start[i] … start[i + 1]. */
  readonly start: Int32Array;
  readonly slots: Int32Array;
  readonly factors: Float64Array;
  /** The same terms of all forms, part by part; numbers of {@link ROW_PARTS}. */
  readonly terms: {
    readonly slots: Int32Array;
    readonly factors: Float64Array;
    readonly parts: Int32Array;
  };
}

function compile({ slots, classes }: Pattern, hamiltonian: SpatialHamiltonian): CompiledPattern {
  return {
    fetch: slots.map((slot) => reader(slot, hamiltonian)),
    values: new Float64Array(slots.length),
    classes: classes.map(({ forms, rows, signs }) => {
      const merged = forms.map(bySlot);
      const start = new Int32Array(forms.length + 1);
      for (const [i, form] of merged.entries()) start[i + 1] = start[i]! + form.size;
      return {
        rows,
        signs,
        start,
        slots: Int32Array.from(merged.flatMap((form) => [...form.keys()])),
        factors: Float64Array.from(merged.flatMap((form) => [...form.values()])),
        terms: {
          slots: Int32Array.from(forms.flatMap((form) => form.slots)),
          factors: Float64Array.from(forms.flatMap((form) => form.factors)),
          parts: Int32Array.from(forms.flatMap((form) => form.parts.map((part) => FIRST_TWO_BODY + part))),
        },
      };
    }),
  };
}

/** Factor of each slot, its parts added. */
function bySlot({ slots, factors }: LinearForm): Map<number, number> {
  const sums = new Map<number, number>();
  for (const [i, slot] of slots.entries()) sums.set(slot, (sums.get(slot) ?? 0) + factors[i]!);
  for (const [slot, factor] of sums) if (factor === 0) sums.delete(slot);
  return sums;
}

const FIRST_TWO_BODY = ROW_PARTS.indexOf('coulomb');

/** Reads a slot's value for a descending quartet. */
function reader(
  { array, component, left, right }: Slot,
  hamiltonian: SpatialHamiltonian,
): (quartet: Int32Array) => number {
  const { orbitals: n, g } = hamiltonian;
  const [a, b] = left;
  const [c, d] = right;
  if (array === 'charge' || array === 'spin-spin') {
    const values = array === 'charge' ? g.charge! : g.spinSpin!;
    const offset = array === 'charge' ? 0 : (component * values.length) / 6;
    return (x) => values[offset + symmetricPair(symmetricPair(x[a]!, x[b]!), symmetricPair(x[c]!, x[d]!))]!;
  }
  const values = array === 'same' ? g.spinOrbit!.same : (g.spinOrbit!.other as Float64Array);
  const width = numSymmetricPairs(n);
  const offset = component * numAntisymmetricPairs(n);
  return (x) => {
    const row = offset + (x[a]! * (x[a]! - 1)) / 2 + x[b]!;
    return values[row * width + symmetricPair(x[c]!, x[d]!)]!;
  };
}
