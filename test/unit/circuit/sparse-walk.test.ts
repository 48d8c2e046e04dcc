import { describe, expect, it } from 'vitest';
import { Machine } from '../../../core/circuit/gates/machine';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import {
  encodedProgram,
  type SparseTables,
  sparseTables,
  steeringNumbers,
} from '../../../core/circuit/sparse/tables';
import {
  type SparseWires,
  sparseAncillas,
  sparseBlockEncoding,
  sparseWires,
  withTerm,
} from '../../../core/circuit/sparse/walk';
import type { SparseProgram, TermKind } from '../../../core/encode';
import type { Mu } from '../../../core/hamiltonian/operators';
import { addScaled, type Dense, zeros } from './majorana-algebra';
import { sparseOperator } from './sparse-algebra';

/** antisymmetric, μ, ν, p, q, r, s, weight, sign */
type Row = [boolean, Mu, Mu | null, number, number, number, number, number, 1 | -1];

type Split = Pick<SparseProgram, 'otherShare' | 'otherSign'>;
const SHARED: Split = { otherShare: 2 / 3, otherSign: 1 };
const TURNED: Split = { otherShare: 0.3, otherSign: -1 };

/** Rows of strings: flags, p, q, r, s, weight, sign. */
type Strings = [number, number, number, number, number, number, 1 | -1];

/** The rows, and strings after them. */
function withStrings(given: SparseProgram, strings: readonly Strings[]): SparseProgram {
  const { kinds, kindOf, orbitalsOf, weights, negative } = given;
  return {
    ...given,
    kinds: [...kinds, ...strings.map(([flags]): TermKind => ({ form: 'strings', flags }))],
    kindOf: Uint8Array.from([...kindOf, ...strings.map((_, i) => kinds.length + i)]),
    orbitalsOf: Uint16Array.from([...orbitalsOf, ...strings.flatMap(([, p, q, r, s]) => [p, q, r, s])]),
    weights: Float64Array.from([...weights, ...strings.map((string) => string[5])]),
    negative: Uint8Array.from([...negative, ...strings.map((string) => (string[6] < 0 ? 1 : 0))]),
  };
}

/** @param split - how spin–orbit coefficients are shared between the two kinds; null: they are not. */
function program(orbitals: number, rows: readonly Row[], split: Split | null = null): SparseProgram {
  const kinds = rows.map(
    ([antisymmetric, mu, nu]): TermKind => ({
      form: 'pairs',
      antisymmetric,
      mu,
      nu,
      shared: split !== null && antisymmetric && nu === 0,
      exchanged: !antisymmetric && mu !== 0 && nu !== null && nu !== 0 && mu !== nu,
    }),
  );
  return {
    orbitals,
    constant: 0,
    kinds,
    kindOf: Uint8Array.from(rows.keys()),
    orbitalsOf: Uint16Array.from(rows.flatMap(([, , , p, q, r, s]) => [p, q, r, s])),
    weights: Float64Array.from(rows, (row) => row[7]),
    negative: Uint8Array.from(rows, (row) => (row[8] < 0 ? 1 : 0)),
    otherShare: split?.otherShare ?? 0,
    otherSign: split?.otherSign ?? 1,
  };
}

const SPIN_FREE: Row[] = [
  [false, 0, null, 0, 0, 0, 0, 0.9, -1],
  [false, 0, null, 1, 0, 0, 0, 0.4, 1],
  [false, 0, 0, 0, 0, 0, 0, 0.6, 1],
  [false, 0, 0, 1, 0, 1, 0, 0.3, 1],
  [false, 0, 0, 1, 0, 0, 0, 0.5, -1],
  [false, 0, 0, 1, 1, 0, 0, 0.2, 1],
];
const ONE_BODY_SPIN: Row[] = [1, 2, 3].map((k) => [true, k as Mu, null, 1, 0, 0, 0, 0.3, k === 2 ? -1 : 1]);
const SPIN_ORBIT: Row[] = [1, 2, 3].flatMap((k): Row[] => [
  [true, k as Mu, 0, 1, 0, 0, 0, 0.3, 1],
  [true, k as Mu, 0, 1, 0, 1, 0, 0.2, -1],
]);
const OTHER_ORBIT: Row[] = [1, 2, 3].map((k): Row => [true, 0, k as Mu, 1, 0, 1, 0, 0.3, k === 2 ? -1 : 1]);
const SPIN_SPIN: Row[] = [
  [false, 1, 1, 1, 0, 1, 0, 0.3, 1],
  [false, 1, 2, 1, 1, 1, 0, 0.2, -1],
  [false, 1, 3, 1, 0, 0, 0, 0.4, 1],
  [false, 2, 2, 1, 1, 0, 0, 0.1, 1],
  [false, 2, 3, 1, 0, 1, 0, 0.1, 1],
];
const BOTH_KINDS: Row[] = [...ONE_BODY_SPIN.slice(1), ...SPIN_ORBIT.slice(0, 5)];
const ONE_OF_EACH: Row[] = [ONE_BODY_SPIN[1]!, SPIN_ORBIT[0]!, SPIN_ORBIT[3]!, SPIN_ORBIT[4]!];
const MIXTURE: Row[] = [ONE_BODY_SPIN[1]!, SPIN_ORBIT[2]!, SPIN_SPIN[1]!, SPIN_SPIN[4]!];

