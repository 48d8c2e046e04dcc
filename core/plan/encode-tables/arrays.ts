/** Types of elements by their NumPy names; all little-endian. */
export const ELEMENTS = {
  '<f8': Float64Array,
  '<u4': Uint32Array,
  '<u2': Uint16Array,
  '|u1': Uint8Array,
  '|i1': Int8Array,
} as const;

export type ElementName = keyof typeof ELEMENTS;
export type Numbers = Float64Array | Uint32Array | Uint16Array | Uint8Array | Int8Array;

/** One array of a form: what it holds, whatever the set. */
export interface ArrayLayout {
  readonly name: string;
  readonly type: ElementName;
  /** Names of sizes of the document, or numbers. */
  readonly shape: readonly (string | number)[];
  readonly meaning: string;
}

/** The numbers of an array, row-major, in pieces that are made as they are asked for. */
export type Pieces = () => Iterable<Numbers>;

/** Numbers by the names of a document. */
export type Sizes = Readonly<Record<string, number>>;

/** @returns undefined where a size is not known */
export function shapeOf(layout: ArrayLayout, sizes: Sizes): number[] | undefined {
  const shape = layout.shape.map((extent) => (typeof extent === 'number' ? extent : sizes[extent]));
  return shape.every((extent) => extent !== undefined) ? shape : undefined;
}

/** Elements of a piece: some 256 KiB of 32-bit numbers. */
const PIECE = 2 ** 16;

/** An array that exists as a whole. */
export const whole = (data: Numbers): Pieces =>
  function* () {
    for (let from = 0; from < data.length; from += PIECE) yield data.subarray(from, from + PIECE);
  };

/**
 * An array of `rows` rows of `width` numbers, filled row by row.
 *
 * @param fill - writes row i into `target`, all zeros before, from `at` on
 */
export function byRow<E extends ElementName>(
  type: E,
  rows: number,
  width: number,
  fill: (i: number, target: InstanceType<(typeof ELEMENTS)[E]>, at: number) => void,
): Pieces {
  return function* () {
    const most = Math.max(1, Math.floor(PIECE / Math.max(1, width)));
    for (let from = 0; from < rows; from += most) {
      const count = Math.min(most, rows - from);
      const target = new ELEMENTS[type](count * width) as InstanceType<(typeof ELEMENTS)[E]>;
      for (let i = 0; i < count; i++) fill(from + i, target, i * width);
      yield target;
    }
  };
}

/** Arrays one after the other. */
export const joined =
  (parts: readonly Numbers[]): Pieces =>
  () =>
    parts;

export function sumOf(numbers: Iterable<number>): number {
  let total = 0;
  for (const x of numbers) total += x;
  return total;
}
