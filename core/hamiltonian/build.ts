import type { IntegralSet, SpatialIntegrals, SpinOrbitPart } from '../integrals/integral-set';
import { pairsTriangleLength } from '../integrals/integral-set';
import { type SelectableTerm, TERMS, type Term } from '../integrals/terms';
import { InputError } from '../job';
import { fromStoredForm, spinorFromStoredForm } from './forms';
import type { SpatialHamiltonian, SpinHamiltonian, TwoElectronTensor } from './hamiltonian';
import { spinOrbitMeanField } from './mean-field';
import { zeroOperator } from './operators';

/** Every term a user can choose, in canonical order. */
export const SELECTABLE_TERMS: readonly SelectableTerm[] = TERMS.flatMap((term) =>
  term === 'so2' ? ([term, 'so2mf'] as const) : [term],
);

export interface BuildOptions {
  /** Terms to keep, in any order; `'all'` = every term that the set holds. @defaultValue 'all' */
  readonly terms?: readonly SelectableTerm[] | 'all';
  /** N numbers 0…2 summing to the electrons: the reference of `so2mf`. @defaultValue those of the set */
  readonly occupations?: ArrayLike<number>;
  /** 0…2N. @defaultValue that of the set */
  readonly electrons?: number;
}

/** Terms that the set holds, in canonical order. A term with a constant alone counts as held. */
export function heldTerms(set: IntegralSet): readonly Term[] {
  if (set.kind === 'spinor') return ['sf'];
  const held = new Set<Term>(Object.keys(set.constants) as Term[]);
  for (const part of [...set.oneElectron, ...set.twoElectron]) held.add(part.term);
  return TERMS.filter((term) => held.has(term));
}

/**
 * The Hamiltonian of the chosen terms, in the stored and in the product form. Hartree.
 *
 * Large arrays are shared with the set where one part alone fills them, and never modified. N = 50 with full
 * two-electron spin–orbit takes O(N³) work on the packed arrays.
 *
 * @throws InputError `term-not-held`, `double-counting`, `electrons-out-of-range`, `bad-occupations`.
 */
export function buildHamiltonian(set: IntegralSet, options: BuildOptions = {}): SpinHamiltonian {
  const terms = chosenTerms(set, options.terms ?? 'all');
  const modes = set.kind === 'spinor' ? set.spinors : 2 * set.orbitals;
  const electrons = checkElectrons(set, options.electrons ?? set.electrons, modes);
  if (set.kind === 'spinor') {
    const { spinors, constant, h, g } = set;
    return spinorFromStoredForm({ spinors, electrons, constant, h, g });
  }
  return buildSpatial(set, terms, electrons, options.occupations);
}

function buildSpatial(
  set: SpatialIntegrals,
  terms: readonly SelectableTerm[],
  electrons: number,
  askedOccupations: ArrayLike<number> | undefined,
): SpatialHamiltonian {
  const n = set.orbitals;
  const chosen = new Set<SelectableTerm>(terms);
  const h = zeroOperator('even', n);
  for (const part of set.oneElectron) {
    if (!chosen.has(part.term)) continue;
    if (part.charge) addInto(h.planes, part.charge, 0);
    if (part.spin) addInto(h.planes, part.spin, n * n);
  }
  const g = sumTwoElectron(set, chosen);
  if (chosen.has('so2mf')) {
    const full = sumTwoElectron(set, new Set(['so2'])).spinOrbit;
    const occupations = checkOccupations(set, askedOccupations ?? set.occupations, electrons);
    if (full) addInto(h.planes, spinOrbitMeanField(n, full, occupations), n * n);
  } else if (askedOccupations) {
    checkOccupations(set, askedOccupations, electrons);
  }
  let constant = 0;
  for (const term of TERMS) if (chosen.has(term)) constant += set.constants[term] ?? 0;
  return fromStoredForm({ orbitals: n, electrons, terms, constant, h, g });
}

function addInto(target: Float64Array, source: Float64Array, offset: number): void {
  for (let i = 0; i < source.length; i++) target[offset + i]! += source[i]!;
}

/** Sum of arrays; the array itself, unshared by no one's writing, where there is only one. */
function sumArrays(arrays: readonly Float64Array[]): Float64Array | null {
  if (arrays.length <= 1) return arrays[0] ?? null;
  const sum = arrays[0]!.slice();
  for (const array of arrays.slice(1)) addInto(sum, array, 0);
  return sum;
}

