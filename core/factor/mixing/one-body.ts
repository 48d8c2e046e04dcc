import { symmetricEigenvalues } from '../../linalg';
import { type PlaneSlot, planeInto } from '../elements';
import { addPairs, antisymmetricNorm, shiftedNorms, smoothMedian } from '../smooth-norms';

/** A plane of κ that the shifts of factors act on. */
export interface ShiftedPlane {
  /** Where the plane of a factor that goes with it stands in a column. */
  readonly slot: Pick<PlaneSlot, 'symmetric' | 'offset' | 'length'>;
  /** n×n, hartree, without any shift: the same for every mixing of the factors. */
  readonly kappa: Float64Array;
}

/** Σ over planes of ‖κ^μ + excess Σ_t σ_t c_t L^{t,μ}‖_*, the charge plane with its own best shift. */
export interface OneBodyNorm {
  readonly smooth: number;
  readonly exact: number;
}

export interface FactorRows {
  readonly n: number;
  readonly count: number;
  /** count × dim. */
  readonly columns: Float64Array;
  readonly dim: number;
  readonly shifts: Float64Array;
  /** ±1 a factor. */
  readonly signs: ArrayLike<number>;
}

/** Adds the derivatives to `columns` (count × dim) and `shifts`. */
export function oneBodyNorm(
  planes: readonly ShiftedPlane[],
  excess: number,
  rows: FactorRows,
  width: number,
  gradient: { readonly columns: Float64Array; readonly shifts: Float64Array },
): OneBodyNorm {
  const { n, count, dim, columns, shifts, signs } = rows;
  const matrix = new Float64Array(n * n);
  let smooth = 0;
  let exact = 0;
  for (const { slot, kappa } of planes) {
    const { offset, length, symmetric } = slot;
    const sum = new Float64Array(length);
    for (let t = 0; t < count; t++) {
      const scale = excess * signs[t]! * shifts[t]!;
      if (scale === 0) continue;
      for (let i = 0, at = t * dim + offset; i < length; i++, at++) sum[i]! += scale * columns[at]!;
    }
    planeInto(matrix, 0, sum, 0, n, symmetric);
    let square = 0;
    for (let i = 0; i < n * n; i++) {
      matrix[i]! += kappa[i]!;
      square += kappa[i]! * kappa[i]!;
    }
    // The size of a typical eigenvalue: δ is relative to that.
    const delta = width * Math.sqrt(square / n);
    const found = symmetric ? chargeNorm(matrix, n, delta) : antisymmetricNorm(matrix, n, delta);
    smooth += found.norm;
    exact += found.exact;
    if (excess === 0) continue;
    const slope = new Float64Array(length);
    addPairs(slope, 0, found.direction, n, symmetric, excess);
    for (let t = 0; t < count; t++) {
      let overlap = 0;
      const scale = signs[t]! * shifts[t]!;
      for (let i = 0, at = t * dim + offset; i < length; i++, at++) {
        overlap += slope[i]! * columns[at]!;
        gradient.columns[at]! += scale * slope[i]!;
      }
      gradient.shifts[t]! += signs[t]! * overlap;
    }
  }
  return { smooth, exact };
}

/** About the point that makes the norm least: there it has no slope, so its derivative needs no further term. */
function chargeNorm(matrix: Float64Array, n: number, delta: number) {
  const values = symmetricEigenvalues(matrix, n);
  const found = shiftedNorms(matrix, n, [smoothMedian(values, delta)], [1], delta);
  const middle = smoothMedian(values, 0);
  let exact = 0;
  for (const x of values) exact += Math.abs(x - middle);
  return { ...found, exact };
}
