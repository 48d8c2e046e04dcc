import { describe, expect, it } from 'vitest';
import { gate, sequence } from '../../../core/circuit/gates/operation';
import type { Merge } from '../../../core/circuit/spinor/layout';
import { encodedSpinorProgram, type SpinorBits, spinorTables } from '../../../core/circuit/spinor/tables';
import {
  type SpinorBlocks,
  spinorAncillas,
  spinorForm,
  spinorWires,
  withSpinorItem,
} from '../../../core/circuit/spinor/walk';
import { squaresBlockEncoding } from '../../../core/circuit/squares/walk';
import type { SpinorProgram } from '../../../core/encode';
import { hermitianEigenvalues } from '../../../core/linalg';
import { restrict } from '../encode/fock-space';
import { addScaled, zeros } from './majorana-algebra';
import {
  distance,
  factorOperator,
  type ItemShape,
  programLambda,
  programOperator,
  randomProgram,
  simulatedBlock,
  squareOperator,
} from './spinor-support';

/** Rounding of some ten thousand gates: far below any angle or weight step. */
const TOLERANCE = 1e-11;

const small: SpinorBlocks = {
  outer: { read: 1, erase: 1 },
  items: { read: 1, erase: 2 },
  inner: { read: 1, erase: 1 },
  rows: { read: 1, erase: 1 },
  groups: { phases: 1, spins: 1 },
};
const large: SpinorBlocks = {
  outer: { read: 2, erase: 2 },
  items: { read: 2, erase: 1 },
  inner: { read: 2, erase: 2 },
  rows: { read: 2, erase: 2 },
  groups: { phases: 2, spins: 2 },
};

/** Every kind of item that a separate grouping has, κ alone over all modes. */
const SEPARATE: ItemShape[] = [
  { kind: 'real', rows: 2 },
  { kind: 'axial', axis: 1, paired: true, signs: [1, -1], rows: 2 },
  { kind: 'axial', axis: 2, paired: true, signs: [-1, -1], rows: 1 },
  { kind: 'axial', axis: 3, paired: true, odd: true, rows: 2 },
];
/** Squares over all modes, of both sectors. */
const JOINT: ItemShape[] = [
  { kind: 'full', rows: 2 },
  { kind: 'full', signs: [-1], odd: true, rows: 2 },
  { kind: 'real', rows: 1 },
];

interface Case {
  readonly name: string;
  readonly program: SpinorProgram;
  readonly bits: SpinorBits;
  readonly blocks: SpinorBlocks;
  readonly merge: readonly Merge[];
  readonly outcomes: 'random' | 0 | 1;
}

const BITS = { keep: 3, innerKeep: 2, rotation: 5 };
const CASES: Case[] = [
  {
    name: 'spin-free, N = 2',
    program: randomProgram(2, true, { kind: 'real', rows: 2 }, [{ kind: 'real', signs: [-1], rows: 2 }]),
    bits: BITS,
    blocks: small,
    merge: [],
    outcomes: 'random',
  },
  {
    name: 'separate, N = 2',
    program: randomProgram(2, true, { kind: 'full', rows: 2 }, SEPARATE),
    bits: BITS,
    blocks: small,
    merge: [],
    outcomes: 0,
  },
  {
    name: 'separate, one-body part by planes, N = 2',
    program: randomProgram(
      2,
      true,
      [
        { kind: 'real', rows: 2 },
        { kind: 'axial', axis: 1, rows: 2 },
        { kind: 'axial', axis: 2, rows: 2 },
        { kind: 'axial', axis: 3, rows: 2 },
      ],
      SEPARATE.slice(0, 2),
    ),
    bits: BITS,
    blocks: small,
    merge: ['phases'],
    outcomes: 'random',
  },
  ...(
    [
      ['phases share the low bits of the chain', ['shared phases'], 3],
      ['phases reach beyond the low bits', ['shared phases'], 2],
      ['coarse phases merged', ['phases'], 2],
      ['coarse phases in a table of their own', [], 3],
    ] as [string, Merge[], number][]
  ).map(
    ([name, merge, spared]): Case => ({
      name: `${name}, N = 2`,
      program: randomProgram(
        2,
        true,
        [
          { kind: 'real', rows: 2 },
          { kind: 'axial', axis: 2, rows: 2 },
        ],
        SEPARATE.slice(0, 2),
        10,
        spared,
      ),
      bits: { keep: 3, innerKeep: 2, rotation: 7 },
      blocks: merge.length === 0 ? small : large,
      merge,
      outcomes: 'random',
    }),
  ),
  {
    name: 'separate, phases merged, N = 2',
    program: randomProgram(2, true, { kind: 'full', rows: 2 }, SEPARATE, 8),
    bits: BITS,
    blocks: large,
    merge: ['phases'],
    outcomes: 1,
  },
  {
    name: 'joint, N = 2',
    program: randomProgram(2, true, { kind: 'full', rows: 2 }, JOINT),
    bits: BITS,
    blocks: large,
    merge: ['phases', 'spins'],
    outcomes: 'random',
  },
  {
    name: 'joint, nothing merged, N = 2',
    program: randomProgram(2, true, { kind: 'full', rows: 2 }, JOINT, 9),
    bits: BITS,
    blocks: small,
    merge: [],
    outcomes: 1,
  },
  {
    name: 'separate with spin–spin squares, N = 2',
    program: randomProgram(2, true, { kind: 'full', rows: 2 }, [...SEPARATE.slice(1, 3), JOINT[1]!]),
    bits: BITS,
    blocks: small,
    merge: ['phases'],
    outcomes: 'random',
  },
  {
    name: 'without partners, N = 2',
    program: randomProgram(2, false, { kind: 'full', rows: 4 }, [
      { kind: 'full', rows: 3 },
      { kind: 'full', signs: [-1], rows: 2 },
    ]),
    bits: BITS,
    blocks: large,
    merge: ['phases', 'spins'],
    outcomes: 0,
  },
  {
    name: 'separate, N = 3',
    program: randomProgram(3, true, { kind: 'full', rows: 2 }, [SEPARATE[0]!, SEPARATE[2]!]),
    bits: { keep: 3, innerKeep: 1, rotation: 5 },
    blocks: small,
    merge: [],
    outcomes: 'random',
  },
  {
    name: 'joint, N = 3',
    program: randomProgram(3, true, { kind: 'full', rows: 2 }, JOINT),
    bits: { keep: 3, innerKeep: 1, rotation: 6 },
    blocks: small,
    merge: ['phases', 'spins'],
    outcomes: 'random',
  },
];