const [SAME, OPPOSITE] = [8 + 16, 4 + 8 + 16];
const CHARGE_STRINGS: Strings[] = [
  [SAME, 0, 0, 1, 1, 0.5, 1],
  [OPPOSITE, 0, 0, 1, 1, 0.6, 1],
  [OPPOSITE, 1, 0, 1, 0, 0.3, -1],
  [OPPOSITE, 0, 0, 0, 0, 0.4, 1],
];
/** Of three orbitals, one of each way that spins and kinds can go together. */
const SPIN_STRINGS: Strings[] = [
  [OPPOSITE, 0, 0, 1, 1, 0.6, 1],
  [SAME, 0, 0, 2, 1, 0.3, -1],
  [1 + 8, 2, 1, 1, 0, 0.4, -1],
  [2 + 8, 0, 0, 2, 1, 0.5, 1],
  [1 + 2 + 4 + 16, 1, 0, 2, 2, 0.2, 1],
  [4, 1, 0, 2, 1, 0.3, -1],
  [1 + 16, 1, 0, 2, 2, 0.35, 1],
  [1 + 2 + 8 + 16, 0, 0, 1, 1, 0.25, -1],
];

const ROW_BY_ROW = { read: 1, erase: 1 };

/** Runs the block encoding on every basis state of the system at once, with a copy of it as a label. */
function simulate(
  tables: SparseTables,
  outcomes: 'random' | 0 | 1,
  build: (machine: Machine, wires: SparseWires) => void,
): Dense {
  const modes = 2 * tables.layout.orbitals;
  const state = new SparseState({ maxWires: 192, outcomes });
  const machine = new Machine(state);
  const label = machine.allocateRegister(modes);
  const wires = sparseWires(tables.layout, machine);
  for (const [i, wire] of label.entries()) {
    machine.gate('H', wire);
    machine.gate('CX', wire, wires.system[i]!);
  }
  build(machine, wires);
  const ancillas = sparseAncillas(wires);
  const block = zeros(2 ** modes);
  const scale = Math.sqrt(2 ** modes);
  const read = (isSet: (w: number) => boolean, list: readonly number[]) =>
    list.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);
  state.visit((isSet, re, im) => {
    if (ancillas.some((w) => isSet(w))) return;
    const at = read(isSet, wires.system) * block.n + read(isSet, label);
    block.re[at]! += re * scale;
    block.im[at]! += im * scale;
  });
  return block;
}

function distance(a: Dense, b: Dense): number {
  let worst = 0;
  for (let i = 0; i < a.re.length; i++) {
    worst = Math.max(worst, Math.hypot(a.re[i]! - b.re[i]!, a.im[i]! - b.im[i]!));
  }
  return worst;
}

/** Rounding of some ten thousand gates, and amplitudes that the simulator drops: far below any step of the tables. */
const TOLERANCE = 1e-11;

const norm = (a: Dense) => distance(a, zeros(a.n));

