import { coulombBlock, planeOf, type SpatialHamiltonian } from '../../hamiltonian';
import { numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import { addScaledTo, symmetricEigenAsync } from '../../linalg';
import { weightedTraceOfPairs } from '../elements';
import { pairWeights } from './arrays';
import { meanField } from './mean-field';

/** What is fitted: G = Σ_l σ_l v_l v_lᵀ over orthonormal symmetric pairs, and what λ depends on besides. Hartree. */
export interface FitProblem {
  readonly n: number;
  /** n reference occupations 0…2. */
  readonly occupations: Float64Array;
  /** Σ n_p − η. */
  readonly excess: number;
  /** k⁰ + Φ[G] with the mean field Φ of mean-field.ts, n×n: what κ⁰ is with nothing fitted. */
  readonly field: Float64Array;
  /** n weights w: residuals count as w_p w_q w_r w_s D_pqrs, and G, columns and d below carry them. */
  readonly weights: Float64Array;
  readonly count: number;
  /** count × npair. */
  readonly columns: Float64Array;
  /** σ_l = ±1. */
  readonly signs: Float64Array;
  /** G d with d the identity in pair coordinates, and ‖G‖². */
  readonly trace: Float64Array;
  readonly square: number;
}

/**
 * The charge part, weighted, by its eigenvectors without the smallest: their Frobenius norm stays ≤ `leftOut`. Whatever the
 * number of columns, residuals are later taken from G itself.
 */
export async function fitProblem(
  h: SpatialHamiltonian,
  occupations: ArrayLike<number>,
  { emphasis, leftOut }: { readonly emphasis: number; readonly leftOut: number },
  ctx: JobContext,
): Promise<FitProblem> {
  const n = h.orbitals;
  const npair = numSymmetricPairs(n);
  const g = coulombBlock(n, h.g);
  const field = Float64Array.from(planeOf(h.k, 0));
  addScaledTo(field, meanField(g, n, occupations).plane, 1);
  const weights = orbitalWeights(field, n, h.electrons, emphasis);
  const scale = pairWeights(weights);
  for (let i = 0; i < g.length; i++) g[i]! *= scale[Math.floor(i / npair)]! * scale[i % npair]!;
  const { values, vectors } = await symmetricEigenAsync(g, npair, ctx);
  const order = Array.from(values.keys()).sort((a, b) => Math.abs(values[b]!) - Math.abs(values[a]!));
  let count = npair;
  for (let rest = 0; count > 0; count--) {
    rest += values[order[count - 1]!]! ** 2;
    if (rest > leftOut * leftOut) break;
  }
  const columns = new Float64Array(count * npair);
  const signs = new Float64Array(count);
  const trace = new Float64Array(npair);
  const squares = weights.map((w) => w * w);
  let square = 0;
  for (let l = 0; l < count; l++) {
    const value = values[order[l]!]!;
    const vector = vectors.subarray(order[l]! * npair, (order[l]! + 1) * npair);
    signs[l] = Math.sign(value);
    square += value * value;
    addScaledTo(trace, vector, value * weightedTraceOfPairs(vector, 0, n, squares));
    const size = Math.sqrt(Math.abs(value));
    for (let i = 0; i < npair; i++) columns[l * npair + i] = size * vector[i]!;
  }
  const filling = Float64Array.from(occupations);
  const excess = filling.reduce((sum, x) => sum + x, 0) - h.electrons;
  return { n, occupations: filling, excess, field, weights, count, columns, signs, trace, square };
}

/** Distance from the Fermi level at which orbitals begin to count less, hartree: a typical excitation. */
const NEAR = 0.5;

/**
 * w_p = (1 + |ε_p − ε_F|/½ Eh)^−emphasis with ε the diagonal of the Fock operator and ε_F halfway between the highest
 * filled and the lowest empty level: four of them fall about like the energy denominators that divide what D does to an energy. Our
 * own choice.
 *
 * @param field - k⁰ + Φ[G], for a closed shell the Fock matrix
 */
export function orbitalWeights(
  field: Float64Array,
  n: number,
  electrons: number,
  emphasis: number,
): Float64Array {
  const levels = Float64Array.from({ length: n }, (_, p) => field[p * n + p]!);
  const ascending = Float64Array.from(levels).sort();
  const filled = Math.min(n, Math.max(1, Math.ceil(electrons / 2)));
  const fermi = 0.5 * (ascending[filled - 1]! + ascending[Math.min(n - 1, filled)]!);
  return levels.map((level) => (1 + Math.abs(level - fermi) / NEAR) ** -emphasis);
}
