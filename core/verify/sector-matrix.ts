import {
  hamiltonianDefect,
  type SpinHamiltonian,
  type SpinorHamiltonian,
  spinorForm,
  spinorFromProductForm,
} from '../hamiltonian';
import { InputError, type JobContext } from '../job';
import { binomial, type SectorBasis, sectorBasis } from './determinants';
import type { Form } from './fock';
import { Columns, type SparseHermitian } from './sparse-hermitian';

export interface SectorMatrix extends SparseHermitian {
  readonly basis: SectorBasis;
  /** Rigorous bound on the shift of any eigenvalue by what was left out as numerical zero, hartree. */
  readonly droppedBound: number;
}

/** Integrals below this share of the largest are noise of the transformation that made them. */
const NOISE = 1e-15;

/** Largest sector that is set up: memory of the matrix is at most about 25 kB a determinant. */
export const MAX_SECTOR_DIMENSION = 20_000;

/**
 * H among the determinants of η electrons, by the Slater–Condon rules over 2N spin orbitals.
 *
 * @param form - `product` starts from k alone (its own reordering gives h), `stored` from h.
 * @throws InputError `not-hermitian` where the integrals are not, `sector-too-large` above {@link MAX_SECTOR_DIMENSION} determinants.
 */
export async function sectorMatrix(
  hamiltonian: SpinHamiltonian,
  electrons: number,
  form: Form,
  context: JobContext,
): Promise<SectorMatrix> {
  const modes = hamiltonian.kind === 'spatial' ? 2 * hamiltonian.orbitals : hamiltonian.spinors;
  const dim = modes > 32 ? Number.POSITIVE_INFINITY : binomial(modes, electrons);
  if (dim > MAX_SECTOR_DIMENSION) {
    throw new InputError({
      code: 'sector-too-large',
      where: 'exact diagonalisation',
      found: `${electrons} electrons in ${modes} spin orbitals`,
      expected: `at most 32 spin orbitals and ${MAX_SECTOR_DIMENSION} determinants`,
      mend: 'Choose a smaller window of orbitals.',
    });
  }
  const spinor = hamiltonian.kind === 'spatial' ? spinorForm(hamiltonian) : hamiltonian;
  // Only one triangle of the matrix is built, which would hide it.
  refuseNotHermitian(spinor);
  const h = form === 'stored' ? spinor.h : spinorFromProductForm(spinor).h;
  return fill(integralsOf(spinor, h), sectorBasis(modes, electrons), hamiltonian.constant, context);
}

/** Deviation from Hermiticity that rounding in a file explains, relative to the largest integral. */
const HERMITIAN = 1e-7;

function refuseNotHermitian(spinor: SpinorHamiltonian): void {
  let largest = 0;
  for (const plane of [spinor.k.re, spinor.k.im, spinor.g.re, spinor.g.im]) {
    for (let i = 0; i < plane.length; i++) largest = Math.max(largest, Math.abs(plane[i]!));
  }
  const defect = hamiltonianDefect(spinor);
  if (defect <= HERMITIAN * largest) return;
  throw new InputError({
    code: 'not-hermitian',
    where: 'exact diagonalisation',
    found: `integrals that miss H = H† or (PQ|RS) = (RS|PQ) by ${defect.toExponential(1)} Eh`,
    expected: `at most ${(HERMITIAN * largest).toExponential(1)} Eh`,
    mend: 'Look at the findings of "inspect" for these files.',
  });
}

/** Antisymmetrised integrals, arranged for the loops below. */
interface Integrals {
  readonly m: number;
  readonly h: SpinorHamiltonian['h'];
  readonly g: SpinorHamiltonian['g'];
  /** For annihilated Q < S: the other created P < R, R > S, with ±(g_PQRS − g_PSRQ) not zero. */
  readonly doubles: readonly {
    readonly p: Uint8Array;
    readonly r: Uint8Array;
    readonly re: Float64Array;
    readonly im: Float64Array;
  }[];
  readonly cut: number;
}

