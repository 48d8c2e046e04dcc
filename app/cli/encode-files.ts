import { isDeepStrictEqual } from 'node:util';
import type { IntegralSet } from '../../core/integrals';
import { InputError, type JobContext } from '../../core/job';
import {
  type CircuitRequest,
  encodeTables,
  readTables,
  type TablesDocument,
  writeTables,
} from '../../core/plan';
import { folderFiles } from './files';
import { writeFolder } from './output';
import type { OutputFile } from './request';

/**
 * Writes the tables of a variant under the temporary name of `out`, and reads them back from there: what is put in
 * place stands for the program of the tables, number for number.
 *
 * @throws InputError `cannot-write`; what encodeTables throws
 */
export async function writeEncoding(
  set: IntegralSet,
  request: CircuitRequest,
  out: OutputFile,
  context: JobContext,
): Promise<TablesDocument> {
  const tables = await encodeTables(set, request, context);
  const document = await writeFolder(out, (append) => writeTables(tables, append, context));
  const stored = await readTables(await folderFiles(out.temporary), context);
  context.report('comparing what was written', 0, null);
  await context.checkpoint();
  if (!isDeepStrictEqual(stored, tables.encoded)) {
    throw new InputError({
      code: 'cannot-write',
      where: out.path,
      found: 'files that read back as another program than the one written',
      expected: 'the same numbers',
      mend: 'Check the disk, or choose another place.',
    });
  }
  return document;
}
