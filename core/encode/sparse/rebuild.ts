import {
  fromProductForm,
  type SpatialHamiltonian,
  type SpinHamiltonian,
  type TwoElectronTensor,
} from '../../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../../integrals/integral-set';
import { carriesSpin, type PairsKind } from './kinds';
import { addContraction, diagonalSum } from './one-body';
import type { SparseProgram } from './program';
import { rebuildStrings } from './rebuild-strings';

/**
 * The Hamiltonian that the rows of a program stand for, in product form: over spatial orbitals, or over 2N spin orbitals
 * where there are strings that mix the spin components of symmetric and antisymmetric pairs.
 *
 * @throws InputError `too-large-to-rebuild` for such strings over more than 20 orbitals.
 */
export function rebuildSparse(
  h: SpatialHamiltonian,
  program: SparseProgram,
  timesSame: number,
): SpinHamiltonian {
  const isMixed = program.kinds.some((kind) => kind.form === 'strings' && carriesSpin(kind));
  return isMixed ? rebuildStrings(h, program) : rebuildSpatial(h, program, timesSame);
}

/** Component of spin–spin for zz, and for k ≤ l. */
const ZZ = 5;
const component = (k: number, l: number) => [0, 1, 2, 1, 3, 4, 2, 4, 5][3 * k + l]!;

function rebuildSpatial(h: SpatialHamiltonian, program: SparseProgram, timesSame: number): SpinHamiltonian {
  const n = h.orbitals;
  const { kinds, kindOf, orbitalsOf, weights, negative } = program;
  const pairs = numSymmetricPairs(n);
  const triangle = (pairs * (pairs + 1)) / 2;
  const strict = numAntisymmetricPairs(n);
  const used = (holds: (kind: PairsKind) => boolean) =>
    kinds.some((kind) => kind.form === 'pairs' && kind.nu !== null && holds(kind));
  const isSpinSpin = (kind: PairsKind) => !kind.antisymmetric && kind.mu !== 0;
  const planes = new Float64Array(4 * n * n);
  const charge = new Float64Array(triangle);
  const hasStrings = kinds.some(({ form }) => form === 'strings');
  const spinSpin = hasStrings || used(isSpinSpin) ? new Float64Array(6 * triangle) : null;
  const hasSpinOrbit = used(({ antisymmetric }) => antisymmetric);
  const isShared = timesSame !== 0 && !used((kind) => kind.antisymmetric && kind.mu === 0);
  const same = hasSpinOrbit ? new Float64Array(3 * strict * pairs) : null;
  const other = hasSpinOrbit && !isShared ? new Float64Array(3 * strict * pairs) : null;
  for (const [i, weight] of weights.entries()) {
    const kind = kinds[kindOf[i]!]!;
    const [p, q, r, s] = orbitalsOf.subarray(4 * i, 4 * i + 4) as unknown as [number, number, number, number];
    const signed = negative[i] ? -weight : weight;
    const elements = (a: number, b: number) => (a === b ? 1 : 2);
    if (kind.form === 'pairs' && kind.nu === null) {
      const value = signed / elements(p, q);
      planes[(kind.mu * n + p) * n + q] = value;
      planes[(kind.mu * n + q) * n + p] = kind.antisymmetric ? -value : value;
      continue;
    }
    const [pq, rs] = [symmetricPair(p, q), symmetricPair(r, s)];
    const index = symmetricPair(pq, rs);
    const isSquare = pq === rs && !(kind.form === 'pairs' && kind.antisymmetric);
    const value = signed / (elements(p, q) * elements(r, s) * (isSquare ? 0.5 : 1));
    if (kind.form === 'strings') {
      // Equal spins: charge and zz together; opposite ones: their difference.
      charge[index]! += value;
      spinSpin![ZZ * triangle + index]! += kind.flags & 4 ? -value : value;
      continue;
    }
    const { antisymmetric, mu, nu, exchanged, shared } = kind;
    if (antisymmetric) {
      const k = (mu === 0 ? nu! : mu) - 1;
      const at = (k * strict + (p * (p - 1)) / 2 + q) * pairs + rs;
      const array = mu === 0 ? other! : same!;
      array[at]! += shared ? value / (1 + Math.abs(timesSame)) : value;
    } else if (mu === 0) charge[index]! += value;
    else spinSpin![component(mu - 1, nu! - 1) * triangle + index]! += exchanged ? value / 2 : value;
  }
  const g: TwoElectronTensor = {
    charge: h.g.charge ? charge : null,
    spinOrbit: same ? { same, other: other ?? { timesSame } } : null,
    spinSpin,
  };
  // Back from B to T.
  let constant = program.constant;
  for (let p = 0; p < n; p++) constant -= planes[p * n + p]!;
  constant += 0.5 * diagonalSum({ ...h, g });
  addContraction(planes, n, g, -1);
  return fromProductForm({
    orbitals: n,
    electrons: h.electrons,
    terms: h.terms,
    constant,
    k: { sector: 'even', n, planes },
    g,
  });
}
