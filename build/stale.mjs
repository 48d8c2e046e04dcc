// Knows when something must be built again: the sources' names, sizes and times against those of the last build.
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { inRoot } from './process.mjs';

/**
 * Digest over path, size and modification time of every file below the given paths (relative to the root),
 * without those whose name is in `skip`.
 */
export function fingerprint(paths, skip = []) {
  const hash = createHash('sha256');
  const visit = (path) => {
    const stat = statSync(inRoot(path), { throwIfNoEntry: false });
    if (!stat) hash.update(`${path} absent\n`);
    else if (!stat.isDirectory()) hash.update(`${path} ${stat.size} ${stat.mtimeMs}\n`);
    else
      for (const name of readdirSync(inRoot(path)).sort()) if (!skip.includes(name)) visit(join(path, name));
  };
  for (const path of paths) visit(path);
  return hash.digest('hex');
}

/** True where the stamp beside the output is missing or says another fingerprint. */
export const isStale = (stamp, print) => !existsSync(stamp) || readFileSync(stamp, 'utf8') !== print;

export function writeStamp(stamp, print) {
  mkdirSync(dirname(stamp), { recursive: true });
  writeFileSync(stamp, print);
}
