import type { TripletRow } from '../../encode/program';
import { anglesOf, vectorOf } from '../primitives/majorana';
import { rowBits } from './rows';

/**
 * Bits of a row that ride in the angle table after its angles: s, r, m and sign of its first face, whether it is
 * an A row, whether it is an A row of a paired item; then, where items have two faces, what changes in s, r, m
 * and sign on the second.
 */
export const ROW_FLAGS = 6;
export const FACE_FLAGS = 4;
export const IS_PAIR = 4;

/** A row with its vectors rounded to angle numbers. */
export interface RoundedRow {
  /** N − 1 angle numbers each. */
  readonly u: Uint32Array;
  readonly v: Uint32Array;
  /** ROW_FLAGS + FACE_FLAGS bits. */
  readonly flags: readonly boolean[];
  /** −1 where one of u, v was turned round to bring its last angle into [0, π). */
  readonly turned: 1 | -1;
}

/** θ of one step: 2π/2^b with b = angleBits + 1; number x stands for θ = (x + ½) steps. */
const step = (angleBits: number) => (2 * Math.PI) / 2 ** (angleBits + 1);

/**
 * Rounds a row. Every θ but the last lies in [0, π]; a vector with a negative last component is turned round, its
 * sign kept with the row, so the last one does too and b − 1 bits reach the grid 2π/2^b everywhere.
 */
export function roundRow(row: TripletRow, paired: boolean, angleBits: number): RoundedRow {
  const u = roundVector(row.u, angleBits);
  const v = row.kind === 'S' ? u : roundVector(row.v, angleBits);
  // In an S row both Majoranas are of the same vector: its sign cancels.
  const turned = row.kind === 'S' ? 1 : ((u.sign * v.sign) as 1 | -1);
  const face = (f: number) => {
    const { mu, sign } = row.faces[f] ?? row.faces[0]!;
    const bits = rowBits(row.kind, mu);
    return [bits.s, bits.r, bits.m, (sign * turned < 0 ? 1 : 0) ^ bits.constant];
  };
  const first = face(0);
  const second = face(1);
  const isPair = row.kind === 'A' ? 1 : 0;
  const flags = [...first, isPair, paired ? isPair : 0, ...first.map((bit, i) => bit ^ second[i]!)];
  return { u: u.numbers, v: v.numbers, flags: flags.map((bit) => bit === 1), turned };
}

/** The unit vector that angle numbers stand for. */
export function roundedVector(numbers: Uint32Array, angleBits: number): Float64Array {
  return vectorOf(Float64Array.from(numbers, (x) => (x + 0.5) * step(angleBits)));
}

function roundVector(vector: Float64Array, angleBits: number): { numbers: Uint32Array; sign: 1 | -1 } {
  const sign = vector[vector.length - 1]! < 0 ? -1 : 1;
  const angles = anglesOf(sign < 0 ? vector.map((x) => -x) : vector);
  const last = 2 ** angleBits - 1;
  const numbers = Uint32Array.from(angles, (theta) => Math.min(last, Math.floor(theta / step(angleBits))));
  return { numbers, sign };
}
