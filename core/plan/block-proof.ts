import {
  chooseBlocks,
  encodedProgram,
  sizesOf,
  type TripletBits,
  tripletLayout,
  tripletTables,
} from '../circuit';
import { type Encoding, formatVariant, type VariantName } from '../encode';
import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { ComplexMatrix } from '../linalg';
import { programOperator, type SectorMatrix, sectorBasis, sectorMatrix, simulatedBlock } from '../verify';
import { type Check, check } from './evidence';

/** Circuits up to this many orbitals are simulated: the state grows with rows, bits and determinants. */
export const MAX_PROOF_ORBITALS = 3;

/**
 * Bits of the simulated circuit. The inner tables are coarse, because their uniform numbers multiply the state; what
 * they round is in the bound, and held exactly against the tables by a check of its own.
 */
const BITS: TripletBits = { keep: 20, innerKeep: 3, rotation: 16 };

/** Rounding of some ten thousand simulated gates, as a part of λ. */
const SIMULATION = 1e-10;

export interface BlockProof {
  /** Largest element of λ·⟨0|U|0⟩ + c − H over all columns, hartree. */
  readonly maxError: number;
  /** What the bits of the tables allow, hartree. */
  readonly bound: number;
  /** Determinants of the electron-number sector, all of them. */
  readonly columns: number;
  readonly check: Check;
}

/**
 * Simulates the emitted PREPARE† · SELECT · PREPARE of a triplet variant and compares its block, column by column,
 * with the operator that the rounded tables stand for (equal to rounding) and with H itself (within the bound that
 * follows from the bits).
 *
 * @returns null where no circuit of the variant can be simulated here.
 */
export async function proveBlock(
  hamiltonian: SpinHamiltonian,
  encoding: Encoding,
  variant: VariantName,
  context: JobContext,
): Promise<BlockProof | null> {
  if (hamiltonian.kind !== 'spatial' || !encoding.program || hamiltonian.orbitals > MAX_PROOF_ORBITALS)
    return null;
  if (variant.lookup === 'dirty') return null;
  const program = encoding.program();
  const tables = tripletTables(program, BITS);
  const layout = tripletLayout(sizesOf(program), BITS);
  const blocks = chooseBlocks(layout, BITS, { mode: variant.lookup, block: 'auto' }, null);
  const basis = sectorBasis(2 * hamiltonian.orbitals, hamiltonian.electrons);
  const block = await simulatedBlock(tables, variant.spin, blocks, basis, context);
  const lambda = encoding.lambda.total;
  const rounded = programOperator(encodedProgram(program, tables), basis);
  const exact = dense(await sectorMatrix(hamiltonian, hamiltonian.electrons, 'product', context));
  const name = `${formatVariant(variant)}: emitted circuit against its rounded tables, largest element`;
  return {
    maxError: largestDifference(block, lambda, encoding.constant, exact),
    bound: roundingBound(encoding, BITS),
    columns: basis.dim,
    check: check(
      name,
      largestDifference(block, lambda, 0, rounded),
      0,
      SIMULATION * lambda,
      'simulation of the emitted gates; rows and squares evaluated on Fock space',
    ),
  };
}

/**
 * Bound on the operator norm of what rounding changes. Weights: every probability is off by less than one unit, so
 * λ2^−ℵ for the outer table, four times λ₂2^−ℵ for the rows of squares, λ₁2^−ℵ for one-body rows. Angles: a unit vector
 * moves by at most δ = √(N−1)·π/2^b, each product by 2δ, a square T₂ by 8δ(1 + δ).
 */
function roundingBound({ lambda, shape }: Encoding, bits: TripletBits): number {
  const { oneBody, twoBody, total } = lambda;
  const delta = (Math.sqrt(shape.orbitals - 1) * Math.PI) / 2 ** bits.rotation;
  return (
    total * 2 ** -bits.keep +
    (4 * twoBody + oneBody) * 2 ** -bits.innerKeep +
    8 * delta * (1 + delta) * twoBody +
    2 * delta * oneBody
  );
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
