import { MUS, type TripletOperator, toSpinOrbitals } from '../../hamiltonian';
import { type ComplexMatrix, hermitianEigen, multiply, symmetricEigenvalues } from '../../linalg';
import { planeInto } from '../elements';
import { addPairs, antisymmetricNorm, shiftedNorms, smoothMedian } from '../smooth-norms';
import { hermitianInto } from '../spinor-elements';

/** One plane of κ, in coordinates over the orthonormal Hermitian elements. Hartree. */
export interface KappaPlane {
  readonly kind: 'symmetric' | 'antisymmetric' | 'hermitian';
  /** Order of the matrix: N orbitals or M spinors. */
  readonly n: number;
  /** Weight of its nuclear norm in λ: 1, over spinors ½. */
  readonly weight: number;
  /** κ without any shift. */
  readonly start: Float64Array;
}

/** Nuclear norm of a plane of κ, and what bounds it from below. */
export interface PlaneNorm {
  /** With √(x² + δ²) for |x|. */
  readonly smooth: number;
  readonly exact: number;
  /**
   * Derivative of `smooth` with respect to the coordinates: those of an operator Z with ‖Z‖ ≤ weight and, for a plane
   * that is shifted by itself, tr Z = 0, so that ⟨Z, κ⟩ never exceeds the exact norm of any κ.
   */
  readonly dual: Float64Array;
}

/**
 * @param coordinates - of κ in this plane
 * @param delta - smoothing width, hartree, > 0
 * The charge plane and a plane over spinors count less their own best c₁.
 */
export function planeNorm(plane: KappaPlane, coordinates: Float64Array, delta: number): PlaneNorm {
  const { kind, n, weight } = plane;
  const dual = new Float64Array(coordinates.length);
  if (kind === 'hermitian') return hermitianNorm(plane, coordinates, delta, dual);
  const matrix = new Float64Array(n * n);
  planeInto(matrix, 0, coordinates, 0, n, kind === 'symmetric');
  if (kind === 'antisymmetric') {
    const { norm, exact, direction } = antisymmetricNorm(matrix, n, delta);
    addPairs(dual, 0, direction, n, false, weight);
    return { smooth: weight * norm, exact: weight * exact, dual };
  }
  const values = symmetricEigenvalues(matrix, n);
  const { norm, direction } = shiftedNorms(matrix, n, [smoothMedian(values, delta)], [1], delta);
  addPairs(dual, 0, direction, n, true, weight);
  return { smooth: weight * norm, exact: weight * sumAbout(values, smoothMedian(values, 0)), dual };
}

function hermitianNorm(
  { n, weight }: KappaPlane,
  coordinates: Float64Array,
  delta: number,
  dual: Float64Array,
): PlaneNorm {
  const matrix = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  hermitianInto(matrix.re, matrix.im, 0, coordinates, 0, n);
  const { smooth, exact, direction } = smoothHermitian(matrix, delta);
  addHermitianPairs(dual, 0, direction, n, weight);
  return { smooth: weight * smooth, exact: weight * exact, dual };
}

/** Σ_i s(ε_i − c₁) of a Hermitian matrix about its best c₁, and the derivative. */
function smoothHermitian(matrix: ComplexMatrix, delta: number) {
  const { n } = matrix;
  const { values, re, im } = hermitianEigen(matrix);
  const middle = smoothMedian(values, delta);
  let smooth = 0;
  const [scaledRe, scaledIm] = [re.slice(), im.slice()];
  for (let i = 0; i < n; i++) {
    const x = values[i]! - middle;
    const size = Math.hypot(x, delta);
    smooth += size;
    for (let p = 0; p < n; p++) {
      scaledRe[i * n + p]! *= x / size;
      scaledIm[i * n + p]! *= x / size;
    }
  }
  // Z_pq = Σ_i f_i x_ip x*_iq.
  const product = (a: Float64Array, b: Float64Array) => multiply(a, b, n, n, n, { transposeA: true });
  const [rr, ii, ir, ri] = [
    product(scaledRe, re),
    product(scaledIm, im),
    product(scaledIm, re),
    product(scaledRe, im),
  ];
  const direction = { re: rr.map((x, i) => x + ii[i]!), im: ir.map((x, i) => x - ri[i]!) };
  return { smooth, exact: sumAbout(values, smoothMedian(values, 0)), direction };
}

/**
 * ½‖Σ_μ κ^μ⊗σ^μ − c₁‖_* over 2N modes in place of the norms of the four planes: the one-body part of the spinor form. The
 * first entry holds the norm, each its own part of the derivative.
 *
 * @param kappa - coordinates of the planes 0, x, y, z
 */
export function wholeNorm(n: number, kappa: readonly Float64Array[], delta: number): PlaneNorm[] {
  const operator: TripletOperator = { sector: 'even', n, planes: new Float64Array(4 * n * n) };
  for (const mu of MUS) planeInto(operator.planes, mu * n * n, kappa[mu]!, 0, n, mu === 0);
  const { smooth, exact, direction } = smoothHermitian(toSpinOrbitals(operator), delta);
  // Back from spin orbitals: tr (B_a⊗σ^μ) Z = 2 tr B_a Z^μ, and the weight is ½.
  const { re, im } = direction;
  const planes = MUS.map(() => new Float64Array(n * n));
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      const up = 4 * p * n + 2 * q;
      const down = up + 2 * n;
      planes[0]![p * n + q] = 0.5 * (re[up]! + re[down + 1]!);
      planes[1]![p * n + q] = 0.5 * (im[up + 1]! + im[down]!);
      planes[2]![p * n + q] = 0.5 * (re[up + 1]! - re[down]!);
      planes[3]![p * n + q] = 0.5 * (im[up]! - im[down + 1]!);
    }
  }
  return MUS.map((mu) => {
    const dual = new Float64Array(kappa[mu]!.length);
    addPairs(dual, 0, planes[mu]!, n, mu === 0, 1);
    return { smooth: mu === 0 ? 0.5 * smooth : 0, exact: mu === 0 ? 0.5 * exact : 0, dual };
  });
}

/** Adds `scale` times the coordinates of a Hermitian matrix: symmetric pairs first, then antisymmetric ones. */
export function addHermitianPairs(
  out: Float64Array,
  at: number,
  { re, im }: Pick<ComplexMatrix, 're' | 'im'>,
  n: number,
  scale: number,
): void {
  addPairs(out, at, re, n, true, scale);
  addPairs(out, at + (n * (n + 1)) / 2, im, n, false, scale);
}

function sumAbout(values: Float64Array, c: number): number {
  let sum = 0;
  for (const x of values) sum += Math.abs(x - c);
  return sum;
}
