import { InputError, type JobContext } from '../../job';
import type { ByteSource } from '../source';
import { forEachChunk } from './chunks';

/** No line of a text format is longer; a namelist header with 800 labels takes a hundredth of it. */
const MAX_LINE_BYTES = 2 ** 17;
const NEWLINE = 10;

/** Receives bytes [start, end) of `bytes` as line `line`, counted from 1, without its newline. */
export type LineVisitor = (bytes: Uint8Array, start: number, end: number, line: number) => void;

/**
 * Visits every line of a text of any size, holding one block of it at a time. A byte-order mark is left out.
 * @throws InputError `line-too-long`, for what is no text.
 */
export async function forEachLine(
  source: ByteSource,
  context: JobContext,
  visit: LineVisitor,
): Promise<void> {
  let carry: Uint8Array = new Uint8Array(0);
  let line = 1;
  await forEachChunk(source, 0, source.size, context, (chunk) => {
    let bytes = chunk;
    if (carry.length > 0) {
      bytes = new Uint8Array(carry.length + chunk.length);
      bytes.set(carry);
      bytes.set(chunk, carry.length);
    }
    let start = line === 1 && carry.length === 0 && hasByteOrderMark(bytes) ? 3 : 0;
    for (;;) {
      const end = bytes.indexOf(NEWLINE, start);
      if (end < 0) break;
      if (end - start > MAX_LINE_BYTES) throw tooLong(source.path, line);
      visit(bytes, start, end, line++);
      start = end + 1;
    }
    if (bytes.length - start > MAX_LINE_BYTES) throw tooLong(source.path, line);
    carry = bytes.slice(start);
  });
  if (carry.length > 0) visit(carry, 0, carry.length, line);
}

const hasByteOrderMark = (bytes: Uint8Array): boolean =>
  bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf;

const tooLong = (path: string, line: number): InputError =>
  new InputError({
    code: 'line-too-long',
    where: `${path}:${line}`,
    found: `no line end within ${MAX_LINE_BYTES} bytes`,
    expected: 'lines of text',
    mend: 'The file is binary or damaged: give the text file, or the right format.',
  });

/** Bytes as text for headers and messages: one character a byte, never failing. */
export function latin1(bytes: Uint8Array): string {
  let text = '';
  for (const c of bytes) text += String.fromCharCode(c);
  return text;
}
