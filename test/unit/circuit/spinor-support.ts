import { Machine } from '../../../core/circuit/gates/machine';
import type { Operation } from '../../../core/circuit/gates/operation';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import type { SpinorItem, SpinorKind, SpinorProgram, SpinorRow } from '../../../core/encode';
import { addScaled, annihilator, type Dense, dagger, times, zeros } from './majorana-algebra';

/** Seeded numbers in (−1, 1). */
export function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}

export interface Opened {
  readonly system: readonly number[];
  /** Must be 0 at the end for an amplitude to count. */
  readonly ancillas: readonly number[];
  readonly operation: Operation;
}

/**
 * Block of an operation on its system wires, from a simulation of all basis states at once, each with a copy of
 * itself as a label.
 */
export function simulatedBlock(
  modes: number,
  outcomes: 'random' | 0 | 1,
  open: (machine: Machine) => Opened,
): Dense {
  const state = new SparseState({ maxWires: 256, outcomes });
  const machine = new Machine(state);
  const label = machine.allocateRegister(modes);
  const { system, ancillas, operation } = open(machine);
  for (const [i, wire] of label.entries()) {
    machine.gate('H', wire);
    machine.gate('CX', wire, system[i]!);
  }
  operation.run(machine);
  const block = zeros(2 ** modes);
  const scale = Math.sqrt(2 ** modes);
  const read = (isSet: (w: number) => boolean, list: readonly number[]) =>
    list.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);
  state.visit((isSet, re, im) => {
    if (ancillas.some((w) => isSet(w))) return;
    const at = read(isSet, system) * block.n + read(isSet, label);
    block.re[at]! += re * scale;
    block.im[at]! += im * scale;
  });
  return block;
}

export function distance(a: Dense, b: Dense): number {
  let worst = 0;
  for (let i = 0; i < a.re.length; i++) {
    worst = Math.max(worst, Math.hypot(a.re[i]! - b.re[i]!, a.im[i]! - b.im[i]!));
  }
  return worst;
}

/** Σ c_P a†_P. */
export function creator(re: ArrayLike<number>, im: ArrayLike<number>): Dense {
  const modes = re.length;
  const out = zeros(2 ** modes);
  for (let m = 0; m < modes; m++) addScaled(out, dagger(annihilator(modes, m)), re[m]!, im[m]!);
  return out;
}

export function identity(n: number): Dense {
  const out = zeros(n);
  for (let i = 0; i < n; i++) out.re[i * n + i] = 1;
  return out;
}

type Vector = readonly [re: number[], im: number[]];

/** Spins along the axes: χ+ and χ−. */
const ALONG: Readonly<Record<1 | 2 | 3, readonly [Vector, Vector]>> = {
  1: [
    [
      [Math.SQRT1_2, Math.SQRT1_2],
      [0, 0],
    ],
    [
      [Math.SQRT1_2, -Math.SQRT1_2],
      [0, 0],
    ],
  ],
  2: [
    [
      [Math.SQRT1_2, 0],
      [0, Math.SQRT1_2],
    ],
    [
      [Math.SQRT1_2, 0],
      [0, -Math.SQRT1_2],
    ],
  ],
  3: [
    [
      [1, 0],
      [0, 0],
    ],
    [
      [0, 1],
      [0, 0],
    ],
  ],
};

/** w over all modes; in the second square along the axis, the spin is reversed. */
function spread(item: SpinorItem, row: SpinorRow, square: 0 | 1): Vector {
  if (item.kind === 'full') return [Array.from(row.re), Array.from(row.im)];
  const [x, y] = ALONG[item.kind === 'real' ? 3 : item.axis][square];
  const re: number[] = [];
  const im: number[] = [];
  for (let p = 0; p < row.re.length; p++) {
    for (const s of [0, 1]) {
      re.push(row.re[p]! * x[s]! - row.im[p]! * y[s]!);
      im.push(row.re[p]! * y[s]! + row.im[p]! * x[s]!);
    }
  }
  return [re, im];
}

/** iσ_y w*. */
const reversed = ([re, im]: Vector): Vector => [
  re.map((_, i) => (i % 2 === 0 ? re[i + 1]! : -re[i - 1]!)),
  im.map((_, i) => (i % 2 === 0 ? -im[i + 1]! : im[i - 1]!)),
];

