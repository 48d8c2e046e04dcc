import { InputError } from '../../job';

/** How numbers are stored in a binary array. `bytes` is that of one element, both parts of a complex one. */
export interface ElementType {
  readonly kind: 'float' | 'signed' | 'unsigned' | 'complex';
  readonly bytes: number;
  readonly littleEndian: boolean;
}

const SIZES: Record<ElementType['kind'], readonly number[]> = {
  float: [4, 8],
  complex: [8, 16],
  signed: [1, 2, 4, 8],
  unsigned: [1, 2, 4, 8],
};

export const isReadable = (type: ElementType): boolean => SIZES[type.kind].includes(type.bytes);

/** Doubles that one element becomes. */
export const doublesEach = (type: ElementType): number => (type.kind === 'complex' ? 2 : 1);

/**
 * Whether elements are stored as this machine holds doubles: every platform this runs on is little-endian,
 * WebAssembly by definition.
 */
export const isNative = ({ kind, bytes, littleEndian }: ElementType): boolean =>
  littleEndian && ((kind === 'float' && bytes === 8) || (kind === 'complex' && bytes === 16));

/** Turns stored elements into doubles as their bytes arrive, in pieces of any length. */
export class ElementWriter {
  /** Doubles written so far. */
  written = 0;
  private readonly carry: Uint8Array;
  private carried = 0;

  constructor(
    private readonly where: string,
    private readonly type: ElementType,
    private readonly out: Float64Array,
  ) {
    this.carry = new Uint8Array(type.bytes);
  }

  /** @throws InputError `integer-too-large` for a 64-bit integer that no double holds. */
  push(bytes: Uint8Array): void {
    const each = this.type.bytes;
    let from = 0;
    if (this.carried > 0) {
      from = Math.min(each - this.carried, bytes.length);
      this.carry.set(bytes.subarray(0, from), this.carried);
      this.carried += from;
      if (this.carried < each) return;
      this.write(this.carry);
      this.carried = 0;
    }
    const whole = from + Math.floor((bytes.length - from) / each) * each;
    this.write(bytes.subarray(from, whole));
    this.carry.set(bytes.subarray(whole));
    this.carried = bytes.length - whole;
  }

  private write(bytes: Uint8Array): void {
    const { type, out } = this;
    const part = type.bytes / doublesEach(type);
    const count = bytes.length / part;
    if (isNative(type)) {
      new Uint8Array(out.buffer, out.byteOffset + this.written * 8, bytes.length).set(bytes);
    } else this.convert(new DataView(bytes.buffer, bytes.byteOffset, bytes.length), part, count);
    this.written += count;
  }

  private convert(view: DataView, part: number, count: number): void {
    const { type, out, written } = this;
    const le = type.littleEndian;
    const signed = type.kind === 'signed';
    if (type.kind === 'float' || type.kind === 'complex') {
      for (let i = 0; i < count; i++) {
        out[written + i] = part === 4 ? view.getFloat32(i * 4, le) : view.getFloat64(i * 8, le);
      }
      return;
    }
    for (let i = 0; i < count; i++) {
      if (part === 8) out[written + i] = this.wide(view, i, signed);
      else if (part === 4) out[written + i] = signed ? view.getInt32(i * 4, le) : view.getUint32(i * 4, le);
      else if (part === 2) out[written + i] = signed ? view.getInt16(i * 2, le) : view.getUint16(i * 2, le);
      else out[written + i] = signed ? view.getInt8(i) : view.getUint8(i);
    }
  }

  private wide(view: DataView, i: number, signed: boolean): number {
    const le = this.type.littleEndian;
    const high = signed ? view.getInt32(i * 8 + (le ? 4 : 0), le) : view.getUint32(i * 8 + (le ? 4 : 0), le);
    const value = high * 2 ** 32 + view.getUint32(i * 8 + (le ? 0 : 4), le);
    if (Number.isSafeInteger(value)) return value;
    throw new InputError({
      code: 'integer-too-large',
      where: `${this.where}, element ${this.written + i}`,
      found: `the integer ${value}`,
      expected: 'integers below 2^53',
      mend: 'Write the array as float64.',
    });
  }
}
