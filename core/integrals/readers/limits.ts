import { InputError } from '../../job';

/** Largest array, in bytes of doubles, that a reader will build: beyond it a browser worker cannot hold it. */
export const MAX_ARRAY_BYTES = 2 ** 31;
/** Below this size an array is built without asking whether the file can plausibly hold it. */
const UNQUESTIONED_BYTES = 2 ** 26;
/**
 * Most that packed data may unfold. Deflate reaches 1032 on constant bytes; integral arrays, zeros included,
 * were measured at 1 to 30. Whatever is above is taken for a trap, not for data.
 */
const MAX_INFLATION = 250;

/** A name from a file, short enough for a message. */
export const clipped = (name: string): string => (name.length > 80 ? `${name.slice(0, 77)}…` : name);

const mebibytes = (bytes: number): string => `${Math.ceil(bytes / 2 ** 20)} MiB`;

/** Element count of a shape. @throws InputError `too-large` where it could not be held. */
export function countElements(where: string, shape: readonly number[], bytesEach: number): number {
  const count = shape.reduce((product, extent) => product * extent, 1);
  if (count * bytesEach > MAX_ARRAY_BYTES) {
    throw new InputError({
      code: 'too-large',
      where,
      found: `shape (${shape.join(', ')}), ${mebibytes(count * bytesEach)}`,
      expected: `an array of at most ${mebibytes(MAX_ARRAY_BYTES)}`,
      mend: 'Use a packed layout or fewer orbitals, and check the shape in the file.',
    });
  }
  return count;
}

/** @throws InputError `implausible-size` where `packed` bytes claim to unfold to `unfolded`. */
export function refuseTraps(where: string, packed: number, unfolded: number): void {
  if (unfolded <= UNQUESTIONED_BYTES || unfolded <= packed * MAX_INFLATION) return;
  throw new InputError({
    code: 'implausible-size',
    where,
    found: `${packed} bytes that claim to unfold to ${mebibytes(unfolded)}`,
    expected: `at most ${MAX_INFLATION} times the packed size`,
    mend: 'Write the array again, uncompressed; refuse the file if you do not know where it comes from.',
  });
}

/** A product with this overflows for what no unit makes of an integral: |x| > 1.8e28. */
const OVERFLOWING = 1e280;

/**
 * @throws InputError `not-finite` naming the first element that is NaN or infinite, or `byte-order` for one so
 *   large that the bytes must be those of something else.
 */
export function requireFinite(
  where: string,
  data: Float64Array,
  shape: readonly number[],
  complex: boolean,
): void {
  // A sum is finite only if every term is: one pass without a branch settles the usual case.
  let sum = 0;
  for (let i = 0; i < data.length; i++) sum += data[i] * OVERFLOWING * 0;
  if (sum === 0) return;
  const at = data.findIndex((value) => !Number.isFinite(value * OVERFLOWING));
  const huge = Number.isFinite(data[at]);
  let rest = complex ? Math.floor(at / 2) : at;
  const index: number[] = [];
  for (let axis = shape.length - 1; axis >= 0; axis--) {
    index.unshift(rest % shape[axis]);
    rest = Math.floor(rest / shape[axis]);
  }
  throw new InputError({
    code: huge ? 'byte-order' : 'not-finite',
    where: `${where}[${index.join(', ')}]`,
    found: huge ? data[at].toExponential(3) : String(data[at]),
    expected: huge ? 'the size of an integral in any unit' : 'a finite number',
    mend: huge
      ? 'The file states another byte order or number type than it has: save the array again.'
      : 'Compute the integrals again; the program that wrote them divided by zero or overflowed.',
  });
}
