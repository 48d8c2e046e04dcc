import { type Finding, InputError, type JobContext } from '../../job';
import type { SpinorIntegrals } from '../integral-set';
import type { SpinorContents } from '../raw';
import type { FileSet, ReadPlatform } from '../source';
import { validateSpinors } from '../validate/spinors';
import { fileNote } from './build-part';
import type { ResolvedPart } from './part';
import { provenanceOf, readPart } from './read-part';
import type { Recipe } from './recipe';
import { agreedElectrons, sumConstants } from './system';

/** The spinor case of loadIntegrals: complex FCIDUMPs, which add up where there are several. */
export async function loadSpinors(
  recipe: Recipe,
  name: string,
  parts: readonly ResolvedPart[],
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<SpinorIntegrals> {
  let sum: SpinorContents | null = null;
  const wholes: SpinorContents[] = [];
  const findings: Finding[] = [];
  for (const part of parts) {
    const read = await readPart(part, null, files, platform, context);
    if (read.kind !== 'spinor') throw notSpinors(part);
    checkCount(recipe, name, read, sum);
    wholes.push(read);
    findings.push(...read.notes.map((note) => fileNote(read.origin, note)));
    sum = add(sum, read, part);
  }
  const { spinors, constant, h, g } = sum!;
  const electrons = agreedElectrons(recipe, name, wholes);
  if (electrons > spinors) {
    throw new InputError({
      code: 'electrons',
      where: `${name}: /electrons`,
      found: `${electrons} electrons in ${spinors} spinors`,
      expected: `at most ${spinors}`,
      mend: 'Correct the number of electrons.',
    });
  }
  const constants = sumConstants(recipe, name, constant);
  const set = {
    kind: 'spinor' as const,
    spinors,
    electrons,
    constant: Object.values(constants).reduce((a, b) => a + b, 0),
    h,
    g,
    provenance: provenanceOf(recipe, files, parts),
  };
  return { ...set, findings: [...findings, ...(await validateSpinors(set, parts[0]!.file, context))] };
}

/** Scales `read` in place and adds it to `sum`, in place too. */
function add(sum: SpinorContents | null, read: SpinorContents, part: ResolvedPart): SpinorContents {
  for (const plane of [read.h.re, read.h.im]) scaleInPlace(plane, part.factor);
  for (const plane of [read.g.re, read.g.im]) scaleInPlace(plane, part.twoElectronFactor);
  const constant = part.factor * read.constant;
  if (sum === null) return { ...read, constant };
  addInPlace(sum.h.re, read.h.re);
  addInPlace(sum.h.im, read.h.im);
  addInPlace(sum.g.re, read.g.re);
  addInPlace(sum.g.im, read.g.im);
  return { ...sum, constant: sum.constant + constant };
}

function scaleInPlace(values: Float64Array, factor: number): void {
  if (factor === 1) return;
  for (let i = 0; i < values.length; i++) values[i] = values[i]! * factor;
}

function addInPlace(sum: Float64Array, values: Float64Array): void {
  for (let i = 0; i < sum.length; i++) sum[i] = sum[i]! + values[i]!;
}

function checkCount(recipe: Recipe, name: string, read: SpinorContents, sum: SpinorContents | null): void {
  const expected = recipe.spinors ?? sum?.spinors ?? read.spinors;
  if (read.spinors !== expected || recipe.orbitals !== undefined) {
    throw new InputError({
      code: 'orbitals',
      where: read.origin,
      found: `${read.spinors} spinors`,
      expected:
        recipe.orbitals !== undefined
          ? `spatial orbitals, because ${name} has "orbitals"`
          : `${expected}, as ${recipe.spinors !== undefined ? `${name}: /spinors` : 'the first file'} says`,
      mend: recipe.orbitals !== undefined ? 'Use "spinors" instead.' : 'Correct one of the two.',
    });
  }
}

function notSpinors(part: ResolvedPart): InputError {
  return new InputError({
    code: 'not-spinors',
    where: part.file,
    found: 'real integrals over spatial orbitals',
    expected: `complex spinor integrals, because part "${part.id}" has the role "spinor"`,
    mend: 'Set the role to "spin-free".',
  });
}
