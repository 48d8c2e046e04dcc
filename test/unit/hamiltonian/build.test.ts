import { describe, expect, it } from 'vitest';
import {
  buildHamiltonian,
  heldTerms,
  type SpatialHamiltonian,
  spinOrbitMeanField,
} from '../../../core/hamiltonian';
import type { SpatialIntegrals, SpinOrbitPart, SpinorIntegrals, Term } from '../../../core/integrals';
import { InputError } from '../../../core/job';
import { largestDifference, randomArray, uniform } from './random-hamiltonian';

const random = uniform(31);
const part = (id: string, term: Term) => ({ id, role: 'test', term, origin: `${id}.npy` });
const same = randomArray(18, random);
const other = randomArray(18, random);
const twoElectron = [
  { ...part('coulomb', 'sf'), kind: 'charge-charge' as const, values: randomArray(6, random) },
  { ...part('d2', 'scalar'), kind: 'charge-charge' as const, values: randomArray(6, random) },
  { ...part('ss', 'ss'), kind: 'spin-spin' as const, values: randomArray(36, random) },
  { ...part('ssc', 'ssc'), kind: 'spin-spin' as const, values: randomArray(36, random) },
];

/** Two orbitals, three electrons; `spinOrbit` replaces the two-electron spin–orbit parts. */
function makeSet(
  spinOrbit: readonly SpinOrbitPart[],
  changes: Partial<SpatialIntegrals> = {},
): SpatialIntegrals {
  const spin = (value: number) => {
    const planes = new Float64Array(12);
    for (const k of [0, 1, 2]) planes.set([0, -value, value, 0], 4 * k);
    return planes;
  };
  return {
    kind: 'spatial',
    orbitals: 2,
    electrons: 3,
    ms2: 1,
    occupations: Float64Array.of(2, 1),
    constants: { sf: 10, scalar: 0.5, ssc: 0.25 },
    oneElectron: [
      { ...part('core', 'sf'), charge: Float64Array.of(-3, 0.5, 0.5, -2), spin: null },
      { ...part('mv', 'scalar'), charge: Float64Array.of(-0.1, 0, 0, -0.2), spin: null },
      { ...part('so', 'so1'), charge: null, spin: spin(1e-3) },
      { ...part('somf', 'somf'), charge: null, spin: spin(-4e-4) },
    ],
    twoElectron: [...twoElectron, ...spinOrbit],
    meanFieldCoversActive: false,
    findings: [],
    provenance: { title: 'two orbitals', files: [] },
    ...changes,
  };
}

const so2 = (id: string, s: Float64Array | null, o: SpinOrbitPart['other']): SpinOrbitPart => ({
  ...part(id, 'so2'),
  kind: 'spin-orbit',
  same: s,
  other: o,
});
const breitPauli = [so2('w', same, { timesSame: 2 })];

const build = (set: SpatialIntegrals, options?: Parameters<typeof buildHamiltonian>[1]) =>
  buildHamiltonian(set, options) as SpatialHamiltonian;

function problemOf(run: () => unknown): InputError {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return error;
    throw error;
  }
  throw new Error('no InputError');
}

describe('term selection', () => {
  it('takes arrays and constants of the chosen terms only', () => {
    const set = makeSet(breitPauli);
    const sf = build(set, { terms: ['sf'] });
    expect(sf.constant).toBe(10);
    expect([...sf.h.planes.slice(0, 4)]).toEqual([-3, 0.5, 0.5, -2]);
    expect(Math.max(...sf.h.planes.slice(4))).toBe(0);
    expect(sf.g).toMatchObject({ spinOrbit: null, spinSpin: null });
    // One part alone is not copied: large arrays exist once.
    expect(sf.g.charge).toBe(twoElectron[0]!.values);

    const scalar = build(set, { terms: ['scalar', 'sf', 'so1', 'somf'] });
    expect(scalar.terms).toEqual(['sf', 'so1', 'somf', 'scalar']);
    expect(scalar.constant).toBe(10.5);
    expect(scalar.h.planes[0]).toBeCloseTo(-3.1, 15);
    expect(scalar.h.planes[6]).toBeCloseTo(6e-4, 15);
    expect(scalar.g.charge![3]).toBe(twoElectron[0]!.values[3]! + twoElectron[1]!.values[3]!);
    expect(twoElectron[0]!.values).not.toBe(scalar.g.charge);
  });

  it('takes all held terms by default, spin–spin and contact summed', () => {
    const all = build(makeSet(breitPauli));
    expect(all.terms).toEqual(['sf', 'so1', 'somf', 'so2', 'ss', 'scalar', 'ssc']);
    expect(all.constant).toBe(10.75);
    expect(all.g.spinSpin![7]).toBe(twoElectron[2]!.values[7]! + twoElectron[3]!.values[7]!);
    expect(all.g.spinOrbit).toEqual({ same, other: { timesSame: 2 } });
  });

  it('adds spin–orbit parts, as one multiple where they agree and as two arrays where not', () => {
    const twice = build(makeSet([so2('a', same, { timesSame: 2 }), so2('b', other, { timesSame: 2 })]));
    expect(twice.g.spinOrbit!.other).toEqual({ timesSame: 2 });
    expect(twice.g.spinOrbit!.same[4]).toBe(same[4]! + other[4]!);

    const apart = build(
      makeSet([so2('a', same, null), so2('b', null, other), so2('c', same, { timesSame: 3 })]),
    );
    expect(apart.g.spinOrbit!.same[5]).toBe(2 * same[5]!);
    expect((apart.g.spinOrbit!.other as Float64Array)[5]).toBeCloseTo(other[5]! + 3 * same[5]!, 15);

    const sameOnly = build(makeSet([so2('a', same, null)]));
    expect(sameOnly.g.spinOrbit!.other).toEqual({ timesSame: 0 });
  });

  it('names the held terms where one is asked for that is not there', () => {
    const set = makeSet([]);
    expect(heldTerms(set)).toEqual(['sf', 'so1', 'somf', 'ss', 'scalar', 'ssc']);
    const problem = problemOf(() => build(set, { terms: ['sf', 'so2'] }));
    expect(problem.code).toBe('term-not-held');
    expect(problem.message).toMatch(/"so2" was asked for; expected .* sf, so1, somf, ss, scalar, ssc/);
    expect(problemOf(() => build(set, { terms: ['so2mf'] })).code).toBe('term-not-held');
  });
});