function sumTwoElectron(set: SpatialIntegrals, chosen: ReadonlySet<SelectableTerm>): TwoElectronTensor {
  const parts = set.twoElectron.filter((part) => chosen.has(part.term));
  const charge = sumArrays(parts.filter((part) => part.kind === 'charge-charge').map((part) => part.values));
  const spinSpin = sumArrays(parts.filter((part) => part.kind === 'spin-spin').map((part) => part.values));
  const length = pairsTriangleLength(set.orbitals);
  if ((charge && charge.length !== length) || (spinSpin && spinSpin.length !== 6 * length)) {
    throw new RangeError(`two-electron array does not fit ${set.orbitals} orbitals`);
  }
  return { charge, spinOrbit: sumSpinOrbit(parts.filter((part) => part.kind === 'spin-orbit')), spinSpin };
}

function sumSpinOrbit(parts: readonly SpinOrbitPart[]): TwoElectronTensor['spinOrbit'] {
  const filled = parts.filter((part) => part.same !== null || part.other instanceof Float64Array);
  if (filled.length === 0) return null;
  const scales = filled.map((part) => scaleOf(part));
  if (scales.every((scale) => scale !== null && scale === scales[0])) {
    const same = sumArrays(filled.map((part) => part.same!))!;
    return { same, other: { timesSame: scales[0]! } };
  }
  const size = (filled[0]!.same ?? (filled[0]!.other as Float64Array)).length;
  const same = new Float64Array(size);
  const other = new Float64Array(size);
  for (const part of filled) {
    if (part.same) addInto(same, part.same, 0);
    if (part.other instanceof Float64Array) addInto(other, part.other, 0);
    else if (part.other && part.same) {
      for (let i = 0; i < size; i++) other[i]! += part.other.timesSame * part.same[i]!;
    }
  }
  return { same, other };
}

/** c where the part's other-orbit array is c times its same-orbit one (0 where it has none), else null. */
function scaleOf(part: SpinOrbitPart): number | null {
  if (part.same === null || part.other instanceof Float64Array) return null;
  return part.other?.timesSame ?? 0;
}

function nameOf(set: IntegralSet): string {
  return set.provenance.title;
}

function chosenTerms(set: IntegralSet, asked: readonly SelectableTerm[] | 'all'): readonly SelectableTerm[] {
  const held = heldTerms(set);
  const terms = new Set<SelectableTerm>(asked === 'all' ? held : asked);
  for (const term of terms) {
    const needed: Term = term === 'so2mf' ? 'so2' : term;
    if (!held.includes(needed)) {
      throw new InputError({
        code: 'term-not-held',
        where: nameOf(set),
        found: `term "${term}" was asked for`,
        expected: `terms that the set holds: ${[...held, ...(held.includes('so2') ? ['so2mf'] : [])].join(', ')}`,
        mend:
          term === needed
            ? `Leave "${term}" out or add its arrays.`
            : 'Add the two-electron spin–orbit arrays it is computed from.',
      });
    }
  }
  const refuse = (found: string, mend: string): never => {
    throw new InputError({
      code: 'double-counting',
      where: nameOf(set),
      found,
      expected: 'each interaction once',
      mend,
    });
  };
  if (terms.has('so2') && terms.has('so2mf')) {
    refuse('terms "so2" and its own mean field "so2mf" together', 'Choose one of the two.');
  }
  if (set.kind === 'spatial' && set.meanFieldCoversActive && terms.has('somf')) {
    for (const term of ['so2', 'so2mf'] as const) {
      if (terms.has(term)) {
        refuse(
          `term "somf" already contains the active electrons and stands beside "${term}"`,
          `Leave out "somf" or "${term}"; if the mean field is that of the core alone, set covers: "core" in the recipe.`,
        );
      }
    }
  }
  return SELECTABLE_TERMS.filter((term) => terms.has(term));
}

function checkElectrons(set: IntegralSet, electrons: number, modes: number): number {
  if (Number.isInteger(electrons) && electrons >= 0 && electrons <= modes) return electrons;
  throw new InputError({
    code: 'electrons-out-of-range',
    where: nameOf(set),
    found: `${electrons} electrons`,
    expected: `an integer 0…${modes}, because there are ${modes} spin orbitals`,
    mend: 'Give the number of active electrons, without those of the frozen core.',
  });
}

function checkOccupations(
  set: SpatialIntegrals,
  occupations: ArrayLike<number>,
  electrons: number,
): ArrayLike<number> {
  const list = Array.from(occupations);
  const sum = list.reduce((a, b) => a + b, 0);
  const fits = list.length === set.orbitals && list.every((x) => x >= 0 && x <= 2);
  if (fits && Math.abs(sum - electrons) < 1e-9) return occupations;
  throw new InputError({
    code: 'bad-occupations',
    where: nameOf(set),
    found: fits
      ? `occupations that sum to ${sum}`
      : `${list.length} occupations from ${Math.min(...list)} to ${Math.max(...list)}`,
    expected: `${set.orbitals} numbers 0…2 that sum to ${electrons} electrons`,
    mend: 'Give --occupations for the reference determinant of these electrons.',
  });
}
