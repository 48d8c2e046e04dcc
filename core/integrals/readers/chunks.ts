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

/** Hands the bytes [from, to) to `visit`, block by block, with progress and a chance to stop between blocks. */
export async function forEachChunk(
  source: ByteSource,
  from: number,
  to: number,
  context: JobContext,
  visit: (bytes: Uint8Array) => void | Promise<void>,
): Promise<void> {
  const stage = `reading ${source.path}`;
  for (let at = from; at < to; ) {
    const length = Math.min(CHUNK_BYTES, to - at);
    const done = visit(await readExactly(source, at, length));
    if (done) await done;
    at += length;
    context.report(stage, at - from, to - from);
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
