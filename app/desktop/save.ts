import { open, rename, rm } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';

/** Writes a file whole or not at all: to a temporary name beside it, then renamed. */
export async function writeWhole(path: string, text: string): Promise<void> {
  const temporary = join(dirname(path), `.${basename(path)}.tmp-${process.pid}`);
  try {
    const file = await open(temporary, 'w');
    try {
      await file.writeFile(text);
      await file.sync();
    } finally {
      await file.close();
    }
    await rename(temporary, path);
  } catch (error) {
    await rm(temporary, { force: true });
    throw error;
  }
}
