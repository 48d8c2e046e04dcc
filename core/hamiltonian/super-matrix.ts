import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integrals/integral-set';
import type { TwoElectronTensor } from './hamiltonian';
import { isSymmetricPlane, type Mu, type Sector, type TripletOperator, zeroOperator } from './operators';

/*
 * The two-electron tensor as a real symmetric matrix G over (μ, element) in the orthonormal Hermitian basis
 *   S_pp = E_pp,  S_pq = (E_pq + E_qp)/√2 (p > q),  A_pq = i(E_pq − E_qp)/√2 (p > q):
 *   g^μν_pqrs = Σ_ab G_{μa,νb} (B_a)_pq (B_b)_rs.
 * Time reversal splits it: even (0,S) ⊕ (k,A), odd (0,A) ⊕ (k,S); pairs in pair order of integral-set.ts.
 */

type Component = 1 | 2 | 3;

/** 1 for pp, √2 for p ≠ q: element of G over the bare integral, per symmetric pair. */
function pairFactors(n: number): Float64Array {
  const factors = new Float64Array(numSymmetricPairs(n)).fill(Math.SQRT2);
  for (let p = 0; p < n; p++) factors[symmetricPair(p, p)] = 1;
  return factors;
}

function fromTriangle(n: number, values: Float64Array, offset: number): Float64Array {
  const npair = numSymmetricPairs(n);
  const f = pairFactors(n);
  const block = new Float64Array(npair * npair);
  for (let a = 0, i = offset; a < npair; a++) {
    for (let b = 0; b <= a; b++, i++) {
      const value = f[a]! * f[b]! * values[i]!;
      block[a * npair + b] = value;
      block[b * npair + a] = value;
    }
  }
  return block;
}

/** Block (0S,0S) of the even sector, npair × npair; zero where the tensor holds no charge part. Hartree. */
export function coulombBlock(n: number, g: TwoElectronTensor): Float64Array {
  return g.charge ? fromTriangle(n, g.charge, 0) : new Float64Array(numSymmetricPairs(n) ** 2);
}

function fromAntisymmetric(n: number, w: Float64Array, k: Component, scale: number): Float64Array {
  const npair = numSymmetricPairs(n);
  const size = numAntisymmetricPairs(n) * npair;
  const f = pairFactors(n);
  const block = new Float64Array(size);
  const offset = (k - 1) * size;
  for (let i = 0; i < size; i++) block[i] = scale * Math.SQRT2 * f[i % npair]! * w[offset + i]!;
  return block;
}

/** Block (kA,0S) of the even sector: spin–same-orbit, nanti × npair. Hartree. */
export function sameOrbitBlock(n: number, g: TwoElectronTensor, k: Component): Float64Array {
  if (!g.spinOrbit) return new Float64Array(numAntisymmetricPairs(n) * numSymmetricPairs(n));
  return fromAntisymmetric(n, g.spinOrbit.same, k, 1);
}

/** Block (0A,kS) of the odd sector: spin–other-orbit, nanti × npair. Hartree. */
export function otherOrbitBlock(n: number, g: TwoElectronTensor, k: Component): Float64Array {
  if (!g.spinOrbit) return new Float64Array(numAntisymmetricPairs(n) * numSymmetricPairs(n));
  const { same, other } = g.spinOrbit;
  return other instanceof Float64Array
    ? fromAntisymmetric(n, other, k, 1)
    : fromAntisymmetric(n, same, k, other.timesSame);
}

/** Place of component kl among xx,xy,xz,yy,yz,zz. */
export function spinSpinComponent(k: Component, l: Component): number {
  const [a, b] = k <= l ? [k, l] : [l, k];
  return a === 1 ? b - 1 : a + b - 1;
}

/** Block (kS,lS) of the odd sector: spin–spin, npair × npair, symmetric. Hartree. */
export function spinSpinBlock(n: number, g: TwoElectronTensor, k: Component, l: Component): Float64Array {
  if (!g.spinSpin) return new Float64Array(numSymmetricPairs(n) ** 2);
  return fromTriangle(n, g.spinSpin, (spinSpinComponent(k, l) * g.spinSpin.length) / 6);
}

/** Elements of plane `mu` in the Hermitian basis of the sector: npair or nanti. */
export function planeDimension(n: number, sector: Sector, mu: Mu): number {
  return isSymmetricPlane(sector, mu) ? numSymmetricPairs(n) : numAntisymmetricPairs(n);
}

