import { expect, it } from 'vitest';
import {
  encodedSparseProgram,
  type LookupPolicy,
  type SparseTables,
  sparseStep,
  sparseTables,
} from '../../../core/circuit';
import { buildEncoding, parseVariant, termSizes } from '../../../core/encode';
import { buildHamiltonian, type SpatialHamiltonian } from '../../../core/hamiltonian';
import type { SelectableTerm } from '../../../core/integrals';
import { inlineContext } from '../../../core/job';
import type { ComplexMatrix } from '../../../core/linalg';
import {
  sectorBasis,
  sectorMatrix,
  simulatedBlock,
  sparseBlock,
  sparseProgramOperator,
} from '../../../core/verify';
import { findSet, loadSet } from '../../published/data-set';

const POLICY: LookupPolicy = { mode: 'clean', block: 'auto', qubitCap: null };
const SPIN_ORBIT: SelectableTerm[] = ['sf', 'so1', 'somf', 'so2'];

/** max |scale·block + shift − expected|. */
function worst(block: ComplexMatrix, scale: number, shift: number, expected: ComplexMatrix): number {
  let largest = 0;
  for (let i = 0; i < block.re.length; i++) {
    const diagonal = i % (block.n + 1) === 0 ? shift : 0;
    const re = scale * block.re[i]! + diagonal - expected.re[i]!;
    largest = Math.max(largest, Math.hypot(re, scale * block.im[i]! - expected.im[i]!));
  }
  return largest;
}

/** H on the sector from the integrals, by the Slater–Condon route of the exact solver. */
async function exactMatrix(h: SpatialHamiltonian): Promise<ComplexMatrix> {
  const matrix = await sectorMatrix(h, h.electrons, 'product', inlineContext());
  const n = matrix.dim;
  const out = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  for (let j = 0; j < n; j++) {
    out.re[j * n + j] = matrix.diagonal[j]!;
    for (let e = matrix.start[j]!; e < matrix.start[j + 1]!; e++) {
      const i = matrix.row[e]!;
      const im = matrix.im[e] ?? 0;
      out.re[i * n + j] = out.re[j * n + i] = matrix.re[e]!;
      out.im[i * n + j] = im;
      out.im[j * n + i] = -im;
    }
  }
  return out;
}

/** Σ |change of weight| that rounding makes: no eigenvalue of H moves by more. */
function roundingNorm(tables: SparseTables): { weights: number; shares: number } {
  const { program } = tables;
  const encoded = encodedSparseProgram(tables);
  let weights = 0;
  let shares = 0;
  for (const [i, weight] of program.weights.entries()) {
    weights += Math.abs(encoded.weights[i]! - weight);
    const kind = program.kinds[program.kindOf[i]!]!;
    if (kind.form === 'pairs' && kind.shared) {
      shares += 2 * weight * Math.abs(encoded.otherShare - program.otherShare);
    }
  }
  return { weights, shares };
}

it.each([
  ['two-electron spin–orbit', '-', SPIN_ORBIT],
  ['spin–spin too', '-', [...SPIN_ORBIT, 'ss']],
  ['joined, charge', 'joint', ['sf']],
  ['joined, two-electron spin–orbit', 'joint', SPIN_ORBIT],
  ['joined, spin–spin too', 'joint', [...SPIN_ORBIT, 'ss']],
] as const)('the emitted circuit encodes fluorine 2p⁵ integrals, %s', async (_, grouping, terms) => {
  const context = inlineContext();
  const set = await loadSet(findSet('f_sto3g_2p')!);
  const h = buildHamiltonian(set, { terms: [...terms] }) as SpatialHamiltonian;
  const variant = parseVariant(`sparse/${grouping}/index/none/clean`);
  const encoding = await buildEncoding(h, null, variant, {}, context);
  const program = encoding.sparseProgram!();
  expect(termSizes(program)).toEqual(encoding.shape.terms);

  const keepBits = 20;
  const step = sparseStep(encoding.shape.terms!, { keepBits, phaseBits: 1 }, POLICY);
  const tables = sparseTables(program, step.bits, step.refinement);
  const basis = sectorBasis(6, 5);
  const block = await simulatedBlock(sparseBlock(tables, step.blocks), basis, context);

  const lambda = encoding.lambda.total;
  const rounded = sparseProgramOperator(encodedSparseProgram(tables), basis);
  expect(worst(block, lambda, 0, rounded)).toBeLessThan(1e-12 * lambda);

  const bound = roundingNorm(tables);
  expect(bound.weights).toBeLessThan(2 * lambda * 2 ** -keepBits);
  expect(bound.shares).toBeLessThan((lambda * 2 ** -keepBits) / Math.sqrt(12 * program.weights.length));
  const error = worst(block, lambda, encoding.constant, await exactMatrix(h));
  expect(error).toBeLessThan(bound.weights + bound.shares);
});

it.each(['-', 'joint'])(
  'the program holds the rows that the encoding counted, formaldehyde in eight orbitals, %s',
  async (grouping) => {
    const set = await loadSet(findSet('ch2o_sto3g_8o')!);
    const h = buildHamiltonian(set, { terms: [...SPIN_ORBIT, 'ss'] });
    const variant = parseVariant(`sparse/${grouping}/index/none/clean`);
    const encoding = await buildEncoding(h, null, variant, { threshold: 1e-4 }, inlineContext());
    const program = encoding.sparseProgram!();
    expect(termSizes(program)).toEqual(encoding.shape.terms);
    expect(program.weights.reduce((a, b) => a + b, 0)).toBeCloseTo(encoding.lambda.total, 10);
    for (let i = 0; i < program.weights.length; i++) {
      const [p, q, r, s] = program.orbitalsOf.subarray(4 * i, 4 * i + 4) as unknown as [
        number,
        number,
        number,
        number,
      ];
      const kind = program.kinds[program.kindOf[i]!]!;
      if (kind.form === 'pairs') {
        expect(q).toBeLessThanOrEqual(kind.antisymmetric ? p - 1 : p);
        expect(s).toBeLessThanOrEqual(r);
      }
      expect(Math.max(p, q, r, s)).toBeLessThan(8);
    }
  },
);
