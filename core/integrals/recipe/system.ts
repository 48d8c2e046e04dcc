import { InputError } from '../../job';
import { toHartree } from '../../units';
import type { SpinFreeContents } from '../raw';
import type { Term } from '../terms';
import type { Recipe } from './recipe';

/** Largest difference, in hartree, between a constant in the recipe and the same one inside a file. */
const CONSTANT_TOLERANCE = 1e-8;

export interface SystemFacts {
  readonly electrons: number;
  readonly ms2: number;
  readonly occupations: Float64Array;
  readonly constants: Partial<Record<Term, number>>;
}

/**
 * Electrons, spin, occupations and constants from recipe and files together.
 *
 * @param fileConstant - sum of the constants inside spin-free files, hartree; null where there is no such file.
 * @throws InputError `electrons`, `occupations`, `constant` where recipe and file contradict each other.
 */
export function systemFacts(
  recipe: Recipe,
  file: string,
  orbitals: number,
  wholes: readonly SpinFreeContents[],
  fileConstant: number | null,
): SystemFacts {
  const electrons = agreedElectrons(recipe, file, wholes);
  if (electrons > 2 * orbitals) {
    throw new InputError({
      code: 'electrons',
      where: `${file}: /electrons`,
      found: `${electrons} electrons in ${orbitals} orbitals`,
      expected: `at most ${2 * orbitals}`,
      mend: 'Correct the number of electrons; frozen electrons do not count.',
    });
  }
  const ms2 = recipe.ms2 ?? wholes[0]?.ms2 ?? electrons % 2;
  checkSpin(ms2, electrons, orbitals, file);
  return {
    electrons,
    ms2,
    occupations: occupations(recipe, file, orbitals, electrons, ms2),
    constants: sumConstants(recipe, file, fileConstant),
  };
}

/** The number of electrons in recipe and files, which must agree. */
export function agreedElectrons(
  recipe: Recipe,
  file: string,
  wholes: readonly { readonly origin: string; readonly electrons: number | null }[],
): number {
  let electrons = recipe.electrons ?? null;
  let source = `${file}: /electrons`;
  for (const contents of wholes) {
    if (contents.electrons === null) continue;
    if (electrons !== null && contents.electrons !== electrons) {
      throw new InputError({
        code: 'electrons',
        where: contents.origin,
        found: `${contents.electrons} electrons`,
        expected: `${electrons}, as ${source} says`,
        mend: 'Correct one of the two.',
      });
    }
    if (electrons === null) source = contents.origin;
    electrons = contents.electrons;
  }
  if (electrons === null) {
    throw new InputError({
      code: 'electrons',
      where: `${file}: /electrons`,
      found: 'no number of electrons in recipe or files',
      expected: 'one',
      mend: 'Add "electrons" to the recipe or give --electrons.',
    });
  }
  return electrons;
}

function checkSpin(ms2: number, electrons: number, orbitals: number, file: string): void {
  const unpaired = Math.abs(ms2);
  const isPossible =
    (electrons - unpaired) % 2 === 0 && unpaired <= Math.min(electrons, 2 * orbitals - electrons);
  if (isPossible) return;
  throw new InputError({
    code: 'spin-count',
    where: `${file}: /ms2`,
    found: `MS2 = ${ms2} for ${electrons} electrons in ${orbitals} orbitals`,
    expected:
      'the number of unpaired electrons: even or odd as the electrons, no larger than the orbitals allow',
    mend: 'Correct "ms2" (twice the spin projection) or "electrons".',
  });
}

function occupations(
  recipe: Recipe,
  file: string,
  orbitals: number,
  electrons: number,
  ms2: number,
): Float64Array {
  const given = recipe.occupations;
  if (given === undefined) {
    const unpaired = Math.abs(ms2);
    const doubly = (electrons - unpaired) / 2;
    return Float64Array.from({ length: orbitals }, (_, p) =>
      p < doubly ? 2 : p < doubly + unpaired ? 1 : 0,
    );
  }
  const sum = given.reduce((total, value) => total + value, 0);
  if (given.length === orbitals && Math.abs(sum - electrons) <= 1e-8) return Float64Array.from(given);
  throw new InputError({
    code: 'occupations',
    where: `${file}: /occupations`,
    found: `${given.length} numbers with a sum of ${sum}`,
    expected: `${orbitals} numbers with a sum of ${electrons}`,
    mend: 'Correct the list, or leave it out.',
  });
}

/** E_0 by term; a constant inside the files is the sf entry, not an addition to it. */
export function sumConstants(
  recipe: Recipe,
  file: string,
  fileConstant: number | null,
): Partial<Record<Term, number>> {
  const constants: Partial<Record<Term, number>> = {};
  for (const { term, value, unit } of recipe.constants ?? []) {
    constants[term] = (constants[term] ?? 0) + toHartree(value, unit ?? 'hartree');
  }
  if (fileConstant === null) return constants;
  const stated = constants.sf;
  if (stated !== undefined && Math.abs(stated - fileConstant) > CONSTANT_TOLERANCE) {
    throw new InputError({
      code: 'constant',
      where: `${file}: /constants`,
      found: `${stated} Eh for term sf`,
      expected: `${fileConstant} Eh, the constant inside the spin-free file`,
      mend: 'Remove the sf entry, or correct it: the two are the same number, not a sum.',
    });
  }
  constants.sf = fileConstant;
  return constants;
}
