import { InputError, type JobContext } from '../../job';
import type { ByteSource } from '../source';
import { readExactly } from './chunks';
import { latin1 } from './text-lines';

/** A member of a ZIP archive, from its central directory (APPNOTE.TXT 6.3.10, sections 4.3.12 and 4.5.3). */
export interface ZipMember {
  readonly name: string;
  /** 0 stored, 8 deflated. */
  readonly method: number;
  readonly encrypted: boolean;
  readonly crc: number;
  readonly packed: number;
  readonly unpacked: number;
  readonly headerOffset: number;
}

const END_BYTES = 22;
const MAX_DIRECTORY_BYTES = 2 ** 24;

/** @throws InputError `bad-zip` where the archive has no whole directory. */
export async function readDirectory(source: ByteSource, context: JobContext): Promise<readonly ZipMember[]> {
  await context.checkpoint();
  const { offset, length, count } = await findDirectory(source);
  if (length > MAX_DIRECTORY_BYTES || offset + length > source.size) {
    throw damaged(source.path, 'a directory outside the file');
  }
  const bytes = await readExactly(source, offset, length);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  const members: ZipMember[] = [];
  for (let at = 0; at + 46 <= length && members.length < count; ) {
    if (view.getUint32(at, true) !== 0x02014b50) break;
    const nameLength = view.getUint16(at + 28, true);
    const extraLength = view.getUint16(at + 30, true);
    const next = at + 46 + nameLength + extraLength + view.getUint16(at + 32, true);
    if (next > length) break;
    const wide = new WideFields(view, at + 46 + nameLength, extraLength);
    const unpacked = wide.take(view.getUint32(at + 24, true));
    const packed = wide.take(view.getUint32(at + 20, true));
    members.push({
      name: latin1(bytes.subarray(at + 46, at + 46 + nameLength)),
      method: view.getUint16(at + 10, true),
      encrypted: (view.getUint16(at + 8, true) & 1) === 1,
      crc: view.getUint32(at + 16, true),
      packed,
      unpacked,
      headerOffset: wide.take(view.getUint32(at + 42, true)),
    });
    at = next;
  }
  if (members.length !== count) throw damaged(source.path, `${members.length} of ${count} directory entries`);
  return members;
}

/** Where the bytes of a member begin: its own header may be longer than the directory says. */
export async function dataOffset(source: ByteSource, member: ZipMember): Promise<number> {
  const header = await readExactly(source, member.headerOffset, 30);
  const view = new DataView(header.buffer, header.byteOffset, 30);
  const offset = member.headerOffset + 30 + view.getUint16(26, true) + view.getUint16(28, true);
  if (view.getUint32(0, true) !== 0x04034b50 || offset + member.packed > source.size) {
    throw damaged(`${source.path}:${member.name}`, 'no data where the directory says');
  }
  return offset;
}

export const damaged = (where: string, found: string): InputError =>
  new InputError({
    code: 'bad-zip',
    where,
    found,
    expected: 'a whole .npz archive',
    mend: 'The archive was cut short or damaged: write it again with numpy.savez, or copy it again.',
  });

async function findDirectory(source: ByteSource): Promise<{ offset: number; length: number; count: number }> {
  // The end record is last but for a comment of up to 65535 bytes.
  const tailLength = Math.min(source.size, END_BYTES + 0xffff);
  const tail = await readExactly(source, source.size - tailLength, tailLength);
  const view = new DataView(tail.buffer, tail.byteOffset, tail.length);
  for (let at = tailLength - END_BYTES; at >= 0; at--) {
    if (view.getUint32(at, true) !== 0x06054b50) continue;
    const end = {
      offset: view.getUint32(at + 16, true),
      length: view.getUint32(at + 12, true),
      count: view.getUint16(at + 10, true),
    };
    if (end.offset !== 0xffffffff && end.length !== 0xffffffff && end.count !== 0xffff) return end;
    if (at < 20 || view.getUint32(at - 20, true) !== 0x07064b50) break;
    const record = await readExactly(source, wideNumber(view, at - 20 + 8), 56);
    const wide = new DataView(record.buffer, record.byteOffset, 56);
    if (wide.getUint32(0, true) !== 0x06064b50) break;
    return { offset: wideNumber(wide, 48), length: wideNumber(wide, 40), count: wideNumber(wide, 32) };
  }
  throw damaged(source.path, 'no directory at the end of the archive');
}

const wideNumber = (view: DataView, at: number): number =>
  view.getUint32(at, true) + view.getUint32(at + 4, true) * 2 ** 32;

/** The ZIP64 extra field holds, in fixed order, only those numbers that overflow their 32 bits. */
class WideFields {
  private at = -1;
  private end = -1;

  constructor(
    private readonly view: DataView,
    start: number,
    length: number,
  ) {
    for (let at = start; at + 4 <= start + length; at += 4 + view.getUint16(at + 2, true)) {
      if (view.getUint16(at, true) !== 1) continue;
      this.at = at + 4;
      this.end = Math.min(this.at + view.getUint16(at + 2, true), start + length);
    }
  }

  take(narrow: number): number {
    if (narrow !== 0xffffffff || this.at < 0 || this.at + 8 > this.end) return narrow;
    this.at += 8;
    return wideNumber(this.view, this.at - 8);
  }
}
