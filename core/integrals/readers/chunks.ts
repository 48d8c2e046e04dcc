import { InputError, type JobContext } from '../../job';
import type { ByteSource } from '../source';

/** Bytes asked for at a time: large enough to be quick, small enough that a stop is heard in time. */
const CHUNK_BYTES = 2 ** 20;

/**
 * Bytes [offset, offset + length), all of them.
 * @throws InputError `truncated` where the source ends before.
 */
export async function readExactly(source: ByteSource, offset: number, length: number): Promise<Uint8Array> {
  if (offset + length <= source.size) {
    const bytes = await source.read(offset, length);
    if (bytes.length === length) return bytes;
  }
  throw truncated(source.path, offset + length, source.size);
}

export function truncated(where: string, expected: number, found: number): InputError {
  return new InputError({
    code: 'truncated',
    where,
    found: `${found} bytes`,
    expected: `at least ${expected} bytes`,
    mend: 'The file was cut short or changed while it was read: copy it again from where it was written.',
  });
}

/** Fills `target` with the bytes from `offset` on. @throws InputError `truncated` */
export async function fillExactly(source: ByteSource, offset: number, target: Uint8Array): Promise<void> {
  if (source.readInto === undefined) target.set(await readExactly(source, offset, target.length));
  else if ((await source.readInto(offset, target)) < target.length) {
    throw truncated(source.path, offset + target.length, source.size);
  }
}

/**
 * Hands the bytes [from, to) to `visit`, block by block, with progress and a chance to stop between blocks.
 * The block is used again for the next one: `visit` must not keep it.
 */
export async function forEachChunk(
  source: ByteSource,
  from: number,
  to: number,
  context: JobContext,
  visit: (bytes: Uint8Array) => void | Promise<void>,
): Promise<void> {
  const stage = `reading ${source.path}`;
  const buffer = new Uint8Array(Math.min(CHUNK_BYTES, to - from));
  for (let at = from; at < to; ) {
    const length = Math.min(CHUNK_BYTES, to - at);
    const bytes = buffer.subarray(0, length);
    await fillExactly(source, at, bytes);
    const done = visit(bytes);
    if (done) await done;
    at += length;
    context.report(stage, at - from, to - from);
    await context.checkpoint();
  }
}

/** Fills a large array with the bytes from `offset` on, with progress. */
export async function fillWithProgress(
  source: ByteSource,
  offset: number,
  target: Uint8Array,
  context: JobContext,
): Promise<void> {
  for (let at = 0; at < target.length; ) {
    const length = Math.min(4 * CHUNK_BYTES, target.length - at);
    await fillExactly(source, offset + at, target.subarray(at, at + length));
    at += length;
    context.report(`reading ${source.path}`, at, target.length);
    await context.checkpoint();
  }
}

export function refuseEmpty(source: ByteSource): void {
  if (source.size > 0) return;
  throw new InputError({
    code: 'empty-file',
    where: source.path,
    found: 'an empty file',
    expected: 'integrals',
    mend: 'Write or copy the file again.',
  });
}
