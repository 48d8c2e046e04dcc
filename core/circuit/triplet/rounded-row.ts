import type { TripletRow } from '../../encode/program';
import { roundVector } from '../squares/rounded-vector';
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

/** Rounds a row; the sign of a vector that was turned round is kept with the row. */
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
