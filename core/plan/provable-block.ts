import {
  chooseBlocks,
  chooseSpinorTables,
  encodedProgram,
  encodedSparseProgram,
  encodedSpinorProgram,
  type LookupPolicy,
  sizesOf,
  sparseStep,
  sparseTables,
  spinorTables,
  tripletLayout,
  tripletTables,
} from '../circuit';
import type { Encoding, VariantName } from '../encode';
import type { ComplexMatrix } from '../linalg';
import {
  programOperator,
  type SectorBasis,
  type SteeredBlock,
  sparseBlock,
  sparseProgramOperator,
  spinorBlock,
  spinorProgramOperator,
  tripletBlock,
} from '../verify';

/** An emitted block encoding, and what its block is to be. */
export interface ProvableBlock {
  readonly circuit: SteeredBlock;
  /** H − c that the rounded tables stand for. */
  encoded(basis: SectorBasis): ComplexMatrix;
  /** Operator norm of what rounding may change of H, hartree. */
  readonly bound: number;
  /** Modes of the circuit are e^{iφ_P} ψ_P; null: all φ are 0. */
  readonly phases: Float64Array | null;
}

/**
 * Bits of simulated circuits. The inner tables are coarse, because their uniform numbers multiply the state; what
 * they round is in the bound, and held exactly against the tables by a check of its own.
 */
const BITS = { keep: 20, innerKeep: 3, rotation: 16 };

/** The block encoding of a variant at the bits of a proof; null where none is emitted. */
export function provableBlock(encoding: Encoding, variant: VariantName): ProvableBlock | null {
  const policy: LookupPolicy = { mode: variant.lookup, block: 'auto', qubitCap: null };
  if (encoding.program) return provableTriplet(encoding, encoding.program(), variant, policy);
  if (encoding.spinorProgram) return provableSpinor(encoding, encoding.spinorProgram(), policy);
  if (encoding.sparseProgram) return provableSparse(encoding, encoding.sparseProgram(), policy);
  return null;
}

function provableTriplet(
  encoding: Encoding,
  program: ReturnType<NonNullable<Encoding['program']>>,
  variant: VariantName,
  policy: LookupPolicy,
): ProvableBlock {
  const tables = tripletTables(program, BITS);
  const blocks = chooseBlocks(program.orbitals, tripletLayout(sizesOf(program), BITS), BITS, policy, null);
  return {
    circuit: tripletBlock(tables, variant.spin, blocks),
    encoded: (basis) => programOperator(encodedProgram(program, tables), basis),
    bound: squaresBound(encoding, Math.sqrt(program.orbitals - 1)),
    phases: null,
  };
}

function provableSpinor(
  encoding: Encoding,
  program: ReturnType<NonNullable<Encoding['spinorProgram']>>,
  policy: LookupPolicy,
): ProvableBlock {
  const { layout, blocks } = chooseSpinorTables(encoding.shape.spinors!, BITS, policy, null);
  const tables = spinorTables(program, BITS, layout.merged);
  return {
    circuit: spinorBlock(tables, blocks),
    encoded: (basis) => spinorProgramOperator(encodedSpinorProgram(program, tables), basis),
    // |dq|² of an orbital's spinor q = e^{iβ}(cos θ, e^{iδ} sin θ) is at most dθ² + (|dβ| + |dδ|)². Where axial rows
    // are coarser there are no such q, and √(N − 1) of the others with a quarter of axial ones on top is less.
    bound: squaresBound(encoding, Math.sqrt(program.orbitals + 4)),
    phases: program.phases,
  };
}

function provableSparse(
  encoding: Encoding,
  program: ReturnType<NonNullable<Encoding['sparseProgram']>>,
  policy: LookupPolicy,
): ProvableBlock {
  const step = sparseStep(encoding.shape.terms!, { keepBits: BITS.keep, phaseBits: 1 }, policy);
  const tables = sparseTables(program, step.bits, step.refinement);
  const encoded = encodedSparseProgram(tables);
  // Every coefficient stands for an operator of norm 1.
  let bound = 0;
  for (const [i, weight] of program.weights.entries()) {
    bound += Math.abs(encoded.weights[i]! - weight);
    const kind = program.kinds[program.kindOf[i]!]!;
    if (kind.form === 'pairs' && kind.shared)
      bound += 2 * weight * Math.abs(encoded.otherShare - program.otherShare);
  }
  return {
    circuit: sparseBlock(tables, step.blocks),
    encoded: (basis) => sparseProgramOperator(encoded, basis),
    bound,
    phases: null,
  };
}

/**
 * Bound on the operator norm of what rounding changes. Weights: every probability is off by less than one unit, so
 * λ2^−ℵ for the outer table, four times λ₂2^−ℵ for the rows of squares, λ₁2^−ℵ for one-body rows. Angles: a unit vector
 * moves by at most δ, each product by 2δ, a square T₂ by 8δ(1 + δ).
 *
 * @param steps - δ in units of half a step, π/2^b
 */
function squaresBound({ lambda }: Encoding, steps: number): number {
  const { oneBody, twoBody, total } = lambda;
  const delta = (steps * Math.PI) / 2 ** BITS.rotation;
  return (
    total * 2 ** -BITS.keep +
    (4 * twoBody + oneBody) * 2 ** -BITS.innerKeep +
    8 * delta * (1 + delta) * twoBody +
    2 * delta * oneBody
  );
}
