import fc from 'fast-check';
import { expect, it } from 'vitest';
import { type GateKind, Machine } from '../../core/circuit/gates/machine';
import { DenseState } from '../../core/circuit/simulate/dense-state';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const WIRES = 7;
const ONE: GateKind[] = ['X', 'Z', 'H', 'S', 'SDG', 'T', 'TDG'];
const TWO: GateKind[] = ['CX', 'CZ', 'SWAP'];
const THREE: GateKind[] = ['CCX', 'CCZ'];

const wires = (count: number) =>
  fc.uniqueArray(fc.integer({ min: 0, max: WIRES - 1 }), { minLength: count, maxLength: count });
const step = fc.oneof(
  fc.record({ kind: fc.constantFrom(...ONE), at: wires(1) }),
  fc.record({ kind: fc.constantFrom(...TWO), at: wires(2) }),
  fc.record({ kind: fc.constantFrom(...THREE), at: wires(3) }),
  fc.record({ kind: fc.constant('RZ' as const), at: wires(1) }),
  fc.record({ kind: fc.constant('COMPUTE' as const), at: wires(3) }),
);

it('the sparse and the dense simulator agree on random circuits', () => {
  fc.assert(
    fc.property(
      fc.array(step, { maxLength: 40 }),
      fc.constantFrom<'random' | 0 | 1>('random', 0, 1),
      fc.integer(),
      (steps, outcomes, seed) => {
        // One wire more than the circuit uses, as the target of AND and UNAND; wire numbers above 32 make the
        // sparse state use several words.
        const offset = 29;
        const sparse = new SparseState({ maxWires: 64, outcomes, seed });
        const dense = new DenseState(WIRES + 1);
        for (const { kind, at } of steps) {
          const s = at.map((w) => w + offset);
          if (kind === 'RZ') {
            sparse.rotateZ(s[0]!, 0.3);
            dense.rotateZ(at[0]!, 0.3);
          } else if (kind === 'COMPUTE') {
            // AND, a phase that uses the result, and its measurement-based erasure.
            sparse.gate('AND', s[0]!, s[1]!, WIRES + offset, -1);
            sparse.gate('CZ', s[2]!, WIRES + offset, -1, -1);
            sparse.gate('UNAND', s[0]!, s[1]!, WIRES + offset, -1);
            dense.gate('CCZ', at[0]!, at[1]!, at[2]!, -1);
          } else {
            sparse.gate(kind, s[0]!, s[1] ?? -1, s[2] ?? -1, -1);
            dense.gate(kind, at[0]!, at[1] ?? -1, at[2] ?? -1, -1);
          }
        }
        const seen = new Map<number, [number, number]>();
        sparse.visit((isSet, re, im) => {
          let index = 0;
          for (let w = 0; w <= WIRES; w++) if (isSet(w + offset)) index |= 1 << w;
          seen.set(index, [re, im]);
        });
        for (let i = 0; i < dense.re.length; i++) {
          const [re, im] = seen.get(i) ?? [0, 0];
          expect(Math.hypot(re - dense.re[i]!, im - dense.im[i]!)).toBeLessThan(1e-12);
        }
      },
    ),
    { numRuns: 150 },
  );
});

it('complains of a wire that is released while it may be 1', () => {
  const machine = new Machine(new SparseState());
  const wire = machine.allocate();
  machine.gate('H', wire);
  expect(() => machine.release(wire)).toThrow(/wire 0 is 1 with probability 0\.5/);
});
