import { formatVariant, type VariantName } from '../encode';
import { rotateOrbitals, rotateSpin, type SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { transpose } from '../linalg';

/** Whether a basis of the Hamiltonian is taken as the files have it, or turned for a smaller λ. */
export const FRAME_CHOICES = ['given', 'optimised'] as const;
export type FrameChoice = (typeof FRAME_CHOICES)[number];

/** Which frames are optimised. Spin axes serve factors over spin components, orbitals the sparse form. */
export interface FrameRequest {
  readonly spin: FrameChoice;
  readonly orbital: FrameChoice;
}

export const GIVEN_FRAMES: FrameRequest = { spin: 'given', orbital: 'given' };

/** A frame that was sought: what it is and what it brought. Plain data, part of the documents. */
export interface FrameRecord {
  readonly kind: 'spin' | 'orbital';
  /** Variants that use it. */
  readonly variants: readonly string[];
  /** The variant whose λ and rows stand here: at the request's threshold, decomposed anew in both frames. */
  readonly judgedBy: string;
  /** False where the given frame was kept, because no better one was found: the rotation is then 1. */
  readonly turned: boolean;
  /**
   * Spin: 3×3 with T^k → Σ_l R_kl T^l. Orbitals: N×N, φ'_p = Σ_q U_pq φ_q. Orthogonal: the transpose turns back.
   */
  readonly rotation: readonly (readonly number[])[];
  /** Hartree. */
  readonly lambda: { readonly before: number; readonly after: number };
  /** Table rows, or coefficients of the sparse form. */
  readonly rows: { readonly before: number; readonly after: number };
  /** Points at which the search looked. */
  readonly evaluations: number;
}

/** The Hamiltonian of the files in another basis. */
export interface Frame {
  /** In that basis; the given one where none better was found. */
  readonly hamiltonian: SpatialHamiltonian;
  readonly record: Omit<FrameRecord, 'variants'>;
}

/** A Hamiltonian over the frame's basis, over the given one. */
export async function turnedBack(
  hamiltonian: SpatialHamiltonian,
  { record }: Frame,
  context: JobContext,
): Promise<SpatialHamiltonian> {
  if (!record.turned) return hamiltonian;
  const size = record.rotation.length;
  const back = transpose(Float64Array.from(record.rotation.flat()), size, size);
  return record.kind === 'spin' ? rotateSpin(hamiltonian, back) : rotateOrbitals(hamiltonian, back, context);
}

/** λ must fall by this part of itself for a frame to be taken: less is not worth rows that symmetry left empty. */
export const WORTHWHILE = 1e-7;

/** The variant that a frame is sought for, or null where none can help: its λ does not depend on any. */
export function judgeOf(variant: VariantName, { spin, orbital }: FrameRequest): VariantName | null {
  const { factorisation, grouping, shift } = variant;
  if (factorisation === 'sparse') return orbital === 'optimised' ? { ...variant, lookup: 'clean' } : null;
  // The norm of a factor over all spin orbitals does not know where the axes point.
  if (factorisation === 'spinor' || spin === 'given') return null;
  return {
    factorisation: 'triplet',
    grouping,
    spin: 'index',
    shift: shift === 'none' ? 'none' : 'median',
    lookup: 'clean',
  };
}

/** What a reader of the table should know of a variant's frame, in one sentence. */
export function frameNote(record: Omit<FrameRecord, 'variants'>, variant: VariantName): string {
  const what = record.kind === 'spin' ? 'spin axes' : 'orbitals';
  const { before, after } = record.lambda;
  if (!record.turned) {
    return `${what} as given: none of ${record.evaluations} others that were tried lowers λ`;
  }
  const own = formatVariant({ ...variant, spin: 'index', lookup: 'clean' }) === record.judgedBy;
  const change = (100 * (after - before)) / before;
  return (
    `${what} turned: λ${own ? '' : ` of ${record.judgedBy}`} ${figure(before)} → ${figure(after)} Eh ` +
    `(${change.toPrecision(2).replace('-', '−')} %), rows ${record.rows.before} → ${record.rows.after}`
  );
}

const figure = (x: number): string => x.toPrecision(8);

/** Rows of a square matrix. */
export function rowsOf(matrix: ArrayLike<number>, n: number): number[][] {
  return Array.from({ length: n }, (_, p) => Array.from({ length: n }, (_, q) => matrix[p * n + q]!));
}
