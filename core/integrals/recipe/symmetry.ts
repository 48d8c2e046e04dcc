import type { Finding } from '../../job';
import type { ResolvedPart } from './part';
import type { Component } from './recipe';

/** Largest deviation from a promised symmetry, relative to max |A|, that counts as rounding. */
export const SYMMETRY_TOLERANCE = 1e-8;

/** Largest violation of one symmetry, and the two elements that show it. Indices 0-based. */
export class Deviation {
  max = 0;
  worst = 0;
  #indices: readonly number[] = [];
  #partner: readonly number[] = [];
  #values: readonly [number, number] = [0, 0];
  #component: Component | null = null;

  /** Keeps the pair if it is the worst so far. */
  note(
    worst: number,
    indices: readonly number[],
    partner: readonly number[],
    values: readonly [number, number],
    component: Component | null = null,
  ): void {
    if (worst <= this.worst) return;
    this.worst = worst;
    this.#indices = indices;
    this.#partner = partner;
    this.#values = values;
    this.#component = component;
  }

  get isBroken(): boolean {
    return this.worst > SYMMETRY_TOLERANCE * this.max;
  }

  /** `z (3 1|2 2) = 1.2e-4 but z (1 3|2 2) = 1.2e-4`, 1-based. */
  describe(): string {
    const [a, b] = this.#values;
    const name = this.#component === null ? '' : `${this.#component} `;
    const isSelf = this.#indices.every((index, i) => index === this.#partner[i]);
    // Its own partner, so antisymmetry makes it zero.
    if (isSelf && a === b) return `${name}${element(this.#indices)} = ${a} where 0 is due`;
    return `${name}${element(this.#indices)} = ${a} but ${name}${element(this.#partner)} = ${b}`;
  }
}

/** Orbital indices as people write them: 1-based, the two pairs of a two-electron element set apart. */
export function element(indices: readonly number[]): string {
  const text = indices.map((index) => index + 1);
  return text.length === 4 ? `(${text[0]} ${text[1]}|${text[2]} ${text[3]})` : `(${text.join(', ')})`;
}

/** The finding for a broken symmetry, or nothing. */
export function symmetryFinding(
  part: ResolvedPart,
  origin: string,
  deviation: Deviation,
  expected: string,
  mend: string,
): Finding[] {
  if (!deviation.isBroken) return [];
  return [
    {
      severity: 'error',
      code: 'symmetry',
      where: `${origin} (part "${part.id}")`,
      found: `${deviation.describe()} Eh`,
      expected: `${expected} to ${SYMMETRY_TOLERANCE} of the largest element, ${deviation.max.toExponential(3)} Eh`,
      mend,
    },
  ];
}

/** The finding for a complex array whose other plane, of the other time-reversal sector, is not zero. */
export function sectorFinding(
  part: ResolvedPart,
  origin: string,
  otherMax: number,
  max: number,
  at: readonly number[],
): Finding[] {
  if (otherMax <= SYMMETRY_TOLERANCE * Math.max(max, otherMax)) return [];
  const imaginary = part.facts.values.includes('imaginary');
  return [
    {
      severity: 'error',
      code: 'time-reversal',
      where: `${origin} (part "${part.id}")`,
      found: `${imaginary ? 'a real' : 'an imaginary'} part up to ${otherMax.toExponential(3)} Eh at ${element(at)}`,
      expected: `${imaginary ? 'purely imaginary' : 'purely real'} elements, because a Hamiltonian without magnetic field is even under time reversal`,
      mend: imaginary
        ? 'Wrong role or phase convention (is it A instead of iA? then "value": "imaginary"), or a magnetic field, which is not handled.'
        : 'Complex orbitals, a magnetic field, or a wrong role (spin–orbit arrays are imaginary).',
    },
  ];
}

/** The two orbitals p ≥ q of symmetric pair [pq]. */
export function unpair(pair: number): [number, number] {
  let p = Math.floor((Math.sqrt(8 * pair + 1) - 1) / 2);
  while ((p * (p + 1)) / 2 > pair) p--;
  while (((p + 1) * (p + 2)) / 2 <= pair) p++;
  return [p, pair - (p * (p + 1)) / 2];
}
