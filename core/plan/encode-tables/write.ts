import { Crc32 } from '../../integrals';
import type { JobContext } from '../../job';
import { shapeOf } from './arrays';
import { documentChecksum, TABLES_FILE, type TablesDocument, type WrittenArray } from './document';
import type { EncodedTables } from './encode';
import { FORMS } from './forms';
import { FRAME_ARRAY } from './frame';
import { npyHeader } from './npy';

/**
 * Writes the tables piece by piece, the document last: a folder without it is not whole. Arrays without numbers are left
 * out. Little-endian machines only.
 *
 * @param append - adds bytes to a file of the folder; one file is finished before the next begins
 */
export async function writeTables(
  { summary, rounded }: EncodedTables,
  append: (file: string, bytes: Uint8Array) => void,
  context: JobContext,
): Promise<TablesDocument> {
  const { arrays: ofForm } = FORMS.find(({ form }) => form === summary.form)!;
  const layouts = summary.frame ? [...ofForm, FRAME_ARRAY] : ofForm;
  const arrays: WrittenArray[] = [];
  for (const layout of layouts) {
    const { name, type, meaning } = layout;
    const shape = shapeOf(layout, summary.sizes);
    const pieces = rounded.data[name];
    if (!shape || !pieces) throw new Error(`array ${name} has no extents or no numbers`);
    const total = shape.reduce((product, extent) => product * extent, 1);
    if (total === 0) continue;
    const file = `${name}.npy`;
    append(file, npyHeader(type, shape));
    const crc = new Crc32();
    let done = 0;
    for (const piece of pieces()) {
      const bytes = new Uint8Array(piece.buffer, piece.byteOffset, piece.byteLength);
      crc.push(bytes);
      append(file, bytes);
      done += piece.length;
      context.report(`writing ${file}`, done, total);
      await context.checkpoint();
    }
    if (done !== total) throw new Error(`array ${name} has ${done} numbers, not ${total}`);
    arrays.push({ name, file, type, shape, extents: layout.shape, meaning, crc32: crc.value });
  }
  const whole = { ...summary, arrays };
  const document: TablesDocument = { ...whole, crc32: documentChecksum(whole) };
  append(TABLES_FILE, new TextEncoder().encode(`${JSON.stringify(document, null, 2)}\n`));
  return document;
}
