import { describe, expect, it } from 'vitest';
import {
  type LookupPolicy,
  type Subroutine,
  sparseStepByFormula as sparseStep,
  spinorStepByFormula,
  tripletStepByFormula as tripletStep,
} from '../../../core/circuit';
import type { EncodingShape } from '../../../core/encode';
import { peakOf, stepCost } from '../../../core/estimate';

const CLEAN: LookupPolicy = { mode: 'clean', block: 'auto', qubitCap: null };
const SHAPE: EncodingShape = {
  kind: 'triplet',
  orbitals: 8,
  factors: 124,
  rows: 2062,
  pairRows: 700,
  oneBodyRows: 20,
  oneBodyPairRows: 12,
  maxRowsPerFactor: 28,
  spinDependent: true,
};
const BITS = { keepBits: 17, rotationBits: 18, phaseBits: 20 };
const N = SHAPE.orbitals;
const BETA = BITS.rotationBits;

/** Look-up and erasure at their best block, written out independently of the code under test. */
const powers = Array.from({ length: 14 }, (_, j) => 2 ** j);
const q = (rows: number, bits: number) =>
  Math.min(...powers.map((k) => Math.ceil(rows / k) + bits * (k - 1)));
const qErase = (rows: number) => Math.min(...powers.map((k) => Math.ceil(rows / k) + k));

describe('triplet step', () => {
  const swap = stepCost(tripletStep(SHAPE, 'swap-layers', BITS, CLEAN));
  const index = stepCost(tripletStep(SHAPE, 'index', BITS, CLEAN));

  it('rotates 8(N−1) times with swap layers, twice as often with spin in the index', () => {
    expect(swap.parts['select.rotations']).toBe(8 * (N - 1) * (BETA - 2));
    expect(index.parts['select.rotations']).toBe(16 * (N - 1) * (BETA - 2));
  });

  it('spends 6N fermionic swaps and 8N T with swap layers, no swaps and 16N T without', () => {
    expect(swap.parts['select.swaps']).toBe(6 * N);
    expect(index.parts['select.swaps']).toBe(0);
    expect(swap.t).toBe(8 * N);
    expect(index.t).toBe(16 * N);
  });

  it('looks up and erases angles as composed by hand, the same for both', () => {
    const b = (N - 1) * BETA;
    const { rows, pairRows, oneBodyRows, oneBodyPairRows } = SHAPE;
    const byHand =
      q(rows + oneBodyRows, b + 4) +
      q(rows, b + 4) +
      q(pairRows + oneBodyPairRows, b) +
      q(pairRows, b) +
      qErase(rows + oneBodyRows) +
      qErase(rows);
    expect(swap.parts['select.lookup']).toBe(byHand);
    expect(index.parts['select.lookup']).toBe(byHand);
  });

  it('differs between the two ways of treating spin in rotations, swaps and the one-body switch only', () => {
    const saved = 8 * (N - 1) * (BETA - 2);
    expect(index.toffoli - swap.toffoli).toBe(saved - 6 * N + 2);
  });

  it('drops the middle swap layer and all T gates for a spin-free Hamiltonian', () => {
    const spinFree = { ...SHAPE, spinDependent: false, pairRows: 0, oneBodyPairRows: 0 };
    const cost = stepCost(tripletStep(spinFree, 'swap-layers', BITS, CLEAN));
    expect(cost.parts['select.swaps']).toBe(4 * N);
    expect(cost.t).toBe(0);
    expect(cost.parts['select.lookup']).toBeLessThan(swap.parts['select.lookup']);
  });
});

describe('spinor step', () => {
  it('rotates 12(2N−1) times and swaps partners in four layers', () => {
    const shape: EncodingShape = { ...SHAPE, kind: 'spinor', pairRows: 0, oneBodyPairRows: 0 };
    const cost = stepCost(spinorStepByFormula(shape, BITS, CLEAN));
    expect(cost.parts['select.rotations']).toBe(12 * (2 * N - 1) * (BETA - 2));
    expect(cost.parts['select.swaps']).toBe(4 * N);
    expect(cost.t).toBe(0);
  });
});

describe('sparse step', () => {
  const sizes = { orbitals: 54, coefficients: 705831, keepBits: 10, phaseBits: 22 };

  it('runs four ranged iterations over 2N modes, two of them under a control', () => {
    const cost = stepCost(sparseStep({ ...sizes, spinDependent: false }, CLEAN));
    expect(cost.parts['select.other']).toBe(2 * (108 - 2) + 2 * (108 - 1));
    expect(cost.t).toBe(0);
  });

  it('stores three component bits a pair where coefficients carry spin, and exchanges Majorana kinds by 16N T', () => {
    const block32 = { ...CLEAN, block: 32 };
    const free = stepCost(sparseStep({ ...sizes, spinDependent: false }, block32));
    const spin = stepCost(sparseStep({ ...sizes, spinDependent: true }, block32));
    expect(spin.t).toBe(16 * 54);
    // 12 more bits in 31 copies; 6 more in the alias swap and 3 in the pair swap, both ways; 2 plus qubits reflected.
    expect(spin.toffoli - free.toffoli).toBe(12 * 31 + 2 * (6 + 3) + 2);
  });
});

describe('blocks, caps and borrowed wires', () => {
  const peak = (policy: LookupPolicy) => peakOf(tripletStep(SHAPE, 'swap-layers', BITS, policy)).qubits;
  const toffoli = (policy: LookupPolicy) => stepCost(tripletStep(SHAPE, 'swap-layers', BITS, policy)).toffoli;

  it('keeps under the cap where that is possible, at a price in Toffoli', () => {
    const free = peak(CLEAN);
    const capped = { ...CLEAN, qubitCap: free - 1 };
    expect(peak(capped)).toBeLessThan(free);
    expect(toffoli(capped)).toBeGreaterThan(toffoli(CLEAN));
  });

  it('gives the angle look-up the block it was told', () => {
    const blocks = blocksOf(tripletStep(SHAPE, 'swap-layers', BITS, { ...CLEAN, block: 16 }));
    expect(blocks.get('angle look-up')).toBe(16);
    expect(blocks.get('outer alias look-up')).not.toBe(16);
  });

  it('never needs more qubits with borrowed wires than with plain look-up', () => {
    expect(peak({ ...CLEAN, mode: 'dirty' })).toBe(peak({ ...CLEAN, mode: 'plain' }));
    expect(toffoli({ ...CLEAN, mode: 'dirty' })).toBeLessThan(toffoli({ ...CLEAN, mode: 'plain' }));
    expect(toffoli(CLEAN)).toBeLessThan(toffoli({ ...CLEAN, mode: 'dirty' }));
  });

  it('allocates what it cannot borrow', () => {
    const forced = { mode: 'dirty', block: 64, qubitCap: null } as const;
    expect(peak(forced)).toBeGreaterThan(peak({ ...forced, block: 'auto' }));
  });
});

function blocksOf(tree: Subroutine, found = new Map<string, number>()): Map<string, number> {
  const block = tree.inputs?.k;
  if (block !== undefined) found.set(tree.name, block);
  for (const child of tree.children ?? []) blocksOf(child, found);
  return found;
}
