import { InputError, type JobContext } from '../../job';
import type { RawArray } from '../raw';
import type { ByteSource } from '../source';
import { fillWithProgress, forEachChunk, readExactly, refuseEmpty, truncated } from './chunks';
import { doublesEach, ElementWriter, isNative } from './elements';
import { countElements, requireFinite } from './limits';
import { type NpyHeader, parseNpyHeader } from './npy-header';
import { latin1 } from './text-lines';

/** A header is a few hundred bytes; a longer one is no header. */
const MAX_HEADER_BYTES = 2 ** 16;
/** Enough for the header of nearly every file. */
const FIRST_BYTES = 4096;

/**
 * Reads an `.npy` array, format versions 1.0 to 3.0 (NumPy Enhancement Proposal 1 and its later revisions),
 * C or Fortran order, little- or big-endian, into row-major doubles.
 * @throws InputError naming the file.
 */
export async function readNpy(source: ByteSource, context: JobContext): Promise<RawArray> {
  refuseEmpty(source);
  const assembler = new NpyAssembler(source.path, source.size);
  assembler.push(await readExactly(source, 0, Math.min(source.size, FIRST_BYTES)));
  const direct = assembler.direct();
  if (direct !== null) await fillWithProgress(source, source.size - direct.length, direct, context);
  else {
    const rest = Math.min(source.size, FIRST_BYTES);
    await forEachChunk(source, rest, source.size, context, (bytes) => assembler.push(bytes));
  }
  return assembler.finish();
}

/** Builds an array from the bytes of an `.npy` file of known length, in pieces as they arrive. */
export class NpyAssembler {
  private head: Uint8Array = new Uint8Array(0);
  private header: NpyHeader | null = null;
  private writer: ElementWriter | null = null;
  private data = new Float64Array(0);

  /** @param total length of the whole file, header included. */
  constructor(
    private readonly where: string,
    private readonly total: number,
  ) {}

  push(bytes: Uint8Array): void {
    if (this.writer !== null) {
      this.writer.push(bytes);
      return;
    }
    const head = new Uint8Array(this.head.length + bytes.length);
    head.set(this.head);
    head.set(bytes, this.head.length);
    this.head = head;
    const from = this.headerEnd();
    if (from === null || head.length < from) return;
    this.open(from);
    (this.writer as ElementWriter | null)?.push(head.subarray(from));
    this.head = new Uint8Array(0);
  }

  /** All data bytes, to be filled by the caller, where they are stored as they are used; else null. */
  direct(): Uint8Array | null {
    if (this.header === null || !isNative(this.header.type)) return null;
    return new Uint8Array(this.data.buffer);
  }

  finish(): RawArray {
    const { header, where } = this;
    if (header === null) throw truncated(where, (this.headerEnd() ?? 10) + 1, this.total);
    const complex = header.type.kind === 'complex';
    const data = header.fortranOrder
      ? toRowMajor(this.data, header.shape, doublesEach(header.type))
      : this.data;
    requireFinite(where, data, header.shape, complex);
    return { origin: where, shape: header.shape, complex, data };
  }

  /** Where the data begin, or null while the length of the header is not yet known. */
  private headerEnd(): number | null {
    const { head, where } = this;
    const magic = latin1(head.subarray(0, 6));
    if (!'\x93NUMPY'.startsWith(magic)) {
      throw new InputError({
        code: 'not-npy',
        where,
        found: 'no NumPy signature',
        expected: 'an .npy file',
        mend: 'Save the array with numpy.save, or correct the file name in the recipe.',
      });
    }
    if (head.length < 12) return null;
    const version = head[6];
    if (version < 1 || version > 3) {
      throw new InputError({
        code: 'bad-header',
        where,
        found: `.npy format version ${version}.${head[7]}`,
        expected: 'version 1.0 to 3.0',
        mend: 'Save the array again with numpy.save.',
      });
    }
    const view = new DataView(head.buffer, head.byteOffset, head.length);
    const length = version === 1 ? view.getUint16(8, true) : view.getUint32(8, true);
    if (length > MAX_HEADER_BYTES) {
      throw new InputError({
        code: 'bad-header',
        where,
        found: `a header of ${length} bytes`,
        expected: `at most ${MAX_HEADER_BYTES} bytes`,
        mend: 'The file is damaged: save the array again with numpy.save.',
      });
    }
    return (version === 1 ? 10 : 12) + length;
  }

  private open(from: number): void {
    const { where, head } = this;
    const header = parseNpyHeader(where, latin1(head.subarray(head[6] === 1 ? 10 : 12, from)));
    const count = countElements(where, header.shape, 8 * doublesEach(header.type));
    const expected = from + count * header.type.bytes;
    if (expected !== this.total) {
      throw new InputError({
        code: this.total < expected ? 'truncated' : 'trailing-bytes',
        where,
        found: `${this.total} bytes`,
        expected: `${expected} bytes for shape (${header.shape.join(', ')})`,
        mend: 'The file was cut short, or its header is wrong: save the array again with numpy.save.',
      });
    }
    this.header = header;
    this.data = new Float64Array(count * doublesEach(header.type));
    this.writer = new ElementWriter(where, header.type, this.data);
  }
}

/** Fortran order, first index fastest, to row-major. `each`: doubles of one element. */
function toRowMajor(data: Float64Array, shape: readonly number[], each: number): Float64Array {
  if (shape.length < 2) return data;
  const out = new Float64Array(data.length);
  const strides: number[] = [];
  shape.reduce((stride, extent) => {
    strides.push(stride);
    return stride * extent;
  }, each);
  const last = shape.length - 1;
  const inner = shape[last];
  const step = strides[last];
  const index = new Array<number>(last).fill(0);
  for (let to = 0, from = 0; to < out.length; ) {
    for (let i = 0, at = from; i < inner; i++, at += step) {
      for (let part = 0; part < each; part++) out[to++] = data[at + part];
    }
    for (let axis = last - 1; axis >= 0; axis--) {
      from += strides[axis];
      if (++index[axis] < shape[axis]) break;
      from -= strides[axis] * shape[axis];
      index[axis] = 0;
    }
  }
  return out;
}
