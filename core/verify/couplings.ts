import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { type ComplexMatrix, hermitianEigen, hermitianEigenvalues } from '../linalg';
import { sectorMatrix } from './sector-matrix';
import { denseMatrix } from './sparse';

/**
 * The lowest states of a Hamiltonian in some small space, and what a change of H does among them: to every level and
 * every coupling, since spin–orbit coupling between states far apart hardly moves a level.
 */
export interface WatchedStates {
  /** Their levels, hartree. */
  readonly levels: Float64Array;
  /**
   * P(a − b)P, P the projector on these states: to first order no level or matrix element among them changes by more than
   * its spectral norm, and none by more than `centred` against a shift that all share. Hartree.
   *
   * Both are matrices in the same space, of two Hamiltonians that differ as the given and a changed one do.
   */
  readonly change: (a: ComplexMatrix, b: ComplexMatrix) => StateChange;
}

export interface StateChange {
  readonly norm: number;
  readonly centred: number;
}

/** States nearer than this belong together, hartree: a hundredth of a wave number. */
const DEGENERATE = 5e-8;

/**
 * Diagonalises a matrix and keeps its lowest states.
 * @param states - counted with multiplicity; degenerate partners of the last one are added
 */
export function watchedStates(matrix: ComplexMatrix, states: number): WatchedStates {
  const { n, values, re, im } = hermitianEigen(matrix);
  let kept = Math.min(states, n);
  while (kept < n && values[kept]! - values[kept - 1]! < DEGENERATE) kept++;
  const change = (a: ComplexMatrix, b: ComplexMatrix) => {
    const projected = { n: kept, re: new Float64Array(kept * kept), im: new Float64Array(kept * kept) };
    const product = { re: new Float64Array(n), im: new Float64Array(n) };
    for (let j = 0; j < kept; j++) {
      for (let r = 0; r < n; r++) {
        let [x, y] = [0, 0];
        for (let c = 0, i = r * n, v = j * n; c < n; c++, i++, v++) {
          const [dr, di] = [a.re[i]! - b.re[i]!, a.im[i]! - b.im[i]!];
          x += dr * re[v]! - di * im[v]!;
          y += dr * im[v]! + di * re[v]!;
        }
        product.re[r] = x;
        product.im[r] = y;
      }
      for (let i = 0; i < kept; i++) {
        let [x, y] = [0, 0];
        for (let r = 0, v = i * n; r < n; r++, v++) {
          x += re[v]! * product.re[r]! + im[v]! * product.im[r]!;
          y += re[v]! * product.im[r]! - im[v]! * product.re[r]!;
        }
        projected.re[i * kept + j] = x;
        projected.im[i * kept + j] = y;
      }
    }
    const spectrum = hermitianEigenvalues(projected);
    const [low, high] = [spectrum[0]!, spectrum[kept - 1]!];
    return { norm: Math.max(Math.abs(low), Math.abs(high)), centred: (high - low) / 2 };
  };
  return { levels: values.slice(0, kept), change };
}

/** H among all determinants of its electrons as a dense matrix: for some hundred determinants. */
export async function denseSector(h: SpinHamiltonian, context: JobContext): Promise<ComplexMatrix> {
  const { dim, ...sparse } = await sectorMatrix(h, h.electrons, 'product', context);
  const { re, im } = denseMatrix({ dim, ...sparse });
  return { n: dim, re, im: im.length > 0 ? im : new Float64Array(re.length) };
}
