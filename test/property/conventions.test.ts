import fc from 'fast-check';
import { expect, test } from 'vitest';
import {
  type Component,
  checkRecipe,
  fileSetFromMemory,
  loadIntegrals,
  type Recipe,
  type SpatialIntegrals,
} from '../../core/integrals';
import { inlineContext } from '../../core/job';
import { doublePlatform, type Written } from '../fixtures/conventions/file-writers';
import { type FullHamiltonian, randomHamiltonian } from '../fixtures/conventions/hamiltonian';
import { writeFcidump } from '../fixtures/conventions/write-fcidump';
import { type Convention, type Job, writePart } from '../fixtures/conventions/write-part';

// One Hamiltonian, written in two random sets of conventions and formats, must give the same canonical arrays, and
// these must be the elements of the full tensors it was made from.

const XYZ = ['x', 'y', 'z'] as const;
const SIX = ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'] as const;
const ALPHA = 1 / 137.035999084;

const convention: fc.Arbitrary<Convention> = fc.record({
  unit: fc.constantFrom('hartree', 'cm-1', 'eV', 'meV'),
  scale: fc.constantFrom(1, -1, 2, 0.125, 3.7e-5),
  spin: fc.constantFrom('sigma', 's'),
  half: fc.constantFrom('outside', 'inside'),
  order: fc.constantFrom('chemists', 'physicists'),
  momentum: fc.constantFrom('first', 'second'),
  complex: fc.boolean(),
  layout: fc.nat(11),
  format: fc.constantFrom('npy', 'fortran', 'npz', 'hdf5'),
  componentAxis: fc.constantFrom('first', 'last'),
  rotation: fc.nat(8),
  nine: fc.boolean(),
  base: fc.constantFrom(0, 1),
  asListed: fc.boolean(),
});

/** Ways to write the two-electron spin–orbit part: one array for both, two arrays, their sum in g^{k0}. */
const SPIN_ORBIT_WAYS = ['both', 'apart', 'summed'] as const;

/** A part a role, a part a component, or two parts a role that add up. */
const DIVISIONS = ['by role', 'by component', 'by halves'] as const;

function jobs(
  full: FullHamiltonian,
  way: (typeof SPIN_ORBIT_WAYS)[number],
  division: (typeof DIVISIONS)[number],
): Job[] {
  const { n } = full;
  const planes = (tensor: Float64Array, rank: number) =>
    Array.from({ length: tensor.length / n ** rank }, (_, k) =>
      tensor.subarray(k * n ** rank, (k + 1) * n ** rank),
    );
  const charge2 = { n, rank: 2, spins: 0, components: null, imaginary: false, hasMomentum: false } as const;
  const spin2 = { n, rank: 2, spins: 1, components: XYZ, imaginary: true, hasMomentum: false } as const;
  const two = ['full', 'lower-triangle', 'index-list'] as const;
  const charge4 = { n, rank: 4, components: null, imaginary: false, hasMomentum: false } as const;
  const eight = ['full', 'pairs', 'pairs-triangle', 'index-list'] as const;
  const so = { n, rank: 4, spins: 1, components: XYZ, imaginary: true, hasMomentum: true } as const;
  const momentum = ['full', 'antisymmetric-by-symmetric-pairs', 'index-list'] as const;
  const list: Job[] = [
    { id: 'h', role: 'one-electron', ...charge2, planes: [full.h], layouts: two },
    { id: 'mv', role: 'mass-velocity', ...charge2, planes: [full.massVelocity], layouts: two },
    { id: 'd1', role: 'one-electron Darwin', ...charge2, planes: [full.darwin], layouts: two },
    {
      id: 'nuc',
      role: 'one-electron spin-orbit',
      ...spin2,
      planes: planes(full.nuclear, 2),
      layouts: [...two, 'strict-lower-triangle'],
    },
    {
      id: 'mf',
      role: 'mean-field spin-orbit',
      extra: { covers: 'core' },
      ...spin2,
      planes: planes(full.meanField, 2),
      layouts: [...two, 'strict-lower-triangle'],
    },
    { id: 'eri', role: 'two-electron', spins: 0, ...charge4, planes: [full.coulomb], layouts: eight },
    {
      id: 'd2',
      role: 'two-electron Darwin',
      extra: { value: 'contact' },
      spins: 0,
      ...charge4,
      planes: [full.contact],
      layouts: eight,
    },
    {
      id: 'ssc',
      role: 'spin-spin contact',
      extra: { value: 'contact' },
      spins: 2,
      ...charge4,
      planes: [full.contact],
      layouts: eight,
    },
    {
      id: 'ss',
      role: 'spin-spin',
      n,
      rank: 4,
      spins: 2,
      components: SIX,
      imaginary: false,
      hasMomentum: false,
      planes: planes(full.spinSpin, 4),
      layouts: eight,
    },
  ];
  if (way === 'apart') {
    list.push({
      id: 'sso',
      role: 'two-electron spin-same-orbit',
      ...so,
      planes: planes(full.same, 4),
      layouts: momentum,
    });
    list.push({
      id: 'soo',
      role: 'two-electron spin-other-orbit',
      ...so,
      planes: planes(full.other, 4),
      layouts: momentum,
    });
  } else if (way === 'both') {
    list.push({
      id: 'so',
      role: 'two-electron spin-orbit',
      ...so,
      planes: planes(full.same, 4),
      layouts: momentum,
    });
  } else {
    const g = summed(full);
    list.push({
      id: 'gk0',
      role: 'two-electron spin-orbit summed',
      ...so,
      hasMomentum: false,
      planes: planes(g, 4),
      layouts: ['full', 'index-list'],
    });
  }
  if (division === 'by role') return list;
  if (division === 'by halves') {
    // The spin-free parts stay whole, so that an FCIDUMP can stand for them.
    return list.flatMap((job) =>
      ['h', 'eri'].includes(job.id)
        ? [job]
        : [0.25, 0.75].map((share, i) => ({
            ...job,
            id: `${job.id}-${i}`,
            planes: job.planes.map((plane) => plane.map((value) => share * value)),
          })),
    );
  }
  return list.flatMap((job) =>
    job.components === null
      ? [job]
      : job.components.map((name, c) => ({
          ...job,
          id: `${job.id}-${name}`,
          components: [name] as Component[],
          planes: [job.planes[c]!],
        })),
  );
}

