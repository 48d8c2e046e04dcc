import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  aliasToffoli,
  bestBlock,
  eraseToffoli,
  type LookupMode,
  loadToffoli,
  type Subroutine,
} from '../../core/circuit';
import type { EncodingShape } from '../../core/encode';
import { type EstimateInput, estimateVariant, targetRequest } from '../../core/estimate';

const modes = fc.constantFrom<LookupMode>('plain', 'clean', 'dirty');

const shapes: fc.Arbitrary<EncodingShape> = fc
  .record({
    kind: fc.constantFrom('triplet', 'spinor', 'sparse'),
    orbitals: fc.integer({ min: 1, max: 60 }),
    factors: fc.integer({ min: 0, max: 400 }),
    rows: fc.integer({ min: 0, max: 20000 }),
    pairShare: fc.double({ min: 0, max: 1, noNaN: true }),
    oneBodyRows: fc.integer({ min: 1, max: 200 }),
    maxRowsPerFactor: fc.integer({ min: 1, max: 200 }),
    spinDependent: fc.boolean(),
  })
  .map(({ pairShare, ...shape }) => ({
    ...shape,
    pairRows: shape.spinDependent ? Math.floor(pairShare * shape.rows) : 0,
    oneBodyPairRows: shape.spinDependent ? Math.floor(pairShare * shape.oneBodyRows) : 0,
  }));

const inputs: fc.Arbitrary<EstimateInput> = fc.record({
  shape: shapes,
  lambda: fc
    .tuple(fc.double({ min: 0.01, max: 100, noNaN: true }), fc.double({ min: 0.01, max: 1000, noNaN: true }))
    .map(([oneBody, twoBody]) => ({ oneBody, twoBody, total: oneBody + twoBody })),
  variant: fc.record({ spin: fc.constantFrom('index', 'swap-layers'), lookup: modes }),
  target: fc.double({ min: 1e-6, max: 1e-2, noNaN: true }).map((hartree) => targetRequest(hartree)),
  options: fc.record({ qubitsMax: fc.option(fc.integer({ min: 1, max: 5000 }), { nil: null }) }),
});

describe('table look-up', () => {
  it('takes the block that no other power of two beats', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 1_000_000 }),
        fc.integer({ min: 1, max: 5000 }),
        modes,
        (rows, bits, mode) => {
          const cost = (k: number) => loadToffoli({ rows, bits }, k, mode);
          const eraseCost = (k: number) => eraseToffoli(rows, k, mode);
          const all = Array.from({ length: 24 }, (_, j) => 2 ** j);
          expect(cost(bestBlock(rows, cost))).toBe(Math.min(...all.map(cost)));
          expect(eraseCost(bestBlock(rows, eraseCost))).toBe(Math.min(...all.map(eraseCost)));
        },
      ),
    );
  });

  it('never gets cheaper with more rows or wider rows', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 100_000 }),
        fc.integer({ min: 0, max: 500 }),
        fc.integer({ min: 1, max: 2000 }),
        fc.integer({ min: 0, max: 50 }),
        modes,
        (rows, moreRows, bits, moreBits, mode) => {
          const least = (l: number, b: number) => {
            const cost = (k: number) => loadToffoli({ rows: l, bits: b }, k, mode);
            return cost(bestBlock(l, cost));
          };
          expect(least(rows + moreRows, bits + moreBits)).toBeGreaterThanOrEqual(least(rows, bits));
        },
      ),
    );
  });
});

describe('walk step', () => {
  it('has parts that sum to it, all whole and none negative', () => {
    fc.assert(
      fc.property(inputs, (input) => {
        const { step } = estimateVariant(input);
        const parts = Object.values(step.parts);
        expect(parts.reduce((sum, part) => sum + part, 0)).toBe(step.toffoli);
        expect([...parts, step.t].every((count) => Number.isInteger(count) && count >= 0)).toBe(true);
      }),
    );
  });

  it('has a peak that is the largest of all sets of registers alive together', () => {
    fc.assert(
      fc.property(inputs, (input) => {
        const { step, logicalQubits } = estimateVariant(input);
        const live = liveSets(step.tree);
        expect(logicalQubits).toBe(Math.max(...live));
      }),
    );
  });

  it('never gets cheaper with more factors, rows or orbitals', () => {
    fc.assert(
      fc.property(inputs, fc.integer({ min: 1, max: 3 }), (input, more) => {
        const fixed = { keepBits: 12, rotationBits: 14 } as const;
        const cost = (shape: EncodingShape) =>
          estimateVariant({ ...input, shape, variant: { ...input.variant, lookup: 'clean' }, options: fixed })
            .step.parts;
        const base = cost(input.shape);
        const grown = cost({
          ...input.shape,
          orbitals: input.shape.orbitals + more,
          rows: input.shape.rows + more,
        });
        for (const part of ['select.lookup', 'select.rotations', 'select.swaps', 'select.other'] as const) {
          expect(grown[part]).toBeGreaterThanOrEqual(base[part]);
        }
      }),
    );
  });

  it('costs no less under a cap, and keeps it unless it says otherwise', () => {
    fc.assert(
      fc.property(inputs, fc.integer({ min: 50, max: 5000 }), (input, qubitsMax) => {
        const free = estimateVariant({ ...input, options: {} });
        const capped = estimateVariant({ ...input, options: { qubitsMax } });
        expect(capped.step.toffoli).toBeGreaterThanOrEqual(free.step.toffoli);
        expect(capped.overCap).toBe(capped.logicalQubits > qubitsMax);
        if (free.logicalQubits <= qubitsMax) expect(capped.step.toffoli).toBe(free.step.toffoli);
      }),
    );
  });
});

describe('coherent alias sampling', () => {
  it('costs what the PREPARE of a recipe adds up to, equal superposition aside', () => {
    fc.assert(
      fc.property(fc.integer({ min: 2, max: 5000 }), fc.integer({ min: 4, max: 30 }), (factors, keepBits) => {
        const shape: EncodingShape = {
          kind: 'triplet',
          orbitals: 4,
          factors,
          rows: 100,
          pairRows: 0,
          oneBodyRows: 4,
          oneBodyPairRows: 0,
          maxRowsPerFactor: 4,
          spinDependent: false,
        };
        const { step } = estimateVariant({
          shape,
          lambda: { oneBody: 1, twoBody: 1, total: 2 },
          variant: { spin: 'index', lookup: 'clean' },
          target: targetRequest(1e-3),
          options: { keepBits, rotationBits: 10 },
        });
        const prepare = find(step.tree, 'outer PREPARE')!;
        const parts = prepare.children!.filter((child) => !child.name.includes('superposition'));
        const table = {
          rows: factors + 1,
          indexBits: Math.ceil(Math.log2(factors + 1)),
          keepBits,
          ownBits: 0,
          extraBits: 0,
        };
        const block = find(prepare, 'outer alias look-up')!.inputs!.k!;
        expect(parts.reduce((sum, part) => sum + part.toffoli!, 0)).toBe(aliasToffoli(table, block, 'clean'));
      }),
    );
  });
});

/** Sizes of all sets of registers alive together: one for each path from the root, to any depth. */
function liveSets(tree: Subroutine, above = 0): number[] {
  const here = above + (tree.registers ?? []).reduce((sum, register) => sum + register.qubits, 0);
  return [here, ...(tree.children ?? []).flatMap((child) => liveSets(child, here))];
}

function find(tree: Subroutine, name: string): Subroutine | undefined {
  if (tree.name === name) return tree;
  for (const child of tree.children ?? []) {
    const found = find(child, name);
    if (found) return found;
  }
  return undefined;
}
