import { Inflate } from 'fflate';
import { InputError, type JobContext } from '../../job';
import type { RawArray } from '../raw';
import type { ByteSource } from '../source';
import { forEachChunk, refuseEmpty } from './chunks';
import { Crc32 } from './crc';
import { clipped, refuseTraps } from './limits';
import { NpyAssembler } from './npy';
import { damaged, dataOffset, readDirectory, type ZipMember } from './zip';

/** Deflate unfolds at most 1032-fold, so a piece of this size stays small unfolded. */
const PIECE_BYTES = 2 ** 14;

/** Names of the arrays of an `.npz` archive, without `.npy`. */
export async function listNpz(source: ByteSource, context: JobContext): Promise<readonly string[]> {
  refuseEmpty(source);
  return (await readDirectory(source, context)).map(arrayName);
}

/**
 * Reads one array of an `.npz` archive; `name` with or without `.npy`, or undefined for the only one.
 * What unfolds to more than the archive and the array's own header say is refused before it is held.
 * @throws InputError naming `file:member`.
 */
export async function readNpz(
  source: ByteSource,
  name: string | undefined,
  context: JobContext,
): Promise<RawArray> {
  refuseEmpty(source);
  const member = choose(source, await readDirectory(source, context), name);
  const where = `${source.path}:${clipped(arrayName(member))}`;
  if (member.encrypted || (member.method !== 0 && member.method !== 8)) {
    throw new InputError({
      code: 'bad-zip',
      where,
      found: member.encrypted ? 'an encrypted member' : `compression method ${member.method}`,
      expected: 'a stored or deflated member',
      mend: 'Write the archive with numpy.savez or numpy.savez_compressed.',
    });
  }
  refuseTraps(where, member.packed, member.unpacked);
  const offset = await dataOffset(source, member);
  const assembler = new NpyAssembler(where, member.unpacked);
  const sink = new CheckedSink(where, member, assembler);
  if (member.method === 0 && member.packed !== member.unpacked) throw damaged(where, 'sizes that disagree');
  const inflate = member.method === 8 ? new Inflate((bytes) => sink.push(bytes)) : null;
  await forEachChunk(source, offset, offset + member.packed, context, async (chunk) => {
    if (inflate === null) return sink.push(chunk);
    for (let at = 0; at < chunk.length; at += PIECE_BYTES) {
      unfold(where, inflate, chunk.subarray(at, at + PIECE_BYTES));
      await context.checkpoint();
    }
  });
  sink.finish();
  return assembler.finish();
}

const arrayName = (member: ZipMember): string => member.name.replace(/\.npy$/, '');

function choose(source: ByteSource, members: readonly ZipMember[], name: string | undefined): ZipMember {
  const wanted = name?.replace(/\.npy$/, '');
  const fitting = members.filter((member) => wanted === undefined || arrayName(member) === wanted);
  if (fitting.length === 1) return fitting[0];
  const names = members.map(arrayName);
  throw new InputError({
    code: 'no-such-array',
    where: wanted === undefined ? source.path : `${source.path}:${wanted}`,
    found:
      names.length === 0
        ? 'an archive without arrays'
        : fitting.length === 0
          ? 'no such array'
          : `${fitting.length} arrays`,
    expected:
      names.length === 0 ? 'at least one array' : `one of ${names.slice(0, 12).map(clipped).join(', ')}`,
    mend:
      names.length === 0
        ? 'Write it again with numpy.savez.'
        : 'Name the array as "dataset" of the part in the recipe.',
  });
}

function unfold(where: string, inflate: Inflate, piece: Uint8Array): void {
  try {
    inflate.push(piece, false);
  } catch (error) {
    if (error instanceof InputError) throw error;
    throw damaged(where, 'compressed data that cannot be unfolded');
  }
}

/** Lets through exactly what the directory promised, and no other bytes. */
class CheckedSink {
  private received = 0;
  private readonly crc = new Crc32();

  constructor(
    private readonly where: string,
    private readonly member: ZipMember,
    private readonly assembler: NpyAssembler,
  ) {}

  push(bytes: Uint8Array): void {
    this.received += bytes.length;
    if (this.received > this.member.unpacked) {
      throw damaged(this.where, `more than the ${this.member.unpacked} bytes that the directory says`);
    }
    this.crc.push(bytes);
    this.assembler.push(bytes);
  }

  finish(): void {
    const { received, member } = this;
    if (received !== member.unpacked) {
      throw damaged(this.where, `${received} of ${member.unpacked} bytes`);
    }
    if (this.crc.value !== member.crc) throw damaged(this.where, 'a wrong checksum');
  }
}
