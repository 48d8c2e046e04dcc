import { randomBytes } from 'node:crypto';
import {
  closeSync,
  cpSync,
  existsSync,
  mkdirSync,
  openSync,
  readdirSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
  writeSync,
} from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';
import { InputError } from '../../core/job';
import type { OutputFile } from './request';

/** Temporary names in use: removed when the program is interrupted. */
const pending = new Set<string>();

function temporaryName(target: string): string {
  return join(dirname(target), `.${basename(target)}.tmp-${process.pid}-${randomBytes(3).toString('hex')}`);
}

function place(target: string, write: (temporary: string) => void): void {
  const temporary = temporaryName(target);
  pending.add(temporary);
  try {
    mkdirSync(dirname(target), { recursive: true });
    write(temporary);
    renameSync(temporary, target);
  } catch (error) {
    throw cannotWrite(target, error);
  } finally {
    discard(temporary);
  }
}

function discard(temporary: string): void {
  pending.delete(temporary);
  try {
    rmSync(temporary, { recursive: true, force: true });
  } catch {
    // What was to be its folder is none: then there is nothing to remove either.
  }
}

function cannotWrite(target: string, error: unknown): InputError {
  return new InputError({
    code: 'cannot-write',
    where: target,
    found: `the file cannot be written (${(error as NodeJS.ErrnoException).code ?? 'unknown reason'})`,
    expected: 'a place that can be written to',
    mend: 'Choose another path or free this one.',
  });
}

/** A temporary name for a file that another thread will write; removed unless it is put in place. */
export function reserveFile(path: string): OutputFile {
  const temporary = temporaryName(resolve(path));
  pending.add(temporary);
  return { path, temporary };
}

/** Writes a reserved file piece by piece. */
export async function writeStreamed<T>(
  { path, temporary }: OutputFile,
  produce: (write: (chunk: string) => void) => Promise<T>,
): Promise<T> {
  const guarded = <V>(use: () => V): V => {
    try {
      return use();
    } catch (error) {
      throw cannotWrite(path, error);
    }
  };
  const file = guarded(() => {
    mkdirSync(dirname(temporary), { recursive: true });
    return openSync(temporary, 'wx');
  });
  try {
    return await produce((chunk) => {
      guarded(() => writeSync(file, chunk));
    });
  } finally {
    closeSync(file);
  }
}

/**
 * Writes the files of a reserved folder one after the other, piece by piece.
 *
 * @param produce - calls `append` with a file's name and its next bytes; a name that was left does not come again
 */
export async function writeFolder<T>(
  { path, temporary }: OutputFile,
  produce: (append: (name: string, bytes: Uint8Array) => void) => Promise<T>,
): Promise<T> {
  let open: { readonly name: string; readonly file: number } | null = null;
  const close = () => {
    if (open) closeSync(open.file);
    open = null;
  };
  try {
    return await produce((name, bytes) => {
      try {
        if (open?.name !== name) {
          close();
          mkdirSync(temporary, { recursive: true });
          open = { name, file: openSync(join(temporary, name), 'wx') };
        }
        for (let done = 0; done < bytes.length; ) done += writeSync(open.file, bytes, done);
      } catch (error) {
        throw cannotWrite(path, error);
      }
    });
  } finally {
    close();
  }
}

/** @throws InputError `folder-in-use` where the path is a file or a folder with files */
export function refuseUsedFolder(path: string): void {
  if (!existsSync(path)) return;
  const isFolder = statSync(path).isDirectory();
  if (isFolder && readdirSync(path).length === 0) return;
  throw new InputError({
    code: 'folder-in-use',
    where: path,
    found: isFolder ? 'the folder holds files' : 'a file of that name',
    expected: 'a new or an empty folder',
    mend: 'Name another folder.',
  });
}

/** Gives a reserved file or folder its own name; an empty folder of that name gives way. */
export function placeReserved({ path, temporary }: OutputFile): void {
  try {
    renameSync(temporary, resolve(path));
  } catch (error) {
    throw cannotWrite(path, error);
  }
  pending.delete(temporary);
}

/** Writes a file under a temporary name and renames it, so that no one ever sees half a file. */
export function writeWhole(path: string, text: string): void {
  place(resolve(path), (temporary) => writeFileSync(temporary, text));
}

/**
 * Copies a folder, whole or not at all. The target must not exist or be an empty folder.
 * @throws InputError `folder-in-use`, `cannot-write`
 */
export function copyFolder(source: string, path: string): readonly string[] {
  const target = resolve(path);
  refuseUsedFolder(path);
  if (existsSync(target)) rmSync(target, { recursive: true });
  place(target, (temporary) => cpSync(source, temporary, { recursive: true }));
  return readdirSync(target).sort();
}

/** Removes what an interrupted write left. */
export function removePending(): void {
  for (const temporary of pending) discard(temporary);
}
