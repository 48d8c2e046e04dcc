import { SELECTABLE_TERMS } from '../../core/hamiltonian';
import type { SelectableTerm } from '../../core/integrals';
import { InputError } from '../../core/job';
import type { FactorCount } from '../../core/plan';
import { ENERGY_UNITS, type EnergyUnit, parseEnergy } from '../../core/units';

/** A wrong value or flag on the command line. */
export function usageError(where: string, found: string, expected: string, mend: string): InputError {
  return new InputError({ code: 'usage', where, found, expected, mend });
}

/** A whole number within bounds, written in digits alone. */
export function parseCount(flag: string, text: string, least: number, most: number): number {
  const value = /^\d{1,15}$/.test(text) ? Number(text) : Number.NaN;
  if (value >= least && value <= most) return value;
  const bounds = most === Number.MAX_SAFE_INTEGER ? `at least ${least}` : `from ${least} to ${most}`;
  throw usageError(flag, `"${text}"`, `a whole number ${bounds}`, `Write e.g. ${flag} ${least}.`);
}

/** A finite number; `holds` says which are allowed and `expected` says it in words. */
export function parseNumber(
  flag: string,
  text: string,
  expected: string,
  example: string,
  holds: (value: number) => boolean,
): number {
  const value = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/.test(text) ? Number(text) : Number.NaN;
  if (Number.isFinite(value) && holds(value)) return value;
  throw usageError(flag, `"${text}"`, expected, `Write e.g. ${flag} ${example}.`);
}

/** `all` or a comma list of terms, returned in canonical order. */
export function parseTerms(text: string): readonly SelectableTerm[] | 'all' {
  if (text === 'all') return 'all';
  const words = text.split(',').map((word) => word.trim());
  for (const word of words) {
    if ((SELECTABLE_TERMS as readonly string[]).includes(word)) continue;
    const known = SELECTABLE_TERMS.join(', ');
    throw usageError('--terms', `"${word}"`, `all or a list of ${known}`, 'Write e.g. --terms sf,so1,so2.');
  }
  return SELECTABLE_TERMS.filter((term) => words.includes(term));
}

/** An energy with its unit, more than zero. */
export function parseTarget(text: string): { value: number; unit: EnergyUnit } {
  const energy = parseEnergy(text);
  if (energy && energy.value > 0) return energy;
  throw usageError(
    '--target',
    `"${text}"`,
    `an energy above zero with one of the units ${ENERGY_UNITS.join(', ')}`,
    'Write e.g. --target 5cm-1.',
  );
}

/** Hartree ≥ 0, or `auto`. */
export function parseThreshold(text: string): number | 'auto' {
  if (text === 'auto') return text;
  return parseNumber('--threshold', text, 'a number of hartree from 0 up, or auto', '1e-4', (x) => x >= 0);
}

/** Bits of keep values and angles, or `auto`. */
export function parseBits(text: string): number | 'auto' {
  return text === 'auto' ? text : parseCount('--bits', text, 4, 60);
}

/** A number of factors, one for each orbital as in `6N`, or `auto`. */
export function parseFactors(text: string): FactorCount {
  if (text === 'auto') return text;
  const match = /^([1-9]\d{0,5})(N?)$/.exec(text);
  if (match) return { count: Number(match[1]), perOrbital: match[2] === 'N' };
  throw usageError(
    '--factors',
    `"${text}"`,
    'auto, a number from 1 up, or a number an orbital such as 6N',
    'Write e.g. --factors 6N.',
  );
}

/** Squared overlaps, one or two, each in (0, 1]. */
export function parseOverlaps(text: string): number[] {
  const words = text.split(',');
  if (words.length > 2) {
    throw usageError(
      '--overlap',
      `"${text}"`,
      'one number, or two for a splitting',
      'Write e.g. --overlap 0.8.',
    );
  }
  return words.map((word) =>
    parseNumber(
      '--overlap',
      word.trim(),
      'a squared overlap above 0 and up to 1',
      '0.8',
      (p) => p > 0 && p <= 1,
    ),
  );
}

/** Occupation numbers 0…2 of the orbitals in file order. */
export function parseOccupations(text: string): number[] {
  return text
    .split(',')
    .map((word) =>
      parseNumber(
        '--occupations',
        word.trim(),
        'occupations from 0 to 2, one an orbital',
        '2,2,1,1,0',
        (x) => x >= 0 && x <= 2,
      ),
    );
}

/** Orbitals counted from 1, as a list of numbers and ranges; returned ascending, each once. */
export function parseOrbitals(text: string): number[] {
  const found = new Set<number>();
  for (const word of text.split(',')) {
    const match = /^\s*([1-9]\d{0,2})(?:-([1-9]\d{0,2}))?\s*$/.exec(word);
    const first = Number(match?.[1]);
    const last = Number(match?.[2] ?? match?.[1]);
    if (!match || last < first) {
      throw usageError(
        '--window',
        `"${word}"`,
        'orbitals counted from 1, single or as ranges',
        'Write e.g. --window 3-6,9.',
      );
    }
    for (let orbital = first; orbital <= last; orbital++) found.add(orbital);
  }
  return [...found].sort((a, b) => a - b);
}
