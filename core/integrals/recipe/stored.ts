import { InputError } from '../../job';
import { numAntisymmetricPairs, numSymmetricPairs, pairsTriangleLength } from '../integral-set';
import type { RawArray } from '../raw';
import type { ResolvedPart } from './part';
import type { Layout } from './recipe';

/** Where a stored array keeps what: positions into `data`, already times two for complex values. */
export interface StoredArray {
  readonly origin: string;
  readonly data: Float64Array;
  /** Distance between two components, and between neighbours inside one component. */
  readonly componentStride: number;
  readonly stride: number;
  /** Offset of the plane that holds A, and of the other plane (null for real files). */
  readonly plane: number;
  readonly otherPlane: number | null;
}

/** Lengths of the axes of one component. */
export function layoutShape(
  layout: Layout,
  numIndices: number,
  n: number,
  momentumSecond: boolean,
): number[] {
  const pairs = numSymmetricPairs(n);
  switch (layout) {
    case 'full':
      return new Array<number>(numIndices).fill(n);
    case 'lower-triangle':
      return [pairs];
    case 'strict-lower-triangle':
      return [numAntisymmetricPairs(n)];
    case 'pairs':
      return [pairs, pairs];
    case 'pairs-triangle':
      return [pairsTriangleLength(n)];
    case 'antisymmetric-by-symmetric-pairs':
      return momentumSecond ? [pairs, numAntisymmetricPairs(n)] : [numAntisymmetricPairs(n), pairs];
    case 'index-list':
      return [];
  }
}

function withComponents(shape: number[], part: ResolvedPart): number[] {
  const count = part.components.length;
  if (count < 2) return shape;
  return part.componentLast ? [...shape, count] : [count, ...shape];
}

const isSameShape = (a: readonly number[], b: readonly number[]) =>
  a.length === b.length && a.every((length, axis) => length === b[axis]);

/** Number of orbitals for which the array has the shape its part promises, or null. */
export function orbitalsOfShape(raw: RawArray, part: ResolvedPart, maxOrbitals = 400): number | null {
  for (let n = 1; n <= maxOrbitals; n++) {
    if (fits(raw.shape, part, n)) return n;
  }
  return null;
}

function fits(shape: readonly number[], part: ResolvedPart, n: number): boolean {
  const one = layoutShape(part.layout, part.facts.numIndices, n, part.momentumSecond);
  if (isSameShape(shape, withComponents(one, part))) return true;
  // One component: the axis is absent, but an axis of length 1 says the same.
  return part.components.length === 1 && (isSameShape(shape, [1, ...one]) || isSameShape(shape, [...one, 1]));
}

/**
 * Checks shape and number type against the part and returns the strides.
 *
 * @throws InputError `wrong-shape` (with the layout that would fit, if one does), `complex-data`.
 */
export function storedArray(raw: RawArray, part: ResolvedPart, n: number): StoredArray {
  if (!fits(raw.shape, part, n)) throw wrongShape(raw, part, n);
  const imaginary = part.facts.values.includes('imaginary');
  if (raw.complex && part.value !== 'complex') {
    throw new InputError({
      code: 'complex-data',
      where: raw.origin,
      found: 'complex numbers',
      expected: `real numbers, because part "${part.id}" has value "${part.value}"`,
      mend: 'Set "value": "complex" if the array is the operator itself.',
    });
  }
  if (!raw.complex && part.value === 'complex' && imaginary) {
    throw new InputError({
      code: 'complex-data',
      where: raw.origin,
      found: 'real numbers',
      expected: `complex numbers, because part "${part.id}" has value "complex"`,
      mend: 'Set "value": "imaginary" if the array is the imaginary part.',
    });
  }
  const stride = raw.complex ? 2 : 1;
  const one = layoutShape(part.layout, part.facts.numIndices, n, part.momentumSecond).reduce(
    (a, b) => a * b,
    1,
  );
  const count = Math.max(1, part.components.length);
  return {
    origin: raw.origin,
    data: raw.data,
    componentStride: part.componentLast ? stride : stride * one,
    stride: part.componentLast ? stride * count : stride,
    plane: raw.complex && imaginary ? 1 : 0,
    otherPlane: raw.complex ? (imaginary ? 0 : 1) : null,
  };
}

function wrongShape(raw: RawArray, part: ResolvedPart, n: number): InputError {
  const layouts = part.facts.layouts.filter((layout) => layout !== 'index-list' && layout !== part.layout);
  const other = layouts.find((layout) => fits(raw.shape, { ...part, layout }, n));
  const axis = { ...part, componentLast: !part.componentLast };
  const momentum = { ...part, momentumSecond: !part.momentumSecond };
  const hasMomentum = part.facts.layouts.includes('antisymmetric-by-symmetric-pairs');
  const otherN = orbitalsOfShape(raw, part);
  const mend =
    other !== undefined
      ? `It fits "layout": "${other}".`
      : part.components.length > 1 && fits(raw.shape, axis, n)
        ? `It fits "componentAxis": "${axis.componentLast ? 'last' : 'first'}".`
        : hasMomentum && fits(raw.shape, momentum, n)
          ? `It fits "momentum": "${momentum.momentumSecond ? 'second' : 'first'}".`
          : otherN !== null
            ? `It fits ${otherN} orbitals: the array belongs to another orbital space.`
            : 'Correct layout or components in the recipe.';
  const expected = withComponents(
    layoutShape(part.layout, part.facts.numIndices, n, part.momentumSecond),
    part,
  );
  return new InputError({
    code: 'wrong-shape',
    where: raw.origin,
    found: `shape ${raw.shape.join('×') || 'scalar'}`,
    expected: `${expected.join('×')} for part "${part.id}" (${part.layout}, ${n} orbitals)`,
    mend,
  });
}
