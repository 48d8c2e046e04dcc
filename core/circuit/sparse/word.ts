import { SPIN_BITS, type SparseLayout } from './layout';

/** Parts of a coefficient's word. */
export interface Word {
  readonly p: readonly number[];
  readonly q: readonly number[];
  readonly r: readonly number[];
  readonly s: readonly number[];
  /** One wire or none. */
  readonly none: readonly number[];
  readonly sign: number;
  /** Of `spins` bits: [fixed, opposite], [opposite] or nothing. */
  readonly spins: readonly number[];
  /** s₁, r₁, s₂, r₂ of strings. */
  readonly string: readonly number[];
  readonly antisymmetric: number;
  readonly component: readonly number[];
  readonly second: readonly number[];
}

export function splitWord(layout: SparseLayout, wires: readonly number[]): Word {
  const rest = [...wires];
  const take = (size: number) => rest.splice(0, size);
  const { orbitalBits: n, strings } = layout;
  const spin = layout.spin && !strings;
  return {
    p: take(n),
    q: take(n),
    r: take(n),
    s: take(n),
    none: take(layout.noneBit ? 1 : 0),
    sign: take(1)[0]!,
    spins: take(SPIN_BITS[layout.spins]),
    string: take(strings ? 4 : 0),
    antisymmetric: take(spin ? 1 : 0)[0] ?? -1,
    component: take(spin ? 2 : 0),
    second: take(spin && layout.storesSecond ? 2 : 0),
  };
}

/** One of the two row operators, as wires. */
export interface Pair {
  readonly first: readonly number[];
  readonly second: readonly number[];
  /** Shared highest bit of both addresses: no operator. */
  readonly none: readonly number[];
  /** s, r and, but for strings, m: see core/circuit/triplet/rows.ts. Empty in the spin-free form. */
  readonly signature: readonly number[];
}
