import type { FrameRecord } from '../frame';
import type { ArrayLayout } from './arrays';

/** A turned basis as `tables.json` describes it; its matrix is the array {@link FRAME_ARRAY}. */
export type FrameSummary = Omit<FrameRecord, 'variants' | 'rotation' | 'turned'>;

/** Whatever the form; written where the basis is a turned one, and its extent stands in `sizes`. */
export const FRAME_ARRAY: ArrayLayout = {
  name: 'frame',
  type: '<f8',
  shape: ['frame', 'frame'],
  meaning: 'the turned basis over the given one, see conventions: basis',
};

/** A turned basis, read back. */
export interface StoredFrame {
  readonly kind: FrameRecord['kind'];
  /** 3×3 for spin axes, N×N for orbitals. */
  readonly size: number;
  readonly rotation: Float64Array;
}