function integralsOf(spinor: SpinorHamiltonian, h: SpinorHamiltonian['h']): Integrals {
  const { spinors: m, g } = spinor;
  let largest = 0;
  for (const plane of [g.re, g.im, h.re, h.im]) {
    for (let i = 0; i < plane.length; i++) largest = Math.max(largest, Math.abs(plane[i]!));
  }
  const cut = NOISE * largest;
  const doubles = [];
  for (let S = 0; S < m; S++) {
    for (let Q = 0; Q < S; Q++) {
      const [p, r, re, im]: [number[], number[], number[], number[]] = [[], [], [], []];
      // R > S makes the new state the larger one: the lower triangle of the matrix is enough.
      for (let R = S + 1; R < m; R++) {
        for (let P = 0; P < R; P++) {
          if (P === Q || P === S) continue;
          const direct = ((P * m + Q) * m + R) * m + S;
          const exchange = ((P * m + S) * m + R) * m + Q;
          const x = g.re[direct]! - g.re[exchange]!;
          const y = g.im[direct]! - g.im[exchange]!;
          if (Math.abs(x) <= cut && Math.abs(y) <= cut) continue;
          // Sign of a†_P a†_R a_S a_Q over the signs of the four modes in the untouched state.
          const sign = Q < P === S < P ? -1 : 1;
          p.push(P);
          r.push(R);
          re.push(sign * x);
          im.push(sign * y);
        }
      }
      doubles.push({
        p: Uint8Array.from(p),
        r: Uint8Array.from(r),
        re: Float64Array.from(re),
        im: Float64Array.from(im),
      });
    }
  }
  return { m, h, g, doubles, cut };
}

async function fill(
  integrals: Integrals,
  basis: SectorBasis,
  constant: number,
  context: JobContext,
): Promise<SectorMatrix> {
  const { m, h, g, doubles, cut } = integrals;
  const { dim, states, electrons } = basis;
  const out = new Columns(dim);
  const diagonal = new Float64Array(dim);
  const occupied = new Uint8Array(electrons);
  const sign = new Int8Array(m);
  for (let column = 0; column < dim; column++) {
    if (column % 64 === 0) {
      context.report('determinants', column, dim);
      await context.checkpoint();
    }
    const state = states[column]!;
    // sign[P] = (−1)^(electrons below P).
    for (let P = 0, i = 0; P < m; P++) {
      sign[P] = 1 - 2 * (i & 1);
      if ((state >>> P) & 1) occupied[i++] = P;
    }
    diagonal[column] = constant + diagonalElement(integrals, occupied);
    // Singles Q → P, with the field of the other electrons.
    for (let i = 0; i < electrons; i++) {
      const Q = occupied[i]!;
      const rest = state ^ (1 << Q);
      for (let P = Q + 1; P < m; P++) {
        if ((state >>> P) & 1) continue;
        let x = h.re[P * m + Q]!;
        let y = h.im[P * m + Q]!;
        for (let j = 0; j < electrons; j++) {
          const R = occupied[j]!;
          if (R === Q) continue;
          const direct = (P * m + Q) * m * m + R * m + R;
          const exchange = (P * m + R) * m * m + R * m + Q;
          x += g.re[direct]! - g.re[exchange]!;
          y += g.im[direct]! - g.im[exchange]!;
        }
        // The electron taken from Q < P no longer counts below P.
        const phase = -sign[Q]! * sign[P]!;
        out.push(basis.rank((rest | (1 << P)) >>> 0), phase * x, phase * y, cut);
      }
    }
    // Doubles Q, S → P, R.
    for (let j = 1; j < electrons; j++) {
      const S = occupied[j]!;
      for (let i = 0; i < j; i++) {
        const Q = occupied[i]!;
        const list = doubles[(S * (S - 1)) / 2 + Q]!;
        const rest = state ^ (1 << Q) ^ (1 << S);
        const signQS = sign[Q]! * sign[S]!;
        for (let d = 0; d < list.p.length; d++) {
          const P = list.p[d]!;
          const R = list.r[d]!;
          if ((rest >>> P) & 1 || (rest >>> R) & 1) continue;
          const phase = signQS * sign[P]! * sign[R]!;
          const target = (rest | (1 << P) | (1 << R)) >>> 0;
          out.push(basis.rank(target), phase * list.re[d]!, phase * list.im[d]!, cut);
        }
      }
    }
    out.closeColumn(column);
  }
  context.report('determinants', dim, dim);
  // At most `cut` each in |re| and |im|, for every possible single and double excitation of a row.
  const excitations = electrons * (m - electrons) + binomial(electrons, 2) * binomial(m - electrons, 2);
  return { basis, droppedBound: Math.SQRT2 * cut * excitations, ...out.finish(diagonal) };
}

function diagonalElement({ m, h, g }: Integrals, occupied: Uint8Array): number {
  let sum = 0;
  for (let i = 0; i < occupied.length; i++) {
    const P = occupied[i]!;
    sum += h.re[P * m + P]!;
    for (let j = 0; j < i; j++) {
      const Q = occupied[j]!;
      sum += g.re[(P * m + P) * m * m + Q * m + Q]! - g.re[(P * m + Q) * m * m + Q * m + P]!;
    }
  }
  return sum;
}
