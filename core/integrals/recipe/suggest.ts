import type { Finding, JobContext } from '../../job';
import type { RawArray } from '../raw';
import { isTrexio, listNpz, readHdf5Dataset, readNpy, readNpz, sniffFormat } from '../readers';
import type { ByteSource, FileSet, ReadPlatform } from '../source';
import { guessConvention, orbitalsOfSquare } from './guess';
import type { Recipe, RecipePart } from './recipe';
import { isSecondCopy, isTemplateName, templateParts } from './template';
import { wholeRole } from './whole';

export interface Suggestion {
  /** A draft; null where not one file is recognised. */
  readonly recipe: Recipe | null;
  /** What was guessed and why it must be checked; what no convention fits. */
  readonly findings: readonly Finding[];
}

/**
 * Drafts a recipe for files that have none: each array gets a role and convention under which it has the
 * symmetries the role promises, chosen by its name where several would do. Units, ½ and σ against s leave no
 * trace in an array, so they stand at their defaults and a note says so.
 */
export async function suggestRecipe(
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<Suggestion> {
  const parts: RecipePart[] = [];
  const arrays: { place: Pick<RecipePart, 'file' | 'dataset'>; name: string; raw: RawArray }[] = [];
  for (const source of files.list()) {
    await context.checkpoint();
    const role = await wholeRole(source, platform);
    if (role !== null) parts.push({ id: uniqueId(role, parts), role, file: source.path });
    else arrays.push(...(await arraysOf(source, platform, context)));
  }
  // Plain arrays first: a container often repeats them, and of equal arrays the first is kept.
  arrays.sort((a, b) => Number(a.place.dataset !== undefined) - Number(b.place.dataset !== undefined));
  const orbitals = arrays.map(({ raw }) => orbitalsOfSquare(raw)).find((n) => n !== null) ?? null;
  const spinFree = parts.find((part) => part.role === 'spin-free')?.file ?? null;
  const isTemplateSet = arrays.some(({ name }) => isTemplateName(name));
  const findings: Finding[] = [];
  for (const [index, { place, name, raw }] of arrays.entries()) {
    const isRepeated = arrays.slice(0, index).some((other) => isSame(other.raw, raw));
    if (isRepeated || (isTemplateSet && isSecondCopy(name) && (spinFree !== null || !isTemplateName(name))))
      continue;
    const known = templateParts(null, (array) => (array === name ? place : null));
    if (known.length > 0) {
      for (const part of known) parts.push({ ...part, id: uniqueId(part.id, parts) });
      continue;
    }
    const guess = await guessConvention(raw, name, orbitals, context);
    findings.push(guess === null ? noConvention(raw) : guessed(raw, guess.role));
    if (guess !== null) parts.push({ id: uniqueId(name, parts), ...place, ...guess });
  }
  if (parts.length === 0) return { recipe: null, findings };
  const used = new Set(parts.map((part) => part.file));
  const ignore = [...new Set(arrays.map(({ place }) => place.file))].filter((file) => !used.has(file));
  const recipe: Recipe = {
    schema: 'spinwright-recipe/1',
    title: files.name.slice(0, 500),
    ...(orbitals === null ? {} : { orbitals }),
    ...(ignore.length > 0 ? { ignore } : {}),
    parts: parts.slice(0, 64),
  };
  return { recipe, findings };
}

const isSame = (a: RawArray, b: RawArray): boolean =>
  a.data.length === b.data.length && a.data.every((value, i) => value === b.data[i]);

async function arraysOf(source: ByteSource, platform: ReadPlatform, context: JobContext) {
  const format = await sniffFormat(source);
  const base = source.path
    .split('/')
    .pop()!
    .replace(/\.\w+$/, '');
  const place = { file: source.path };
  if (format === 'npy') return [{ place, name: base, raw: await readNpy(source, context) }];
  if (format === 'npz') {
    const found = [];
    for (const dataset of await listNpz(source, context)) {
      found.push({
        place: { ...place, dataset },
        name: dataset,
        raw: await readNpz(source, dataset, context),
      });
    }
    return found;
  }
  if (format !== 'hdf5') return [];
  const file = await platform.openHdf5(source);
  const paths = isTrexio(file) ? [] : file.datasets().filter((path) => file.dataset(path)?.kind !== 'other');
  file.close();
  const found = [];
  for (const dataset of paths) {
    const raw = await readHdf5Dataset(source, dataset, platform, context);
    found.push({ place: { ...place, dataset }, name: dataset.split('/').pop()!, raw });
  }
  return found;
}

function uniqueId(name: string, parts: readonly RecipePart[]): string {
  const plain =
    name
      .toLowerCase()
      .replace(/[^a-z0-9]+/g, '-')
      .replace(/^[^a-z]+|-+$/g, '')
      .slice(0, 36) || 'part';
  for (let suffix = 1; ; suffix++) {
    const id = suffix === 1 ? plain : `${plain}-${suffix}`;
    if (parts.every((part) => part.id !== id)) return id;
  }
}

const guessed = (raw: RawArray, role: string): Finding => ({
  severity: 'note',
  code: 'guessed-role',
  where: raw.origin,
  found: `shape ${raw.shape.join('×')}, read as "${role}"`,
  expected: 'your confirmation',
  mend: 'Check role, unit, spin (σ or s) and half: an array does not show them.',
});

const noConvention = (raw: RawArray): Finding => ({
  severity: 'note',
  code: 'unknown-array',
  where: raw.origin,
  found: `shape ${raw.shape.join('×')}`,
  expected: 'the shape and symmetry of some role',
  mend: 'Add a part by hand if the array belongs to the Hamiltonian, else put it under "ignore".',
});
