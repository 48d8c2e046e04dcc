import { type FileHandle, open, readdir, realpath, stat } from 'node:fs/promises';
import { basename, join, relative, resolve, sep } from 'node:path';
import type { ByteSource, FileSet } from '../../core/integrals';
import { InputError } from '../../core/job';

/** A data set is a handful of files; whoever names a home folder by mistake should not wait for it. */
const MAX_FILES = 5000;
const MAX_DEPTH = 4;

/** A file of the real file system. */
export class NodeSource implements ByteSource {
  constructor(
    readonly path: string,
    /** Absolute, links resolved. */
    readonly realPath: string,
    readonly size: number,
  ) {}

  async read(offset: number, length: number): Promise<Uint8Array> {
    const bytes = new Uint8Array(Math.max(0, Math.min(length, this.size - offset)));
    return bytes.subarray(0, await this.readInto(offset, bytes));
  }

  async readInto(offset: number, target: Uint8Array): Promise<number> {
    // Opened for each read, so that no handle is left behind: sources have no end of life of their own.
    const handle = await explain(this.path, () => open(this.realPath, 'r'));
    try {
      return await explain(this.path, () => readFully(handle, offset, target));
    } finally {
      await handle.close();
    }
  }
}

/**
 * All files in and below a folder, with "/" separated paths relative to it. Hidden files are left out, and so are
 * links that lead out of the folder.
 * @throws InputError where there is no such folder or it cannot be read.
 */
export async function folderFiles(folder: string): Promise<FileSet> {
  const root = await explain(folder, () => realpath(folder));
  const sources: NodeSource[] = [];
  await collect(folder, root, root, 0, sources);
  return fileSet(basename(root), sources);
}

/**
 * The named files, each under its own name.
 * @throws InputError where one is missing, is no file, or two have the same name.
 */
export async function namedFiles(paths: readonly string[]): Promise<FileSet> {
  const sources = new Map<string, NodeSource>();
  for (const path of paths) {
    const name = basename(path);
    const real = await explain(path, () => realpath(path));
    const facts = await explain(path, () => stat(real));
    if (!facts.isFile()) throw noFile(path, 'no regular file');
    const earlier = sources.get(name);
    if (earlier && earlier.realPath !== real) throw noFile(path, `a second file called ${name}`);
    sources.set(name, new NodeSource(name, real, facts.size));
  }
  return fileSet(paths.map((path) => basename(path)).join(', '), [...sources.values()]);
}

function fileSet(name: string, sources: readonly NodeSource[]): FileSet {
  const byPath = new Map(sources.map((source) => [source.path, source]));
  return { name, list: () => sources, open: (path) => byPath.get(path) };
}

async function collect(
  shown: string,
  root: string,
  folder: string,
  depth: number,
  into: NodeSource[],
): Promise<void> {
  const entries = await explain(shown, () => readdir(folder, { withFileTypes: true }));
  for (const entry of entries.sort((a, b) => (a.name < b.name ? -1 : 1))) {
    if (entry.name.startsWith('.')) continue;
    const full = join(folder, entry.name);
    if (entry.isDirectory()) {
      if (depth < MAX_DEPTH) await collect(shown, root, full, depth + 1, into);
      continue;
    }
    // A dangling link is no file of the set; naming it gives the error for a missing file.
    const real = await realpath(full).catch(() => null);
    if (real === null || !resolve(real).startsWith(root + sep)) continue;
    const facts = await stat(real);
    if (!facts.isFile()) continue;
    if (into.length === MAX_FILES) throw noFile(shown, `over ${MAX_FILES} files`);
    into.push(new NodeSource(relative(root, full).split(sep).join('/'), real, facts.size));
  }
}

async function readFully(handle: FileHandle, offset: number, target: Uint8Array): Promise<number> {
  let done = 0;
  while (done < target.length) {
    const { bytesRead } = await handle.read(target, done, target.length - done, offset + done);
    if (bytesRead === 0) break;
    done += bytesRead;
  }
  return done;
}

const REASONS: Readonly<Record<string, string>> = {
  ENOENT: 'no such file or folder',
  ENOTDIR: 'no folder',
  EISDIR: 'a folder',
  EACCES: 'no permission to read it',
  EPERM: 'no permission to read it',
  ELOOP: 'links in a circle',
  EIO: 'a read error of the disk',
};

/** Turns what the system says about a path into an error for people. */
async function explain<T>(path: string, use: () => Promise<T>): Promise<T> {
  try {
    return await use();
  } catch (error) {
    const code = (error as NodeJS.ErrnoException).code;
    if (code === undefined) throw error;
    throw noFile(path, REASONS[code] ?? `the error ${code}`);
  }
}

const noFile = (path: string, found: string): InputError =>
  new InputError({
    code: found === REASONS.ENOENT ? 'missing-file' : 'unreadable-file',
    where: path,
    found,
    expected: 'a folder with a data set, a recipe, or files of integrals',
    mend: 'Correct the path.',
  });
