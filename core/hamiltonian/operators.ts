import type { ComplexMatrix } from '../linalg/types';

/** Behaviour under time reversal. A field-free Hamiltonian is even; squares of odd operators are even too. */
export type Sector = 'even' | 'odd';

/** Spin component: 0 = charge (identity), 1…3 = x, y, z. */
export type Mu = 0 | 1 | 2 | 3;

/** All four spin components, in plane order. */
export const MUS = [0, 1, 2, 3] as const satisfies readonly Mu[];

/**
 * Hermitian one-body operator L = Σ_μ Σ_pq L^μ_pq T^μ_pq of one time-reversal sector, as four real n×n planes:
 * - even: L⁰ = plane 0 (symmetric), L^k = i · plane k (antisymmetric);
 * - odd: L⁰ = i · plane 0 (antisymmetric), L^k = plane k (symmetric).
 * In hartree where it is a part of H, without unit where it is a factor.
 */
export interface TripletOperator {
  readonly sector: Sector;
  readonly n: number;
  /** 4·n·n, plane-major. */
  readonly planes: Float64Array;
}

export function zeroOperator(sector: Sector, n: number): TripletOperator {
  return { sector, n, planes: new Float64Array(4 * n * n) };
}

/** True where plane `mu` of the sector is real symmetric, false where it is i times real antisymmetric. */
export function isSymmetricPlane(sector: Sector, mu: Mu): boolean {
  return (sector === 'even') === (mu === 0);
}

/** Plane `mu` as a view, n×n. */
export function planeOf(operator: TripletOperator, mu: Mu): Float64Array {
  const size = operator.n * operator.n;
  return operator.planes.subarray(mu * size, (mu + 1) * size);
}

/** a + scale·b, a new operator. Both must be of one sector and size: a sum of sectors has no real planes. */
export function addScaled(a: TripletOperator, b: TripletOperator, scale = 1): TripletOperator {
  if (a.sector !== b.sector || a.n !== b.n) {
    throw new RangeError(`cannot add ${b.sector} operator of ${b.n} to ${a.sector} one of ${a.n} orbitals`);
  }
  return { ...a, planes: a.planes.map((value, i) => value + scale * b.planes[i]!) };
}

/** scale·a, a new operator. */
export function scaled(a: TripletOperator, scale: number): TripletOperator {
  return { ...a, planes: a.planes.map((value) => scale * value) };
}

/** tr L⁰ over the n orbitals: half of the trace over spin orbitals. Zero for odd operators. */
export function chargeTrace(a: TripletOperator): number {
  let trace = 0;
  if (a.sector === 'even') for (let p = 0; p < a.n; p++) trace += a.planes[p * a.n + p]!;
  return trace;
}

/**
 * Largest deviation of a plane from the symmetry its sector asks for, which is the largest |L − L†| of any
 * component. Zero for a Hermitian operator.
 */
export function hermiticityDefect(a: TripletOperator): number {
  const { n } = a;
  let defect = 0;
  for (const mu of MUS) {
    const plane = planeOf(a, mu);
    const sign = isSymmetricPlane(a.sector, mu) ? 1 : -1;
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        defect = Math.max(defect, Math.abs(plane[p * n + q]! - sign * plane[q * n + p]!));
      }
    }
  }
  return defect;
}

/** √(Σ_μ ‖L^μ‖²_F). */
export function frobeniusNorm(a: TripletOperator): number {
  return Math.hypot(
    ...[0, 1, 2, 3].map((mu) => Math.sqrt(planeOf(a, mu as Mu).reduce((s, x) => s + x * x, 0))),
  );
}

/**
 * Σ_μ L^μ ⊗ σ^μ over the 2n spin orbitals, orbital-major: index 2p + σ, σ = 0 for ↑.
 *
 * @returns (2n)×(2n), Hermitian, row-major planes.
 */
export function toSpinOrbitals(a: TripletOperator): ComplexMatrix {
  const { n } = a;
  const dim = 2 * n;
  const re = new Float64Array(dim * dim);
  const im = new Float64Array(dim * dim);
  const size = n * n;
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      const i = p * n + q;
      const [c, x, y, z] = [
        a.planes[i]!,
        a.planes[size + i]!,
        a.planes[2 * size + i]!,
        a.planes[3 * size + i]!,
      ];
      const up = 2 * p * dim + 2 * q;
      const down = up + dim;
      if (a.sector === 'even') {
        // L⁰ = c, L^k = i·plane: ↑↑ c + iz, ↓↓ c − iz, ↑↓ ix + y, ↓↑ ix − y.
        re[up] = c;
        im[up] = z;
        re[down + 1] = c;
        im[down + 1] = -z;
        re[up + 1] = y;
        im[up + 1] = x;
        re[down] = -y;
        im[down] = x;
      } else {
        // L⁰ = ic, L^k = plane: ↑↑ ic + z, ↓↓ ic − z, ↑↓ x − iy, ↓↑ x + iy.
        re[up] = z;
        im[up] = c;
        re[down + 1] = -z;
        im[down + 1] = c;
        re[up + 1] = x;
        im[up + 1] = -y;
        re[down] = x;
        im[down] = y;
      }
    }
  }
  return { n: dim, re, im };
}