/** 2n_w − 1. */
function occupation(vector: Vector): Dense {
  const create = creator(...vector);
  const out = zeros(create.n);
  addScaled(out, times(create, dagger(create)), 2);
  addScaled(out, identity(out.n), -1);
  return out;
}

/** Σ rows weight·sign·op, from ladder operators. */
export function factorOperator(program: SpinorProgram, item: SpinorItem, face: number, square: 0 | 1): Dense {
  const out = zeros(4 ** program.orbitals);
  for (const row of item.rows) {
    const { weight, sign } = row.faces[face]!;
    const w = spread(item, row, square);
    if (!program.partners) {
      addScaled(out, occupation(w), sign * weight);
      continue;
    }
    addScaled(out, occupation(w), (sign * weight) / 2);
    addScaled(out, occupation(reversed(w)), (item.faces[face]!.odd ? -1 : 1) * ((sign * weight) / 2));
  }
  return out;
}

export const factorNorm = (item: SpinorItem, face: number) =>
  item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);

/** 2(M/Λ)² − 1 with the signs of the item, its face and its square. */
export function squareOperator(program: SpinorProgram, item: SpinorItem, face: number, square: 0 | 1): Dense {
  const m = factorOperator(program, item, face, square);
  const sign = item.faces[face]!.sign * (square === 1 ? -1 : 1);
  const out = zeros(m.n);
  addScaled(out, times(m, m), (2 * sign) / factorNorm(item, face) ** 2);
  addScaled(out, identity(m.n), -sign);
  return out;
}

export const programLambda = (program: SpinorProgram) =>
  [...program.items, ...program.oneBody].reduce(
    (sum, item) => sum + item.faces.reduce((own, face) => own + face.lambda, 0),
    0,
  );

/** The operator a program encodes, H − c. */
export function programOperator(program: SpinorProgram): Dense {
  const out = zeros(4 ** program.orbitals);
  for (const item of program.oneBody) addScaled(out, factorOperator(program, item, 0, 0), 1);
  for (const item of program.items) {
    for (const [f, { lambda }] of item.faces.entries()) {
      for (const square of item.paired ? ([0, 1] as const) : ([0] as const)) {
        addScaled(out, squareOperator(program, item, f, square), lambda / (item.paired ? 2 : 1));
      }
    }
  }
  return out;
}

/** A unit vector of `length` numbers, real or complex. */
function unit(length: number, complex: boolean, random: () => number): Pick<SpinorRow, 're' | 'im'> {
  const re = Float64Array.from({ length }, random);
  const im = complex ? Float64Array.from({ length }, random) : new Float64Array(length);
  const norm = Math.hypot(...re, ...im);
  return { re: re.map((x) => x / norm), im: im.map((x) => x / norm) };
}

export interface ItemShape {
  readonly kind: SpinorKind;
  readonly axis?: 1 | 2 | 3;
  readonly paired?: boolean;
  readonly signs?: readonly (1 | -1)[];
  readonly odd?: boolean;
  readonly rows: number;
}

/** A program with random vectors and weights. */
export function randomProgram(
  orbitals: number,
  partners: boolean,
  oneBody: ItemShape | readonly ItemShape[],
  items: readonly ItemShape[],
  seed = 7,
  spared = 0,
): SpinorProgram {
  const random = randomNumbers(seed);
  const make = ({
    kind,
    axis = 3,
    paired = false,
    signs = [1],
    odd = false,
    rows,
  }: ItemShape): SpinorItem => {
    const own = Array.from({ length: rows }, () => ({
      ...unit(kind === 'full' ? 2 * orbitals : orbitals, kind !== 'real', random),
      faces: signs.map(() => ({
        weight: 0.2 + Math.abs(random()),
        sign: (random() < 0 ? -1 : 1) as 1 | -1,
      })),
    }));
    return {
      kind,
      axis,
      paired,
      faces: signs.map((sign, f) => ({ sign, odd: odd !== (f === 1), lambda: 0.3 + Math.abs(random()) })),
      rows: own,
    };
  };
  const one = (Array.isArray(oneBody) ? oneBody : [oneBody]).map(make);
  return {
    orbitals,
    constant: 0,
    partners,
    phases: null,
    spared,
    oneBody: one.map((item) => ({ ...item, faces: [{ ...item.faces[0]!, lambda: factorNorm(item, 0) }] })),
    items: items.map(make),
  };
}
