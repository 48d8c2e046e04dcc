/** Behaviour under time reversal. A field-free Hamiltonian is even; squares of odd operators are even too. */
export type Sector = 'even' | 'odd';

/** Spin component: 0 = charge (identity), 1…3 = x, y, z. */
export type Mu = 0 | 1 | 2 | 3;

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
