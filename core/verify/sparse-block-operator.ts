import type { PairsKind, SparseProgram, StringsKind } from '../encode';
import { isSymmetricPlane, type Mu, type Sector, toSpinOrbitals, zeroOperator } from '../hamiltonian';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';
import { addIdentity, addProduct, addScaled, oneBodyOnSector, zeroMatrix } from './sector-operators';

/**
 * H − constant that a sparse program stands for, on the determinants of a sector: dense, from triplet excitations on
 * the whole Fock space, so that emitted circuits can be held against it. N ≤ 4.
 */
export function sparseProgramOperator(program: SparseProgram, basis: SectorBasis): ComplexMatrix {
  const { orbitals, kinds, kindOf, orbitalsOf, weights, negative } = program;
  const total = zeroMatrix(basis.dim);
  const rows = new Map<string, ComplexMatrix>();
  const row = (antisymmetric: boolean, mu: Mu, p: number, q: number): ComplexMatrix => {
    const key = [antisymmetric, mu, p, q].join();
    let found = rows.get(key);
    if (!found) {
      found = rowOperator(orbitals, antisymmetric, mu, p, q, basis);
      rows.set(key, found);
    }
    return found;
  };
  for (const [i, weight] of weights.entries()) {
    if (weight === 0) continue;
    const kind = kinds[kindOf[i]!]!;
    const [p, q, r, s] = orbitalsOf.subarray(4 * i, 4 * i + 4) as unknown as [number, number, number, number];
    const signed = negative[i] ? -weight : weight;
    if (kind.form === 'strings') {
      addStrings(total, kind, [p, q, r, s], signed, basis);
      continue;
    }
    if (kind.nu === null) {
      addScaled(total, row(kind.antisymmetric, kind.mu, p, q), signed);
      continue;
    }
    for (const { mu, nu, share } of componentsOf(kind, kind.nu, program)) {
      addAnticommutator(total, row(kind.antisymmetric, mu, p, q), row(false, nu, r, s), (share * signed) / 2);
    }
  }
  return total;
}

/** Where the components of a coefficient stand, and how much of it in each place. */
function componentsOf(kind: PairsKind, nu: Mu, { otherShare, otherSign }: SparseProgram) {
  const { mu } = kind;
  if (kind.shared) {
    return [
      { mu, nu, share: 1 - otherShare },
      { mu: nu, nu: mu, share: otherSign * otherShare },
    ];
  }
  if (!kind.exchanged) return [{ mu, nu, share: 1 }];
  return [
    { mu, nu, share: 0.5 },
    { mu: nu, nu: mu, share: 0.5 },
  ];
}

/** ½(T_pq + T_qp) − δ_pq δ_μ0 for a symmetric element, (i/2)(T_pq − T_qp) for an antisymmetric one. */
function rowOperator(
  n: number,
  antisymmetric: boolean,
  mu: Mu,
  p: number,
  q: number,
  basis: SectorBasis,
): ComplexMatrix {
  const sector: Sector = isSymmetricPlane('even', mu) === antisymmetric ? 'odd' : 'even';
  const operator = zeroOperator(sector, n);
  const plane = mu * n * n;
  operator.planes[plane + p * n + q]! += 0.5;
  operator.planes[plane + q * n + p]! += antisymmetric ? -0.5 : 0.5;
  const out = oneBodyOnSector(toSpinOrbitals(operator), basis);
  if (!antisymmetric && mu === 0 && p === q) addIdentity(out, -1);
  return out;
}

/**
 * Both values of σ of a string: the sum over x of (−1)^{rx} iγ_{Px}γ_{Q,x⊕r} is twice a†_P a_Q + a†_Q a_P for r = 1 (less
 * its constant where P = Q), twice i a†_P a_Q − i a†_Q a_P for r = 0.
 */
function addStrings(
  target: ComplexMatrix,
  { flags }: StringsKind,
  [p, q, r, s]: readonly [number, number, number, number],
  weight: number,
  basis: SectorBasis,
): void {
  const [s1, s2, t, r1, r2] = [0, 1, 2, 3, 4].map((bit) => (flags >>> bit) & 1) as [
    number,
    number,
    number,
    number,
    number,
  ];
  const flips = s1 ^ s2 ^ r1 ^ r2;
  for (const sigma of [0, 1]) {
    const first = modePair(2 * p + sigma, 2 * q + (sigma ^ s1), r1, basis);
    const second = modePair(2 * r + (sigma ^ t), 2 * s + (sigma ^ t ^ s2), r2, basis);
    // A quarter of the sum over σ, x and y, each row operator being twice its pair.
    const scale = ((flips & sigma ? -1 : 1) * weight) / 4;
    addAnticommutator(target, first, second, scale);
  }
}

function modePair(P: number, Q: number, kinds: number, basis: SectorBasis): ComplexMatrix {
  const { modes } = basis;
  const operator = { n: modes, re: new Float64Array(modes * modes), im: new Float64Array(modes * modes) };
  const part = kinds === 1 ? operator.re : operator.im;
  part[P * modes + Q]! += 1;
  part[Q * modes + P]! += kinds === 1 ? 1 : -1;
  const out = oneBodyOnSector(operator, basis);
  if (P === Q) addIdentity(out, -1);
  return out;
}

/** target += scale (ab + ba). */
function addAnticommutator(target: ComplexMatrix, a: ComplexMatrix, b: ComplexMatrix, scale: number): void {
  addProduct(target, a, b, scale);
  addProduct(target, b, a, scale);
}
