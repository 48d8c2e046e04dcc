import {
  numAntisymmetricPairs,
  numSymmetricPairs,
  type OneElectronPart,
  pairsTriangleLength,
  type SpatialIntegrals,
  type TwoElectronPart,
} from '../integral-set';

/** A set before its findings are known. */
export type Unchecked = Omit<SpatialIntegrals, 'findings'>;

/** Σ of some parts, per kind; null where no part is of the kind. A single part is returned as it is, not copied. */
export interface PartSums {
  readonly charge: Float64Array | null;
  readonly spin: Float64Array | null;
  readonly chargeCharge: Float64Array | null;
  /** 3 × nanti × npair each. */
  readonly same: Float64Array | null;
  readonly other: Float64Array | { readonly timesSame: number } | null;
  readonly spinSpin: Float64Array | null;
}

/** Adds up the parts that `select` keeps. */
export function sumParts(
  set: Unchecked,
  select: (part: OneElectronPart | TwoElectronPart) => boolean,
): PartSums {
  const one = set.oneElectron.filter(select);
  const two = set.twoElectron.filter(select);
  const spinOrbit = two.filter((part) => part.kind === 'spin-orbit');
  return {
    charge: sum(one.map((part) => part.charge)),
    spin: sum(one.map((part) => part.spin)),
    chargeCharge: sum(two.map((part) => (part.kind === 'charge-charge' ? part.values : null))),
    ...sumSpinOrbit(set.orbitals, spinOrbit),
    spinSpin: sum(two.map((part) => (part.kind === 'spin-spin' ? part.values : null))),
  };
}

function sumSpinOrbit(
  n: number,
  parts: readonly Extract<TwoElectronPart, { kind: 'spin-orbit' }>[],
): Pick<PartSums, 'same' | 'other'> {
  const [only] = parts;
  if (parts.length === 1 && only !== undefined) return { same: only.same, other: only.other };
  const size = 3 * numAntisymmetricPairs(n) * numSymmetricPairs(n);
  const same = sum(parts.map((part) => part.same));
  let other: Float64Array | null = null;
  for (const part of parts) {
    if (part.other === null) continue;
    const [values, factor] =
      part.other instanceof Float64Array ? [part.other, 1] : [part.same!, part.other.timesSame];
    other ??= new Float64Array(size);
    for (let i = 0; i < size; i++) other[i] = other[i]! + factor * values[i]!;
  }
  return { same, other };
}

function sum(arrays: readonly (Float64Array | null)[]): Float64Array | null {
  const present = arrays.filter((array) => array !== null);
  if (present.length < 2) return present[0] ?? null;
  const total = Float64Array.from(present[0]!);
  for (const array of present.slice(1)) {
    for (let i = 0; i < total.length; i++) total[i] = total[i]! + array[i]!;
  }
  return total;
}

/** Largest |element|, 0 for null. */
export function maxAbs(values: Float64Array | null): number {
  let max = 0;
  if (values === null) return max;
  for (let i = 0; i < values.length; i++) {
    const size = Math.abs(values[i]!);
    if (size > max) max = size;
  }
  return max;
}

/** Origins of the parts of a kind, for messages. */
export function originsOf(parts: readonly { readonly origin: string }[]): string {
  return [...new Set(parts.map((part) => part.origin))].join(', ');
}

/** Element (pq|rs) of a pairs-triangle. */
export function triangleElement(values: Float64Array, p: number, q: number, r: number, s: number): number {
  const P = p >= q ? (p * (p + 1)) / 2 + q : (q * (q + 1)) / 2 + p;
  const Q = r >= s ? (r * (r + 1)) / 2 + s : (s * (s + 1)) / 2 + r;
  return values[P >= Q ? (P * (P + 1)) / 2 + Q : (Q * (Q + 1)) / 2 + P]!;
}

/** Component kl of a spin–spin array. */
export function tensorComponent(values: Float64Array, n: number, kl: number): Float64Array {
  const size = pairsTriangleLength(n);
  return values.subarray(kl * size, (kl + 1) * size);
}