/** Im g^{k0}_pqrs = S_pqrs + O_rspq. */
function summed({ n, same, other }: FullHamiltonian): Float64Array {
  const g = Float64Array.from(same);
  for (let k = 0; k < 3; k++)
    for (let p = 0; p < n; p++)
      for (let q = 0; q < n; q++)
        for (let r = 0; r < n; r++)
          for (let s = 0; s < n; s++)
            g[(((k * n + p) * n + q) * n + r) * n + s]! += other[(((k * n + r) * n + s) * n + p) * n + q]!;
  return g;
}

/** Uniform in −1…1 (a linear congruential generator, Numerical Recipes' constants). */
function uniform(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 31 - 1;
  };
}

/** Writes every job in its convention, the spin-free ones as an FCIDUMP where `permute` is given; reads all back. */
async function load(
  full: FullHamiltonian,
  list: readonly Job[],
  how: readonly Convention[],
  permute: (() => number) | null,
): Promise<SpatialIntegrals> {
  const arrays = list.filter((job) => permute === null || !['h', 'eri'].includes(job.id));
  const written = arrays.map((job, index) => writePart(job, how[index % how.length]!));
  if (permute !== null) written.push(writeFcidump(full, how[0]!, permute));
  const datasets = new Map<string, Written>();
  for (const { file, dataset } of written) if (dataset) datasets.set(`${file}:/group/name`, dataset);
  const recipe: Recipe = {
    schema: 'spinwright-recipe/1',
    orbitals: full.n,
    electrons: 2,
    constants: [{ term: 'sf', value: full.constant }],
    parts: written.map(({ part }) => part),
  };
  checkRecipe(recipe, 'property');
  const set = await loadIntegrals(
    recipe,
    fileSetFromMemory('property', new Map(written.map(({ file, bytes }) => [file, bytes]))),
    doublePlatform(datasets),
    inlineContext(),
    { onError: 'keep' }, // random numbers are no repulsion; broken symmetries are looked for below
  );
  return set as SpatialIntegrals;
}

/** Largest difference between `packed(indices)` and the full tensor, relative to its largest element. */
function expectSame(
  full: Float64Array,
  n: number,
  rank: number,
  packed: (k: number, ...i: number[]) => number,
) {
  const block = n ** rank;
  const largest = full.reduce((max, value) => Math.max(max, Math.abs(value)), 0);
  let worst = 0;
  for (let at = 0; at < full.length; at++) {
    const index = Array.from(
      { length: rank },
      (_, axis) => Math.floor((at % block) / n ** (rank - 1 - axis)) % n,
    );
    worst = Math.max(worst, Math.abs(packed(Math.floor(at / block), ...index) - full[at]!));
  }
  expect(worst).toBeLessThanOrEqual(1e-12 * largest);
}