/** Dimension of a sector over the given planes; over all four it is that of the whole sector. */
export function sectorDimension(n: number, sector: Sector, planes: readonly Mu[] = [0, 1, 2, 3]): number {
  return planes.reduce<number>((sum, mu) => sum + planeDimension(n, sector, mu), 0);
}

/**
 * G of one sector over the given planes, dense, dim × dim, row-major, real symmetric. Hartree.
 * For N = 20 over all planes that is 780² numbers; large sets should use the blocks.
 */
export function sectorMatrix(
  n: number,
  g: TwoElectronTensor,
  sector: Sector,
  planes: readonly Mu[] = [0, 1, 2, 3],
): Float64Array {
  const dim = sectorDimension(n, sector, planes);
  const matrix = new Float64Array(dim * dim);
  let row = 0;
  for (const mu of planes) {
    let column = 0;
    for (const nu of planes) {
      if (nu > mu) break;
      copyBlock(matrix, dim, row, column, blockOf(n, g, sector, mu, nu), planeDimension(n, sector, nu));
      column += planeDimension(n, sector, nu);
    }
    row += planeDimension(n, sector, mu);
  }
  return matrix;
}

/** Block (μ,ν) for μ ≥ ν, or null where no Breit–Pauli term fills it. */
function blockOf(n: number, g: TwoElectronTensor, sector: Sector, mu: Mu, nu: Mu): Float64Array | null {
  if (sector === 'even') {
    if (mu === 0) return coulombBlock(n, g);
    return nu === 0 ? sameOrbitBlock(n, g, mu) : null;
  }
  if (mu === 0) return null;
  if (nu !== 0) return spinSpinBlock(n, g, mu, nu);
  // Stored as (0A,kS); here the row is kS.
  const block = otherOrbitBlock(n, g, mu);
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  const turned = new Float64Array(block.length);
  for (let a = 0; a < nanti; a++)
    for (let s = 0; s < npair; s++) turned[s * nanti + a] = block[a * npair + s]!;
  return turned;
}

function copyBlock(
  matrix: Float64Array,
  dim: number,
  row: number,
  column: number,
  block: Float64Array | null,
  width: number,
): void {
  if (!block || width === 0) return;
  for (let i = 0; i < block.length / width; i++) {
    for (let j = 0; j < width; j++) {
      const value = block[i * width + j]!;
      matrix[(row + i) * dim + column + j] = value;
      matrix[(column + j) * dim + row + i] = value;
    }
  }
}

/**
 * The operator Σ_a v_a B_a of a vector in the Hermitian basis.
 * @param vector - `sectorDimension(n, sector, planes)` numbers from `offset`.
 */
export function operatorFromVector(
  n: number,
  sector: Sector,
  planes: readonly Mu[],
  vector: ArrayLike<number>,
  offset = 0,
): TripletOperator {
  const operator = zeroOperator(sector, n);
  let i = offset;
  for (const mu of planes) {
    const plane = mu * n * n;
    const symmetric = isSymmetricPlane(sector, mu);
    for (let p = symmetric ? 0 : 1; p < n; p++) {
      for (let q = 0; q < p; q++) {
        const value = vector[i++]! * Math.SQRT1_2;
        operator.planes[plane + p * n + q] = value;
        operator.planes[plane + q * n + p] = symmetric ? value : -value;
      }
      if (symmetric) operator.planes[plane + p * n + p] = vector[i++]!;
    }
  }
  return operator;
}

/** Coordinates of an operator in the Hermitian basis over the given planes: v_a = tr(B_a L). */
export function vectorFromOperator(
  operator: TripletOperator,
  planes: readonly Mu[] = [0, 1, 2, 3],
): Float64Array {
  const { n, sector } = operator;
  const vector = new Float64Array(sectorDimension(n, sector, planes));
  let i = 0;
  for (const mu of planes) {
    const plane = mu * n * n;
    const symmetric = isSymmetricPlane(sector, mu);
    for (let p = symmetric ? 0 : 1; p < n; p++) {
      for (let q = 0; q < p; q++) vector[i++] = operator.planes[plane + p * n + q]! * Math.SQRT2;
      if (symmetric) vector[i++] = operator.planes[plane + p * n + p]!;
    }
  }
  return vector;
}
