import { isDeepStrictEqual } from 'node:util';
import type { IntegralSet } from '../../core/integrals';
import { InputError, type JobContext } from '../../core/job';
import {
  type CircuitRequest,
  checkTables,
  encodeTables,
  readTables,
  type TablesCheck,
  type TablesDocument,
  writeTables,
} from '../../core/plan';
import { folderFiles } from './files';
import { loadInputs, openInputs } from './inputs';
import { writeFolder } from './output';
import type { InputFiles, OutputFile } from './request';

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

/** What a folder of tables holds, and whether it fits the files it was made from, where these are named. */
export async function checkEncoding(
  folder: string,
  against: InputFiles | null,
  context: JobContext,
): Promise<TablesCheck> {
  const files = await folderFiles(folder);
  const set = against && (await loadInputs(await openInputs(against, context), 'all', 'throw', context));
  return checkTables(files, set, context);
}
