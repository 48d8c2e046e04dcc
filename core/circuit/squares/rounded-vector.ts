import { anglesOf, vectorOf } from '../primitives/majorana';

/** θ of one step: 2π/2^b with b = angleBits + 1. */
export const angleStep = (angleBits: number): number => (2 * Math.PI) / 2 ** (angleBits + 1);

/**
 * Angle numbers of a real vector; x stands for θ = (x + ½) steps. Every θ but the last lies in [0, π]; a vector with a
 * negative last component is turned round, which `sign` keeps, so the last one does too and b − 1 bits reach the grid
 * 2π/2^b everywhere.
 */
export function roundVector(
  vector: Float64Array,
  angleBits: number,
): { readonly numbers: Uint32Array; readonly sign: 1 | -1 } {
  const sign = vector[vector.length - 1]! < 0 ? -1 : 1;
  const angles = anglesOf(sign < 0 ? vector.map((x) => -x) : vector);
  const step = angleStep(angleBits);
  const last = 2 ** angleBits - 1;
  return { numbers: Uint32Array.from(angles, (theta) => Math.min(last, Math.floor(theta / step))), sign };
}

/** The unit vector that angle numbers stand for. */
export function roundedVector(numbers: Uint32Array, angleBits: number): Float64Array {
  const step = angleStep(angleBits);
  return vectorOf(Float64Array.from(numbers, (x) => (x + 0.5) * step));
}