describe('mean field', () => {
  it('so2mf stands for so2: its one-body operator, no two-body part', () => {
    const set = makeSet(breitPauli);
    const field = build(set, { terms: ['so2mf'] });
    const expected = spinOrbitMeanField(2, { same, other: { timesSame: 2 } }, [2, 1]);
    expect(field.g.spinOrbit).toBeNull();
    expect(largestDifference(field.h.planes.slice(4), expected)).toBe(0);
    const other = build(set, { terms: ['so2mf'], occupations: [1.5, 1.5] });
    expect(largestDifference(field.h.planes, other.h.planes)).toBeGreaterThan(1e-3);
  });

  it.each([
    ['so2 beside its own mean field', {}, ['so2', 'so2mf'] as const],
    [
      'so2 beside a file mean field of all electrons',
      { meanFieldCoversActive: true },
      ['somf', 'so2'] as const,
    ],
    ['both mean fields', { meanFieldCoversActive: true }, ['somf', 'so2mf'] as const],
  ])('counts nothing twice: %s', (_, changes, terms) => {
    const problem = problemOf(() => build(makeSet(breitPauli, changes), { terms }));
    expect(problem.code).toBe('double-counting');
    expect(problem.message).toContain('each interaction once');
  });

  it('of the core alone may stand beside so2', () => {
    expect(build(makeSet(breitPauli), { terms: ['somf', 'so2'] }).g.spinOrbit).not.toBeNull();
  });
});

describe('electrons', () => {
  it('can be chosen, within the orbitals', () => {
    expect(build(makeSet([]), { electrons: 4 }).electrons).toBe(4);
    for (const electrons of [5, -1, 1.5]) {
      expect(problemOf(() => build(makeSet([]), { electrons })).code).toBe('electrons-out-of-range');
    }
  });

  it('must agree with the occupations of a mean field', () => {
    const set = makeSet(breitPauli);
    expect(problemOf(() => build(set, { terms: ['so2mf'], electrons: 2 })).message).toMatch(
      /occupations that sum to 3; expected 2 numbers 0…2 that sum to 2 electrons/,
    );
    expect(problemOf(() => build(set, { occupations: [3, 0] })).code).toBe('bad-occupations');
    expect(problemOf(() => build(set, { occupations: [1, 1, 1] })).code).toBe('bad-occupations');
    expect(build(set, { terms: ['so2mf'], electrons: 2, occupations: [2, 0] }).electrons).toBe(2);
  });
});

describe('spinor integrals', () => {
  it('have one term, and the product form of page one: k = h − ½ Σ (PR|RQ)', () => {
    const [re, im] = [randomArray(16, random), randomArray(16, random)];
    const set: SpinorIntegrals = {
      kind: 'spinor',
      spinors: 2,
      electrons: 1,
      constant: -1,
      h: { re: Float64Array.of(1, 2, 2, 3), im: Float64Array.of(0, 1, -1, 0) },
      g: { re, im },
      findings: [],
      provenance: { title: 'two spinors', files: [] },
    };
    const built = buildHamiltonian(set, { terms: ['sf'] });
    if (built.kind !== 'spinor') throw new Error('not a spinor Hamiltonian');
    // (PR|RQ) at P = 0, Q = 1: R = 0 gives index 0001 = 1, R = 1 gives 0111 = 7.
    expect(built.k.re[1]).toBeCloseTo(2 - 0.5 * (re[1]! + re[7]!), 15);
    expect(built.k.im[1]).toBeCloseTo(1 - 0.5 * (im[1]! + im[7]!), 15);
    expect(built.g.re).toBe(re);
    expect(problemOf(() => buildHamiltonian(set, { terms: ['sf', 'so1'] })).code).toBe('term-not-held');
    expect(problemOf(() => buildHamiltonian(set, { electrons: 3 })).code).toBe('electrons-out-of-range');
  });
});
