import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { GateKind, Machine } from '../../../core/circuit/gates/machine';
import { lookUp } from '../../../core/circuit/primitives/look-up';
import { takeCensus } from '../../../core/circuit/qasm/census';
import { takeIdentifier } from '../../../core/circuit/qasm/identifiers';
import { writeQasm } from '../../../core/circuit/qasm/write';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import { parse } from './qasm/parse';
import { play } from './qasm/play';
import { expectSame, textOf } from './qasm/same';

const SIZE = 4;
const ARITY: Partial<Record<GateKind, number>> = {
  X: 1,
  Z: 1,
  H: 1,
  S: 1,
  SDG: 1,
  T: 1,
  TDG: 1,
  CX: 2,
  CZ: 2,
  SWAP: 2,
  CCX: 3,
  CCZ: 3,
};

const step = fc.oneof(
  fc.record({
    kind: fc.constantFrom(...(Object.keys(ARITY) as GateKind[]), 'AND' as const, 'measure' as const),
    wires: fc.uniqueArray(fc.nat(SIZE - 1), { minLength: 3, maxLength: 3 }),
  }),
  fc.record({
    kind: fc.constant('rz' as const),
    wires: fc.uniqueArray(fc.nat(SIZE - 1), { minLength: 3, maxLength: 3 }),
    angle: fc.double({ min: -7, max: 7, noNaN: true }),
  }),
);