describe.each(CASES)('spinor SELECT: $name', ({ program, bits, blocks, merge, outcomes }) => {
  const tables = spinorTables(program, bits, merge);
  const encoded = encodedSpinorProgram(program, tables);
  const modes = 2 * program.orbitals;

  it('gives every item of the encoded program', () => {
    for (const [t, item] of tables.items.entries()) {
      for (const face of item.faces.keys()) {
        for (const square of item.paired ? ([0, 1] as const) : ([0] as const)) {
          const block = simulatedBlock(modes, outcomes, (machine) => {
            const wires = spinorWires(tables, machine, 'exact');
            // The outer registers only steer: a basis state of theirs singles out one item.
            const set = sequence(
              ...wires.item.filter((_, i) => (t >> i) & 1).map((wire) => gate('X', wire)),
              ...(face === 1 ? [gate('X', wires.face!)] : []),
              ...(square === 1 ? [gate('X', wires.square!)] : []),
            );
            return {
              system: wires.system,
              ancillas: spinorAncillas(wires),
              operation: sequence(set, withSpinorItem(tables, wires, blocks), set),
            };
          });
          const expected = zeros(block.n);
          const single = encoded.oneBody[t - encoded.items.length];
          if (single) {
            addScaled(expected, factorOperator(encoded, single, 0, 0), 1 / single.faces[0]!.lambda);
          } else {
            addScaled(expected, squareOperator(encoded, encoded.items[t]!, face, square), 1);
          }
          expect(distance(block, expected), `item ${t}, face ${face}, square ${square}`).toBeLessThan(
            TOLERANCE,
          );
        }
      }
    }
  });

  it('rounds vectors to within their bits', () => {
    const n = program.orbitals;
    for (const [t, item] of [...encoded.items, ...encoded.oneBody].entries()) {
      for (const [j, row] of item.rows.entries()) {
        const given = [...program.items, ...program.oneBody][t]!.rows[j]!;
        const { angleBits, phaseBits } = tables.layout;
        const coarse = item.kind === 'axial' ? 2 ** (angleBits - phaseBits) : 1;
        const worst = ((coarse > 1 ? coarse + 1 : 1) * (Math.sqrt(n + 4) * Math.PI)) / 2 ** bits.rotation;
        let x = 0;
        let y = 0;
        for (let i = 0; i < row.re.length; i++) {
          x += row.re[i]! * given.re[i]! + row.im[i]! * given.im[i]!;
          y += row.re[i]! * given.im[i]! - row.im[i]! * given.re[i]!;
        }
        // Distance of the rays.
        expect(Math.sqrt(Math.max(0, 2 - 2 * Math.hypot(x, y)))).toBeLessThan(worst);
      }
    }
  });
});

it('keeps Kramers pairs exact however coarse the angles', () => {
  for (const [items, seed] of [
    [SEPARATE, 3],
    [JOINT, 4],
  ] as const) {
    const program = randomProgram(2, true, { kind: 'full', rows: 2 }, items, seed);
    const tables = spinorTables(program, { keep: 2, innerKeep: 2, rotation: 3 }, []);
    const encoded = encodedSpinorProgram(program, tables);
    for (const electrons of [1, 3]) {
      const values = hermitianEigenvalues(restrict(programOperator(encoded), electrons));
      const exact = hermitianEigenvalues(restrict(programOperator(program), electrons));
      for (let i = 0; i < values.length; i += 2) {
        expect(Math.abs(values[i + 1]! - values[i]!)).toBeLessThan(1e-12);
      }
      expect(Math.abs(values[0]! - exact[0]!)).toBeGreaterThan(1e-3);
    }
  }
});

it('is a block encoding of the encoded program with everything running, N = 2', () => {
  const program = randomProgram(2, true, { kind: 'full', rows: 2 }, [
    { kind: 'axial', axis: 2, paired: true, signs: [1, -1], rows: 2 },
  ]);
  const tables = spinorTables(program, { keep: 1, innerKeep: 1, rotation: 4 }, ['phases']);
  const block = simulatedBlock(4, 'random', (machine) => {
    const wires = spinorWires(tables, machine, 'exact');
    return {
      system: wires.system,
      ancillas: spinorAncillas(wires),
      operation: squaresBlockEncoding(spinorForm(tables, wires, small), wires),
    };
  });
  const expected = zeros(block.n);
  addScaled(expected, programOperator(encodedSpinorProgram(program, tables)), 1 / programLambda(program));
  expect(distance(block, expected)).toBeLessThan(TOLERANCE);
});
