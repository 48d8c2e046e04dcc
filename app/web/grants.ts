import { randomBytes } from 'node:crypto';
import { readdir, realpath, stat } from 'node:fs/promises';
import { basename, dirname, join, relative, sep } from 'node:path';

/** A group of files as the page sees it: paths inside the data set and addresses, never where they lie. */
export interface Listing {
  readonly name: string;
  /** True where each file was named, false where a folder stands for the data set in it. */
  readonly chosenOneByOne: boolean;
  readonly files: readonly { readonly path: string; readonly href: string }[];
  /** The page should show the demo by itself. */
  readonly demo?: boolean;
}

export const NOTHING: Listing = { name: '', chosenOneByOne: false, files: [] };

/** More files than any data set has: a home folder was named by mistake. */
const MOST_FILES = 2000;

/** A named file or folder that cannot be given to the page. Its message is one line. */
export class GrantError extends Error {
  override readonly name = 'GrantError';
}

/** The only way from the page to the disk: an opaque id stands for one file that the user named. */
export class Grants {
  readonly #paths = new Map<string, string>();

  /** Path of a granted file, or undefined. */
  pathOf(id: string): string | undefined {
    return this.#paths.get(id);
  }

  /**
   * Grants files and folders. A recipe stands for the folder it lies in.
   *
   * @throws GrantError for what does not exist, is no file or folder, or holds too many files.
   */
  async grant(named: readonly string[]): Promise<Listing> {
    const found = await Promise.all(named.map(async (path) => ({ path, folder: await isFolder(path) })));
    const [first] = found;
    if (!first) return NOTHING;
    if (found.length === 1 && first.folder) return this.#folder(first.path, () => true);
    if (found.length === 1 && /\.recipe\.json$/i.test(first.path)) {
      const other = (path: string) => /\.recipe\.json$/i.test(path) && path !== basename(first.path);
      return this.#folder(dirname(first.path), (path) => !other(path));
    }
    const folder = found.find((f) => f.folder);
    if (folder)
      throw new GrantError(
        `${folder.path}: a folder beside other files; expected one folder or files. Give one of them.`,
      );
    const name = found.length === 1 ? basename(first.path) : basename(dirname(first.path));
    return { name, chosenOneByOne: true, files: found.map(({ path }) => this.#one(path, basename(path))) };
  }

  async #folder(folder: string, keep: (path: string) => boolean): Promise<Listing> {
    const paths = (await filesBelow(folder)).map((path) => relative(folder, path).split(sep).join('/'));
    const files = paths.filter(keep).map((path) => this.#one(join(folder, path), path));
    return { name: basename(await realpath(folder)), chosenOneByOne: false, files };
  }

  #one(path: string, shown: string): Listing['files'][number] {
    const id = randomBytes(16).toString('hex');
    this.#paths.set(id, path);
    return { path: shown, href: `given/${id}` };
  }
}

async function isFolder(path: string): Promise<boolean> {
  try {
    const found = await stat(path);
    if (found.isDirectory()) return true;
    if (found.isFile()) return false;
  } catch {
    throw new GrantError(`${path}: no such file or folder; expected integral files. Correct the path.`);
  }
  throw new GrantError(`${path}: neither a file nor a folder; expected integral files. Give a file.`);
}

/** Regular files below a folder. Links are left out: they may lead out of it. */
async function filesBelow(folder: string): Promise<string[]> {
  const entries = await readdir(folder, { withFileTypes: true, recursive: true });
  const files = entries
    .filter((e) => e.isFile() && !e.name.startsWith('.'))
    .map((e) => join(e.parentPath, e.name));
  if (files.length > MOST_FILES)
    throw new GrantError(
      `${folder}: ${files.length} files; expected the folder of one data set. Give that folder.`,
    );
  return files.sort();
}
