import type { JobContext } from '../../job';
import type { RawArray } from '../raw';
import { buildArray } from './build-part';
import { resolvePart } from './part';
import type { Component, RecipePart, Role } from './recipe';
import { orbitalsOfShape } from './stored';

type Guess = Omit<RecipePart, 'id' | 'file' | 'dataset'>;

const XYZ: readonly Component[] = ['x', 'y', 'z'];
const SIX: readonly Component[] = ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'];
const NINE: readonly Component[] = ['xx', 'xy', 'xz', 'yx', 'yy', 'yz', 'zx', 'zy', 'zz'];

/** What names usually mean; the first match wins. Only a first guess that the user is asked to check. */
const NAMES: readonly [RegExp, Role][] = [
  [/mass|(^|_)mv($|_)/, 'mass-velocity'],
  [/contact|delta/, 'two-electron Darwin'],
  [/darwin|(^|_)d1($|_)/, 'one-electron Darwin'],
  [/mean|amfi|somf|core/, 'mean-field spin-orbit'],
  [/soo|other/, 'two-electron spin-other-orbit'],
  [/sso|same/, 'two-electron spin-same-orbit'],
];

/**
 * The role and convention under which an array keeps all the symmetries its role promises, or null where there is
 * none. Among several the one that the array's name suggests, then the most usual.
 */
export async function guessConvention(
  raw: RawArray,
  name: string,
  orbitals: number | null,
  context: JobContext,
): Promise<Guess | null> {
  const hinted = NAMES.find(([pattern]) => pattern.test(name.toLowerCase()))?.[1];
  const candidates = candidatesFor(raw, name);
  candidates.sort((a, b) => Number(b.role === hinted) - Number(a.role === hinted));
  for (const guess of candidates) if (await holds(raw, guess, orbitals, context)) return guess;
  return null;
}

/** Number of orbitals an array has under some convention; only square shapes are taken, which cannot be misread. */
export function orbitalsOfSquare(raw: RawArray): number | null {
  const [last, before] = [raw.shape.at(-1), raw.shape.at(-2)];
  const full = raw.shape.length === 2 || raw.shape.length === 3;
  return full && last !== undefined && last === before ? last : null;
}

function candidatesFor(raw: RawArray, name: string): Guess[] {
  const value = raw.complex ? ({ value: 'complex' } as const) : {};
  const contact = /contact|delta/i.test(name) ? ({ value: 'contact' } as const) : value;
  const direction = /[xyz]$/i.exec(name)?.[0].toLowerCase() as Component | undefined;
  const axes = [{}, { componentAxis: 'last' }] as const;
  const guesses: Guess[] = [];
  for (const role of ['one-electron', 'mass-velocity', 'one-electron Darwin'] as const) {
    guesses.push({ role, ...value }, { role, layout: 'lower-triangle', ...value });
  }
  for (const role of ['two-electron', 'two-electron Darwin'] as const) {
    const convention = role === 'two-electron' ? value : contact;
    for (const layout of ['full', 'pairs', 'pairs-triangle'] as const) {
      guesses.push({ role, ...convention, ...(layout === 'full' ? {} : { layout }) });
    }
    guesses.push({ role, order: 'physicists', ...convention });
  }
  for (const axis of axes) {
    for (const components of direction === undefined ? [XYZ] : [[direction], XYZ]) {
      const common = { components, ...(components.length > 1 ? axis : {}), ...value };
      guesses.push({ role: 'one-electron spin-orbit', ...common });
      guesses.push({ role: 'mean-field spin-orbit', covers: 'core', ...common });
      guesses.push(...spinOrbitGuesses(common));
    }
    for (const components of [SIX, NINE]) {
      for (const layout of ['full', 'pairs', 'pairs-triangle'] as const) {
        guesses.push({
          role: 'spin-spin',
          components,
          ...axis,
          ...value,
          ...(layout === 'full' ? {} : { layout }),
        });
      }
    }
  }
  return guesses;
}

function spinOrbitGuesses(common: Pick<RecipePart, 'components' | 'componentAxis' | 'value'>): Guess[] {
  const guesses: Guess[] = [];
  const packed = { layout: 'antisymmetric-by-symmetric-pairs' } as const;
  for (const role of [
    'two-electron spin-orbit',
    'two-electron spin-same-orbit',
    'two-electron spin-other-orbit',
  ] as const) {
    for (const momentum of [{}, { momentum: 'second' }] as const) {
      guesses.push({ role, ...momentum, ...common }, { role, ...momentum, ...packed, ...common });
      guesses.push({ role, order: 'physicists', ...momentum, ...common });
    }
  }
  guesses.push({ role: 'two-electron spin-orbit summed', ...common });
  guesses.push({ role: 'two-electron spin-orbit summed', order: 'physicists', ...common });
  return guesses;
}

/** Whether shape, number type and symmetries fit. Works on a copy, since packed arrays are converted in place. */
async function holds(
  raw: RawArray,
  guess: Guess,
  orbitals: number | null,
  context: JobContext,
): Promise<boolean> {
  const recipe = { schema: 'spinwright-recipe/1' as const, parts: [{ id: 'a', file: 'a', ...guess }] };
  const part = resolvePart(recipe, 0, '');
  if (raw.complex !== (part.value === 'complex')) return false;
  const n = orbitalsOfShape(raw, part, orbitals ?? undefined);
  if (n === null || (orbitals !== null && n !== orbitals)) return false;
  const { findings } = await buildArray(part, { ...raw, data: Float64Array.from(raw.data) }, n, context);
  return findings.every((finding) => finding.severity !== 'error');
}