describe('the OpenQASM 3 text of a circuit', () => {
  it('read back does the same as the circuit, on every basis state and in both branches', () => {
    fc.assert(
      fc.property(
        fc.array(step, { maxLength: 25 }),
        fc.constantFrom(0 as const, 1 as const),
        (steps, outcome) => {
          expectSame(
            (machine) => {
              const q = machine.allocateRegister(SIZE, 'q');
              for (const [i, one] of steps.entries()) {
                const [a, b, c] = one.wires.map((w) => q[w]!) as [number, number, number];
                if (one.kind === 'rz') machine.rotateZ(a, 'angle' in one ? one.angle : 0);
                else if (one.kind === 'AND') {
                  machine.enter(`product ${i}`);
                  const t = machine.allocate();
                  machine.gate('AND', a, b, t);
                  machine.gate('CX', t, c);
                  machine.gate('UNAND', a, b, t);
                  machine.release(t);
                  machine.leave();
                } else if (one.kind === 'measure') {
                  // A copy, measured away: its phase is mended by a conditioned gate.
                  const t = machine.allocate();
                  machine.gate('CX', a, t);
                  const bit = machine.measureX(t);
                  machine.release(t);
                  machine.gate('Z', a, -1, -1, bit);
                } else {
                  const arity = ARITY[one.kind]!;
                  machine.gate(one.kind, a, arity > 1 ? b : -1, arity > 2 ? c : -1);
                }
              }
            },
            outcome,
            ['q'],
          );
        },
      ),
      { numRuns: 150 },
    );
  });

  it.each([0, 1] as const)('holds a look-up and its erasure, all outcomes %i', (outcome) => {
    const table = {
      addresses: Uint32Array.from([0, 1, 2, 4, 5, 7]),
      width: 2,
      bit: (address: number, b: number) => (((address * 5 + 3) >> b) & 1) === 1,
    };
    expectSame(
      (machine) => {
        const address = machine.allocateRegister(3, 'address');
        // Only listed addresses may be asked for: 3 and 6 become 2 and 7.
        const other = machine.allocateRegister(1, 'other')[0]!;
        const [low, middle, high] = address as [number, number, number];
        machine.gate('X', high);
        machine.gate('CCX', high, middle, other);
        machine.gate('X', high);
        machine.gate('CX', other, low);
        void low;
        const output = machine.allocateRegister(4);
        const operation = lookUp(address, output, table, { read: 2, erase: 2 });
        operation.run(machine);
        machine.gate('CZ', output[0]!, output[1]!);
        operation.runAdjoint(machine);
        machine.releaseRegister(output);
      },
      outcome,
      ['address', 'other'],
    );
  });

  it('names registers, marks subroutines, and is the same twice', () => {
    const circuit = (machine: Machine) => {
      const [a] = machine.allocateRegister(2, 'phase gradient');
      const x = machine.allocateRegister(1, 'x');
      const spare = machine.allocate();
      machine.enter('walk');
      machine.gate('CX', a!, x[0]!);
      machine.gate('CCZ', a!, x[0]!, spare);
      machine.leave();
    };
    const text = textOf(circuit, ['two\nlines']);
    expect(text.split('\n')).toEqual([
      'OPENQASM 3.0;',
      'include "stdgates.inc";',
      '// two',
      '// lines',
      'qubit[2] phase_gradient;',
      'qubit[1] x_2;',
      'qubit[1] work;',
      'reset work;',
      'bit and_outcome;',
      '// begin: walk',
      'cx phase_gradient[0], x_2[0];',
      'ctrl(2) @ z phase_gradient[0], x_2[0], work[0];',
      '// end: walk',
      '',
    ]);
    expect(textOf(circuit, ['two\nlines'])).toBe(text);
    expect([...parse(text)]).toHaveLength(9);
  });

  it('comes in pieces and says how far it is', () => {
    const circuit = (machine: Machine) => {
      const [q] = machine.allocateRegister(1, 'q');
      for (let i = 0; i < 50_000; i++) machine.gate('X', q!);
    };
    const pieces: number[] = [];
    const told: number[] = [];
    const lines = writeQasm(circuit, takeCensus(circuit), {
      comments: [],
      write: (chunk) => pieces.push(chunk.length),
      onLines: (n) => told.push(n),
    });
    expect(lines).toBe(50_004);
    expect(pieces.length).toBeGreaterThan(3);
    expect(Math.max(...pieces)).toBeLessThan(70_000);
    expect(told).toEqual([...told].sort((a, b) => a - b));
  });

  it('takes identifiers that the language allows', () => {
    const used = new Set<string>();
    expect(['sigma', 'sigma', 'cx', '2nd row', 'measure'].map((name) => takeIdentifier(name, used))).toEqual([
      'sigma',
      'sigma_2',
      'cx_2',
      '_2nd_row',
      'measure_2',
    ]);
  });

  it('expects about as many gates as there are lines', () => {
    const table = {
      addresses: Uint32Array.from({ length: 64 }, (_, i) => i),
      width: 20,
      bit: (address: number, b: number) => ((Math.imul(address + 1, 2654435761) >>> b) & 1) === 1,
    };
    const circuit = (machine: Machine) => {
      const address = machine.allocateRegister(6, 'address');
      const output = machine.allocateRegister(40);
      const operation = lookUp(address, output, table, { read: 2, erase: 4 });
      operation.run(machine);
      operation.runAdjoint(machine);
    };
    const census = takeCensus(circuit);
    const lines = writeQasm(circuit, census, { comments: [], write: () => {} });
    expect(Math.abs(census.expectedGates / lines - 1)).toBeLessThan(0.15);
  });
});

describe('the reader of the tests', () => {
  const run = (text: string) => play(`OPENQASM 3.0; include "stdgates.inc"; ${text}`, new SparseState());
  it.each([
    ['an undeclared register', 'x q[0];'],
    ['an index out of range', 'qubit[2] q; x q[2];'],
    ['a qubit used twice', 'qubit[2] q; cx q[0], q[0];'],
    ['an operand too few', 'qubit[2] q; cx q[0];'],
    ['an unknown gate', 'qubit[2] q; ly q[0];'],
    ['a name in use', 'qubit[2] q; bit q;'],
    ['a gate as a name', 'qubit[2] cx;'],
    ['an undeclared bit', 'qubit[2] q; if (c) x q[0];'],
  ])('refuses %s', (_, text) => {
    expect(() => run(text)).toThrow(SyntaxError);
  });
});
