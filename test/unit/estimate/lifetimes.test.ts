import { describe, expect, it } from 'vitest';
import type { Subroutine } from '../../../core/circuit';
import { peakOf, stepCost } from '../../../core/estimate';

const TREE: Subroutine = {
  name: 'step',
  registers: [{ name: 'system', qubits: 10 }],
  children: [
    { name: 'a', part: 'prepare', toffoli: 5, times: 2, registers: [{ name: 'wide', qubits: 7 }] },
    {
      name: 'b',
      times: 3,
      registers: [{ name: 'held', qubits: 4 }],
      children: [
        { name: 'c', part: 'select.other', toffoli: 2, t: 8, registers: [{ name: 'deep', qubits: 4 }] },
        { name: 'd', part: 'prepare', toffoli: 1 },
      ],
    },
  ],
};

describe('peak of a tree', () => {
  it('is the largest sum of registers alive at once, not of all registers', () => {
    expect(peakOf(TREE)).toEqual({
      qubits: 18,
      registers: [
        { name: 'system', qubits: 10 },
        { name: 'held', qubits: 4 },
        { name: 'deep', qubits: 4 },
      ],
      path: ['step', 'b', 'c'],
    });
  });
});

describe('cost of a tree', () => {
  it('multiplies by the runs of every node above and books under the named part', () => {
    const cost = stepCost(TREE);
    expect(cost.parts.prepare).toBe(2 * 5 + 3 * 1);
    expect(cost.parts['select.other']).toBe(3 * 2);
    expect(cost.toffoli).toBe(19);
    expect(cost.t).toBe(24);
  });

  it('refuses a leaf that is booked nowhere', () => {
    expect(() => stepCost({ name: 'lost', toffoli: 1 })).toThrow(/"lost"/);
  });
});
