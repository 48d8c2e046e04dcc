import type { SpatialHamiltonian } from '../../hamiltonian';
import { symmetricPair } from '../../integrals/integral-set';
import type { PairsKind } from './kinds';
import { forQuartets, Quartets } from './quartets';
import { emptyRow, type RowSource, type SparseRow, sharesOf } from './rows';

/** What a row costs. */
export interface RowPrice {
  /** Part of λ that one row less is worth, hartree. */
  readonly perRow: number;
  /** Rows up to this weight will be dropped and cost nothing, hartree. */
  readonly cutoff: number;
}

const CHARGE: PairsKind = {
  form: 'pairs',
  antisymmetric: false,
  mu: 0,
  nu: 0,
  shared: false,
  exchanged: false,
};
const SHARES = sharesOf([['coulomb', 1]]);

/** The two ways to make two pairs of a quartet's positions beside (01)(23). */
const PAIRINGS = [
  [0, 1, 2, 3],
  [0, 2, 1, 3],
  [0, 3, 1, 2],
] as const;

/**
 * The charge part, quartet by quartet either as joined Majorana products or, where that is worth its larger norm, as the
 * fewer products of pairs with spins of their own, (pq|rs), (pr|qs) and (ps|qr).
 */
export function chargeRows(hamiltonian: SpatialHamiltonian, price: RowPrice): RowSource {
  const { charge } = hamiltonian.g;
  if (!charge) return { parts: [], *visit() {} };
  const quartets = new Quartets({ ...hamiltonian, g: { charge, spinOrbit: null, spinSpin: null } });
  const pairs = new PairRows(charge);
  // How each quartet is listed, found at the first pass: 1 joined, 2 by pairs.
  const n = hamiltonian.orbitals;
  const chosen = new Uint8Array((n * (n + 1) * (n + 2) * (n + 3)) / 24);
  return {
    parts: ['coulomb'],
    *visit(visitor) {
      let rows = 0;
      let norm = 0;
      const count = ({ weight }: SparseRow) => {
        norm += weight;
        if (weight > price.cutoff) rows++;
      };
      const isByPairs = (quartet: Int32Array): boolean => {
        if (price.perRow === 0 || !isWhole(quartet)) return false;
        rows = norm = 0;
        quartets.visit(quartet, count);
        const joined = { rows, norm };
        rows = norm = 0;
        pairs.visit(quartet, count);
        return norm - joined.norm < price.perRow * (joined.rows - rows);
      };
      let at = 0;
      yield* forQuartets(n, (quartet) => {
        if (chosen[at] === 0) chosen[at] = isByPairs(quartet) ? 2 : 1;
        (chosen[at++] === 2 ? pairs : quartets).visit(quartet, visitor);
      });
    },
  };
}

/** No pair stands beside itself, whose product would hold a constant; joined, these quartets have no more rows. */
const isWhole = ([p, q, r, s]: Int32Array) => !(p === q && r === s);

/** Products of pairs with spins of their own. */
class PairRows {
  readonly #row: SparseRow = { ...emptyRow(), kind: CHARGE, parts: SHARES };

  constructor(private readonly charge: Float64Array) {}

  visit(quartet: Int32Array, visitor: (row: SparseRow) => void): void {
    const row = this.#row;
    let before = [-1, -1];
    for (const [a, b, c, d] of PAIRINGS) {
      const [p, q, r, s] = [quartet[a]!, quartet[b]!, quartet[c]!, quartet[d]!];
      const index = symmetricPair(symmetricPair(p, q), symmetricPair(r, s));
      if (before.includes(index)) continue;
      before = [before[1]!, index];
      const value = this.charge[index]!;
      row.weight = Math.abs(value) * (p === q ? 1 : 2) * (r === s ? 1 : 2);
      row.isNegative = value < 0;
      row.p = p;
      row.q = q;
      row.r = r;
      row.s = s;
      row.square = 2 * Math.abs(value) * row.weight;
      visitor(row);
    }
  }
}
