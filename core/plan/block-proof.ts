import { type Encoding, formatVariant, type VariantName } from '../encode';
import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { ComplexMatrix } from '../linalg';
import { type SectorBasis, type SectorMatrix, sectorBasis, sectorMatrix, simulatedBlock } from '../verify';
import { type Check, check } from './evidence';
import { provableBlock } from './provable-block';

/** Circuits up to this many orbitals are simulated: the state grows with rows, bits and determinants. */
export const MAX_PROOF_ORBITALS = 3;

/** Rounding of some ten thousand simulated gates, as a part of λ. */
const SIMULATION = 1e-10;

export interface BlockProof {
  /** Largest element of λ·⟨0|U|0⟩ + c − H over all columns, hartree. */
  readonly maxError: number;
  /** What the bits of the tables and what truncation dropped allow, hartree. */
  readonly bound: number;
  /** Determinants of the electron-number sector, all of them. */
  readonly columns: number;
  readonly check: Check;
}

/**
 * Simulates the emitted PREPARE† · SELECT · PREPARE of a variant and compares its block, column by column, with the
 * operator that the rounded tables stand for (equal to rounding) and with H itself (within the bound that follows
 * from the bits).
 *
 * @returns null where no circuit of the variant can be simulated here.
 */
export async function proveBlock(
  hamiltonian: SpinHamiltonian,
  encoding: Encoding,
  variant: VariantName,
  context: JobContext,
): Promise<BlockProof | null> {
  if (encoding.shape.orbitals > MAX_PROOF_ORBITALS) return null;
  const provable = provableBlock(encoding, variant);
  if (!provable) return null;
  const { electrons } = hamiltonian;
  const basis = sectorBasis(2 * encoding.shape.orbitals, electrons);
  const block = await simulatedBlock(provable.circuit, basis, context);
  const lambda = encoding.lambda.total;
  const exact = dense(await sectorMatrix(hamiltonian, electrons, 'product', context));
  if (provable.phases) turn(exact, provable.phases, basis);
  const name = `${formatVariant(variant)}: emitted circuit against its rounded tables, largest element`;
  return {
    maxError: largestDifference(block, lambda, encoding.constant, exact),
    bound: provable.bound + encoding.residual.oneNormBound,
    columns: basis.dim,
    check: check(
      name,
      largestDifference(block, lambda, 0, provable.encoded(basis)),
      0,
      SIMULATION * lambda,
      'simulation of the emitted gates; rows and squares evaluated on Fock space',
    ),
  };
}

/** ⟨a|H|b⟩ over modes e^{iφ_P} ψ_P, in place. */
function turn({ n, re, im }: ComplexMatrix, phases: Float64Array, { states }: SectorBasis): void {
  const total = Float64Array.from(states, (state) =>
    phases.reduce((sum, phi, p) => sum + ((state >>> p) & 1 ? phi : 0), 0),
  );
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      const angle = total[j]! - total[i]!;
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      const [x, y] = [re[i * n + j]!, im[i * n + j]!];
      re[i * n + j] = c * x - s * y;
      im[i * n + j] = c * y + s * x;
    }
  }
}

/** max |scale·a + shift·1 − b|. */
function largestDifference(a: ComplexMatrix, scale: number, shift: number, b: ComplexMatrix): number {
  let largest = 0;
  for (let i = 0; i < a.n; i++) {
    for (let j = 0; j < a.n; j++) {
      const at = i * a.n + j;
      const re = scale * a.re[at]! + (i === j ? shift : 0) - b.re[at]!;
      largest = Math.max(largest, Math.hypot(re, scale * a.im[at]! - b.im[at]!));
    }
  }
  return largest;
}

function dense(matrix: SectorMatrix): ComplexMatrix {
  const n = matrix.dim;
  const out = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  for (let j = 0; j < n; j++) {
    out.re[j * n + j] = matrix.diagonal[j]!;
    for (let e = matrix.start[j]!; e < matrix.start[j + 1]!; e++) {
      const i = matrix.row[e]!;
      out.re[i * n + j] = out.re[j * n + i] = matrix.re[e]!;
      const im = matrix.im.length > 0 ? matrix.im[e]! : 0;
      out.im[i * n + j] = im;
      out.im[j * n + i] = -im;
    }
  }
  return out;
}
