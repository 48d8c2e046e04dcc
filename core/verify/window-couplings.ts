import type { SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { type ComplexMatrix, hermitianEigen, hermitianEigenvalues } from '../linalg';
import { sectorMatrix } from './sector-matrix';
import { denseMatrix } from './sparse';

/**
 * What a change of H does among the lowest states of a small system: of them it looks at every level and every
 * coupling, since spin–orbit coupling between states far apart hardly moves a level.
 */
export interface WindowCouplings {
  /** Lowest levels of the given Hamiltonian, hartree. */
  readonly levels: Float64Array;
  /**
   * Spectral norm of P(given − changed)P, P the projector on these states: no level, splitting or matrix element among
   * them changes by more to first order. Hartree.
   *
   * @param parts - two Hamiltonians of the same orbitals and electrons that differ as the given and the changed one do
   */
  readonly change: (parts: readonly [SpatialHamiltonian, SpatialHamiltonian]) => Promise<number>;
}

/**
 * Diagonalises a small system and keeps its lowest states.
 * @param states - counted with multiplicity; degenerate partners of the last one are added
 */
export async function windowCouplings(
  given: SpatialHamiltonian,
  states: number,
  context: JobContext,
): Promise<WindowCouplings> {
  const matrixOf = async (h: SpatialHamiltonian): Promise<ComplexMatrix> => {
    const sparse = await sectorMatrix(h, given.electrons, 'product', context);
    const { re, im } = denseMatrix(sparse);
    return { n: sparse.dim, re, im: im.length > 0 ? im : new Float64Array(re.length) };
  };
  const { n, values, re, im } = hermitianEigen(await matrixOf(given));
  let kept = Math.min(states, n);
  while (kept < n && values[kept]! - values[kept - 1]! < DEGENERATE) kept++;
  const change = async ([a, b]: readonly [SpatialHamiltonian, SpatialHamiltonian]) => {
    const [left, right] = [await matrixOf(a), await matrixOf(b)];
    const d = { re: left.re.map((x, i) => x - right.re[i]!), im: left.im.map((x, i) => x - right.im[i]!) };
    const projected = { n: kept, re: new Float64Array(kept * kept), im: new Float64Array(kept * kept) };
    const product = { re: new Float64Array(n), im: new Float64Array(n) };
    for (let j = 0; j < kept; j++) {
      for (let r = 0; r < n; r++) {
        let [x, y] = [0, 0];
        for (let c = 0; c < n; c++) {
          const [dr, di] = [d.re[r * n + c]!, d.im[r * n + c]!];
          const [vr, vi] = [re[j * n + c]!, im[j * n + c]!];
          x += dr * vr - di * vi;
          y += dr * vi + di * vr;
        }
        product.re[r] = x;
        product.im[r] = y;
      }
      for (let i = 0; i < kept; i++) {
        let [x, y] = [0, 0];
        for (let r = 0; r < n; r++) {
          const [vr, vi] = [re[i * n + r]!, im[i * n + r]!];
          x += vr * product.re[r]! + vi * product.im[r]!;
          y += vr * product.im[r]! - vi * product.re[r]!;
        }
        projected.re[i * kept + j] = x;
        projected.im[i * kept + j] = y;
      }
    }
    const spectrum = hermitianEigenvalues(projected);
    return Math.max(Math.abs(spectrum[0]!), Math.abs(spectrum[kept - 1]!));
  };
  return { levels: values.slice(0, kept), change };
}

/** States nearer than this belong together, hartree: a hundredth of a wave number. */
const DEGENERATE = 5e-8;
