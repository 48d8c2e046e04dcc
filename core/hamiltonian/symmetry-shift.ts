import { numAntisymmetricPairs, numSymmetricPairs, pairsTriangleLength } from '../integrals/integral-set';
import { InputError } from '../job';
import type { ComplexMatrix } from '../linalg';
import { fromProductForm, spinorFromProductForm } from './forms';
import type { SpatialHamiltonian, SpinorHamiltonian, TwoElectronTensor } from './hamiltonian';
import { hermiticityDefect, planeOf, type TripletOperator } from './operators';

/**
 * ξ of a symmetry shift H + ξ (N̂ − η): a number and a one-body operator, ξ = scalar + Σ_μ Σ_pq ξ^μ_pq T^μ_pq.
 * N̂ counts the electrons of the whole register, η those of the system, so the shift vanishes on the η-electron sector.
 */
export interface SymmetryShift {
  /** Hartree. */
  readonly scalar: number;
  /** Even sector, as every part of a field-free Hamiltonian; hartree. */
  readonly operator: TripletOperator;
}

/** The same over M spinors: ξ = scalar + Σ_PQ ξ_PQ a†_P a_Q, Hermitian. Hartree. */
export interface SpinorShift {
  readonly scalar: number;
  readonly operator: ComplexMatrix;
}

/** −ξ. */
export function oppositeShift({ scalar, operator }: SymmetryShift): SymmetryShift {
  return { scalar: -scalar, operator: { ...operator, planes: operator.planes.map((value) => -value) } };
}

/** A plane counts as symmetric up to this part of its largest element. */
const ROUNDING = 1e-12;

/**
 * H + ξ (N̂ − η) as an ordinary Hamiltonian, η = `hamiltonian.electrons`: the same operator on the η-electron sector,
 * another one elsewhere.
 *
 * ξ⁰ adds ξ_pq δ_rs + δ_pq ξ_rs to g⁰⁰_pqrs; ξ^k = iA^k adds A^k_pq δ_rs to the spin–same-orbit array alone, for the
 * spin–other-orbit one couples to the spin of the other electron. k changes by −ηξ + scalar, the constant by −η·scalar.
 * Where one array stood for both spin–orbit parts there are two afterwards.
 *
 * @returns arrays that do not change are shared. O(N³) work beside the copies.
 * @throws InputError `bad-shift` where the operator does not fit the Hamiltonian.
 */
export function shiftedHamiltonian(
  hamiltonian: SpatialHamiltonian,
  { scalar, operator }: SymmetryShift,
): SpatialHamiltonian {
  const { orbitals: n, electrons, g } = hamiltonian;
  checkShift(n, scalar, operator);
  const planes = hamiltonian.k.planes.map((value, i) => value - electrons * operator.planes[i]!);
  for (let p = 0; p < n; p++) planes[p * n + p]! += scalar;
  return fromProductForm({
    orbitals: n,
    electrons,
    terms: hamiltonian.terms,
    constant: hamiltonian.constant - electrons * scalar,
    k: { sector: 'even', n, planes },
    g: {
      charge: shiftedCharge(n, g.charge, planeOf(operator, 0)),
      spinOrbit: shiftedSpinOrbit(n, g.spinOrbit, operator),
      spinSpin: g.spinSpin,
    },
  });
}

function checkShift(n: number, scalar: number, operator: TripletOperator): void {
  let largest = 0;
  for (const value of operator.planes) largest = Math.max(largest, Math.abs(value));
  const fits =
    operator.n === n &&
    operator.sector === 'even' &&
    Number.isFinite(scalar) &&
    operator.planes.every(Number.isFinite) &&
    hermiticityDefect(operator) <= ROUNDING * largest;
  if (fits) return;
  throw new InputError({
    code: 'bad-shift',
    where: 'symmetry shift',
    found: `an ${operator.sector} operator over ${operator.n} orbitals with defect ${hermiticityDefect(operator)} Eh`,
    expected: `a Hermitian even operator over ${n} orbitals`,
    mend: 'Give a real symmetric charge plane and real antisymmetric spin planes (times i).',
  });
}

function shiftedCharge(n: number, charge: Float64Array | null, xi: Float64Array): Float64Array | null {
  if (xi.every((value) => value === 0)) return charge;
  const out = charge ? charge.slice() : new Float64Array(pairsTriangleLength(n));
  for (let r = 0; r < n; r++) {
    const rr = diagonalPair(r);
    for (let p = 0, pq = 0; p < n; p++) {
      for (let q = 0; q <= p; q++, pq++) {
        // Each pair of pairs stands once in the triangle: pp,pp takes both terms at once.
        const at = pq >= rr ? (pq * (pq + 1)) / 2 + rr : (rr * (rr + 1)) / 2 + pq;
        out[at]! += (pq === rr ? 2 : 1) * xi[p * n + q]!;
      }
    }
  }
  return out;
}

function shiftedSpinOrbit(
  n: number,
  spinOrbit: TwoElectronTensor['spinOrbit'],
  operator: TripletOperator,
): TwoElectronTensor['spinOrbit'] {
  const spin = operator.planes.subarray(n * n);
  if (spin.every((value) => value === 0)) return spinOrbit;
  const npair = numSymmetricPairs(n);
  const same = spinOrbit ? spinOrbit.same.slice() : new Float64Array(3 * numAntisymmetricPairs(n) * npair);
  for (let k = 0, row = 0; k < 3; k++) {
    for (let p = 1; p < n; p++) {
      for (let q = 0; q < p; q++, row += npair) {
        for (let r = 0; r < n; r++) same[row + diagonalPair(r)]! += spin[(k * n + p) * n + q]!;
      }
    }
  }
  if (!spinOrbit) return { same, other: { timesSame: 0 } };
  const { other } = spinOrbit;
  if (other instanceof Float64Array || other.timesSame === 0) return { same, other };
  return { same, other: spinOrbit.same.map((value) => other.timesSame * value) };
}

/** Place of the pair rr among p ≥ q. */
const diagonalPair = (r: number): number => (r * (r + 3)) / 2;

/** H + ξ (N̂ − η) over spinors: ξ_PQ δ_RS + δ_PQ ξ_RS is added to g, −ηξ + scalar to k. The fit of ξ is not checked. */
export function shiftedSpinorHamiltonian(
  { spinors: m, electrons, constant, k, g }: SpinorHamiltonian,
  { scalar, operator }: SpinorShift,
): SpinorHamiltonian {
  const shiftedOne = (part: 're' | 'im') => k[part].map((x, i) => x - electrons * operator[part][i]!);
  const shiftedTwo = (part: 're' | 'im') => {
    const out = g[part].slice();
    const size = m * m;
    for (let pq = 0; pq < size; pq++) {
      for (let r = 0; r < m; r++) {
        out[pq * size + r * (m + 1)]! += operator[part][pq]!;
        out[r * (m + 1) * size + pq]! += operator[part][pq]!;
      }
    }
    return out;
  };
  const one = { re: shiftedOne('re'), im: shiftedOne('im') };
  for (let p = 0; p < m; p++) one.re[p * m + p]! += scalar;
  return spinorFromProductForm({
    spinors: m,
    electrons,
    constant: constant - electrons * scalar,
    k: one,
    g: { re: shiftedTwo('re'), im: shiftedTwo('im') },
  });
}