const pair = (p: number, q: number) => (Math.max(p, q) * (Math.max(p, q) + 1)) / 2 + Math.min(p, q);
const triangle = (p: number, q: number, r: number, s: number) => pair(pair(p, q), pair(r, s));

/** Sum of spin–orbit parts as the coefficient A of S (or O) with all four indices. */
function spinOrbit(set: SpatialIntegrals, which: 'same' | 'other') {
  const { orbitals: n } = set;
  const [anti, sym] = [(n * (n - 1)) / 2, (n * (n + 1)) / 2];
  return (k: number, p: number, q: number, r: number, s: number): number => {
    if (p === q) return 0;
    const at = (k * anti + (Math.max(p, q) * (Math.max(p, q) - 1)) / 2 + Math.min(p, q)) * sym + pair(r, s);
    let sum = 0;
    for (const part of set.twoElectron) {
      if (part.kind !== 'spin-orbit') continue;
      const values = part[which];
      if (values === null) continue;
      sum += values instanceof Float64Array ? values[at]! : values.timesSame * part.same![at]!;
    }
    return p > q ? sum : -sum;
  };
}

function expectHamiltonian(set: SpatialIntegrals, full: FullHamiltonian, bothInOne: boolean): void {
  const { n } = full;
  const size = triangle(n - 1, n - 1, n - 1, n - 1) + 1;
  const one = (term: string, plane: 'charge' | 'spin') => (k: number, p: number, q: number) =>
    set.oneElectron
      .filter((part) => part.term === term)
      .reduce((sum, part) => sum + (part[plane]?.[(k * n + p) * n + q] ?? 0), 0);
  const two = (term: string) => (k: number, p: number, q: number, r: number, s: number) =>
    set.twoElectron
      .filter((part) => part.term === term)
      .reduce(
        (sum, part) => sum + (part.kind === 'spin-orbit' ? 0 : part.values[k * size + triangle(p, q, r, s)]!),
        0,
      );
  expectSame(full.h, n, 2, one('sf', 'charge'));
  expectSame(
    full.massVelocity.map((value, i) => value + full.darwin[i]!),
    n,
    2,
    one('scalar', 'charge'),
  );
  expectSame(full.nuclear, n, 2, one('so1', 'spin'));
  expectSame(full.meanField, n, 2, one('somf', 'spin'));
  expectSame(full.coulomb, n, 4, two('sf'));
  expectSame(
    full.contact.map((value) => -Math.PI * ALPHA ** 2 * value),
    n,
    4,
    two('scalar'),
  );
  expectSame(full.spinSpin, n, 4, two('ss'));
  const contact = full.contact.map((value) => ((-2 * Math.PI * ALPHA ** 2) / 3) * value);
  const zero = new Float64Array(n ** 4);
  const six = [contact, zero, zero, contact, zero, contact];
  for (const [kl, expected] of six.entries()) {
    if (expected === zero)
      expect(
        set.twoElectron.every(
          (part) =>
            part.term !== 'ssc' ||
            part.kind !== 'spin-spin' ||
            part.values.subarray(kl * size, (kl + 1) * size).every((value) => value === 0),
        ),
      ).toBe(true);
    else expectSame(expected, n, 4, (_, p, q, r, s) => two('ssc')(kl, p!, q!, r!, s!));
  }
  expectSame(full.same, n, 4, spinOrbit(set, 'same') as never);
  expectSame(
    bothInOne ? full.same.map((value) => 2 * value) : full.other,
    n,
    4,
    spinOrbit(set, 'other') as never,
  );
  expect(set.constants.sf).toBeCloseTo(full.constant, 11);
  const codes = set.findings.map(({ code }) => code);
  for (const code of ['symmetry', 'time-reversal', 'trace', 'missing-component'])
    expect(codes).not.toContain(code);
}

test('any convention and format gives the same canonical arrays', async () => {
  await fc.assert(
    fc.asyncProperty(
      fc.integer({ min: 2, max: 3 }),
      fc.nat(2 ** 31 - 1),
      fc.boolean(),
      fc.array(convention, { minLength: 12, maxLength: 24 }),
      fc.constantFrom(...SPIN_ORBIT_WAYS),
      fc.constantFrom(...DIVISIONS),
      async (n, seed, asFcidump, how, way, division) => {
        const random = uniform(seed);
        const full = randomHamiltonian(n, random);
        const set = await load(full, jobs(full, way, division), how, asFcidump ? random : null);
        expectHamiltonian(set, full, way === 'both');
      },
    ),
    { numRuns: 60 },
  );
});