describe('sparse block encoding on Fock space', () => {
  const few = SPIN_FREE.slice(1, 4) as [Row, Row, Row];
  it.each([
    ['charge', program(2, SPIN_FREE), 1, { read: 2, erase: 4 }, 'random'],
    // Through borrowed wires: the system's and the index registers'.
    ['charge, dirty', program(2, SPIN_FREE), 1, { read: 4, erase: 4, slice: 2 }, 1],
    ['charge, three orbitals', program(3, [...few, [false, 0, 0, 2, 1, 2, 0, 0.7, -1]]), 0, ROW_BY_ROW, 1],
    ['one-body spin–orbit', program(2, [...few, ...ONE_BODY_SPIN]), 2, ROW_BY_ROW, 0],
    ['spin–same-orbit', program(2, [...few, ...SPIN_ORBIT]), 3, { read: 4, erase: 2 }, 1],
    ['both spin–orbit kinds from one value', program(2, [few[0], ...ONE_OF_EACH], SHARED), 3, ROW_BY_ROW, 0],
    ['the same with a negative ratio', program(2, [...few, ...BOTH_KINDS], TURNED), 3, ROW_BY_ROW, 'random'],
    ['spin–other-orbit', program(2, [...few, ...OTHER_ORBIT]), 2, ROW_BY_ROW, 'random'],
    ['spin–spin', program(2, [...few, ...SPIN_SPIN]), 4, { read: 2, erase: 1 }, 'random'],
    ['shared and exchanged values', program(2, [few[2], ...MIXTURE], TURNED), 2, ROW_BY_ROW, 1],
    [
      'joined charge',
      withStrings(program(2, SPIN_FREE.slice(0, 2)), CHARGE_STRINGS),
      1,
      { read: 2, erase: 2 },
      0,
    ],
    [
      'charge joined in part',
      withStrings(program(2, SPIN_FREE.slice(0, 5)), CHARGE_STRINGS),
      2,
      ROW_BY_ROW,
      1,
    ],
    ['joined charge beside spin', withStrings(program(2, MIXTURE, TURNED), CHARGE_STRINGS), 2, ROW_BY_ROW, 0],
    [
      'joined products of all kinds',
      withStrings(program(3, [few[0], ...ONE_BODY_SPIN]), SPIN_STRINGS),
      2,
      { read: 2, erase: 1 },
      'random',
    ],
    [
      'joined products, two orbitals',
      withStrings(program(2, ONE_BODY_SPIN), [...CHARGE_STRINGS, [2 + 4 + 8 + 16, 0, 0, 1, 1, 0.3, -1]]),
      2,
      ROW_BY_ROW,
      1,
    ],
  ] as const)('%s', (_, given, refinement, blocks, outcomes) => {
    const tables = sparseTables(given, { keep: 1, share: 2 }, refinement);
    const block = simulate(tables, outcomes, (machine, wires) => {
      sparseBlockEncoding(tables, wires, blocks).run(machine);
    });
    const lambda = given.weights.reduce((a, b) => a + b, 0);
    const expected = zeros(block.n);
    addScaled(expected, sparseOperator(encodedProgram(tables)), 1 / lambda);
    expect(distance(block, expected)).toBeLessThan(TOLERANCE);
    expect(norm(expected)).toBeGreaterThan(0.05);
  });
});

describe('sparse SELECT', () => {
  it.each([
    ['two orbitals', program(2, [...SPIN_FREE.slice(0, 2), ...MIXTURE], SHARED)],
    ['three orbitals', program(3, [...SPIN_FREE.slice(0, 2), ...MIXTURE], SHARED)],
    ['three orbitals, charge', program(3, SPIN_FREE)],
    ['charge joined in part', withStrings(program(2, SPIN_FREE.slice(0, 5)), CHARGE_STRINGS)],
    ['joined charge beside spin', withStrings(program(2, MIXTURE, TURNED), CHARGE_STRINGS)],
    ['joined products of all kinds', withStrings(program(3, ONE_BODY_SPIN), SPIN_STRINGS)],
  ])('is its own inverse, so that the block encoding is Hermitian: %s', (_, given) => {
    const tables = sparseTables(given, { keep: 1, share: 1 }, 3);
    const state = new SparseState({ maxWires: 192 });
    const machine = new Machine(state);
    const wires = sparseWires(tables.layout, machine);
    const { system, plus } = wires;
    const free = [
      ...system,
      ...(plus.order === null ? [] : [plus.order]),
      ...plus.spins,
      ...plus.kinds,
      ...(plus.placing === null ? [] : [plus.placing]),
    ];
    const numbers = [wires.low, wires.uniform, wires.share];
    // A random vector: only the identity leaves it as it is.
    const random = randomNumbers(5);
    const entries = [...steeringNumbers(tables)].flatMap((steering) => {
      const set = numbers.flatMap((register, i) =>
        register.filter((_, b) => ([steering.low, steering.uniform, steering.share][i]! >> b) & 1),
      );
      return Array.from({ length: 24 }, () => ({
        ones: [...set, ...free.filter(() => random() < 0)],
        amplitude: random(),
      }));
    });
    const unique = new Map(entries.map((entry) => [entry.ones.join(), entry]));
    state.load([...unique.values()]);
    const act = () => withTerm(tables, wires, ROW_BY_ROW).run(machine);
    const all = [...numbers.flat(), ...free];
    const read = () => {
      const found = new Map<string, [number, number]>();
      state.visit((isSet, re, im) =>
        found.set(
          all
            .filter(isSet)
            .sort((a, b) => a - b)
            .join(),
          [re, im],
        ),
      );
      return found;
    };
    const before = read();
    act();
    const between = read();
    act();
    const after = read();
    expect([...between.keys()].filter((key) => !before.has(key)).length).toBeGreaterThan(before.size / 2);
    expect(after.size).toBe(before.size);
    for (const [key, [re, im]] of before) {
      const [x, y] = after.get(key) ?? [Number.NaN, Number.NaN];
      expect(Math.hypot(x - re, y - im)).toBeLessThan(TOLERANCE);
    }
  });
});

/** Seeded numbers in (−1, 1). */
function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}
