import { describe, expect, it } from 'vitest';
import { buildEncoding, type Encoding, parseVariant } from '../../core/encode';
import { type Factorisation, factorise, type Grouping } from '../../core/factor';
import { buildHamiltonian, type SpatialHamiltonian } from '../../core/hamiltonian';
import type { SelectableTerm } from '../../core/integrals/terms';
import { inlineContext } from '../../core/job';
import { rotated, rotation } from '../unit/factor/rotate';
import { findSet, loadSet } from './data-set';

// Source of all numbers here: an independent NumPy/LAPACK calculation from the same integral files and the formulas
// of double factorisation (V. von Burg et al., Phys. Rev. Research 3, 033055 (2021)) extended by spin; not a publication.
const SO2: readonly SelectableTerm[] = ['sf', 'so1', 'somf', 'so2'];
const ctx = inlineContext();

async function hamiltonian(folder: string, terms: readonly SelectableTerm[]): Promise<SpatialHamiltonian> {
  const h = buildHamiltonian(await loadSet(folder), { terms });
  if (h.kind !== 'spatial') throw new Error('spatial set expected');
  return h;
}

const triplet = (h: SpatialHamiltonian, f: Factorisation, shift: 'none' | 'median'): Promise<Encoding> =>
  buildEncoding(h, f, parseVariant(`triplet/${f.grouping}/index/${shift}/clean`), {}, ctx);

async function lambdas(h: SpatialHamiltonian, grouping: Grouping): Promise<[number, number]> {
  const f = await factorise(h, { grouping }, ctx);
  const [none, median] = await Promise.all([triplet(h, f, 'none'), triplet(h, f, 'median')]);
  return [none.lambda.total, median.lambda.total];
}

const DEGENERATE = [
  // The p orbitals of an atom: any rotation of space, which turns orbitals and spin frame together.
  { name: 'f_sto3g_2p', none: 7.92805879, median: 0.365741173, orbitals: 'shell' },
  { name: 'br_def2svp_4p', none: 4.364783807, median: 0.213173049, orbitals: 'shell' },
  // The π pair of a molecule along z: rotations about the axis.
  { name: 'oh_sto3g', none: 13.600653165, median: 2.772850571, orbitals: 'pi' },
] as const;

describe.each(DEGENERATE)('λ of a degenerate system: $name', ({ name, none, median, orbitals }) => {
  const folder = findSet(name);

  it.skipIf(folder === null)('has the printed values', async () => {
    const found = await lambdas(await hamiltonian(folder!, SO2), 'joint');
    expect(Math.abs(found[0] - none)).toBeLessThan(1e-8);
    expect(Math.abs(found[1] - median)).toBeLessThan(1e-8);
  });

  // The rotated integrals are the same numbers up to rounding, so a solver returns other vectors of each level.
  it.skipIf(folder === null).each([1, 2, 3])(
    'is the same for randomly rotated inputs, seed %i',
    async (seed) => {
      const h = await hamiltonian(folder!, SO2);
      const about =
        orbitals === 'shell'
          ? ([
              [0, 1],
              [1, 2],
              [0, 2],
            ] as const)
          : ([[0, 1]] as const);
      const spin = rotation(3, about, seed);
      const space = orbitals === 'shell' ? spin : rotation(h.orbitals, [[2, 3]], seed);
      const turned = rotated(h, space, spin);
      const joint = await lambdas(turned, 'joint');
      expect(Math.abs(joint[0] - none)).toBeLessThan(1e-8);
      expect(Math.abs(joint[1] - median)).toBeLessThan(1e-8);
      const [plain, same] = await Promise.all([lambdas(h, 'separate'), lambdas(turned, 'separate')]);
      expect(Math.abs(plain[0] - same[0])).toBeLessThan(1e-8);
      expect(Math.abs(plain[1] - same[1])).toBeLessThan(1e-8);
    },
  );
});

describe('λ of formaldehyde, 8 orbitals', () => {
  const folder = findSet('ch2o_sto3g_8o');

  it.skipIf(folder === null)('joint, with full two-electron spin–orbit', async () => {
    const h = await hamiltonian(folder!, SO2);
    const f = await factorise(h, { grouping: 'joint' }, ctx);
    expect(f.blocks.map(({ part, count }) => [part, count])).toEqual([
      ['even', 68],
      ['odd', 56],
    ]);
    const { lambda } = await triplet(h, f, 'median');
    expect(Math.abs(lambda.oneBody - 4.258929644)).toBeLessThan(1e-8);
    expect(Math.abs(lambda.twoBody - 3.902829962)).toBeLessThan(1e-8);
    expect(Math.abs(lambda.total - 8.161759606)).toBeLessThan(1e-8);
  });

  it.skipIf(folder === null)('separate: 73 triples that add 1.133e-3 Eh', async () => {
    const h = await hamiltonian(folder!, SO2);
    const f = await factorise(h, { grouping: 'separate' }, ctx);
    expect(f.blocks.map(({ part, count }) => [part, count])).toEqual([
      ['coulomb', 35],
      ['spin-orbit', 73],
    ]);
    const { parts } = (await triplet(h, f, 'none')).lambda;
    const added = parts['same-orbit']! + parts['other-orbit']!;
    expect(Math.abs(added - 1.133e-3)).toBeLessThan(0.5e-6);
    expect(parts['other-orbit']! / parts['same-orbit']!).toBeCloseTo(2, 10);
  });

  it.skipIf(folder === null)('spin-free: eigenvectors against raw Cholesky columns', async () => {
    const h = await hamiltonian(folder!, ['sf']);
    const [joint, separate] = await Promise.all([lambdas(h, 'joint'), lambdas(h, 'separate')]);
    // Printed to two decimals, the first also as 16.4553.
    expect(Math.abs(joint[0] - 16.4553)).toBeLessThan(0.5e-4);
    expect(Math.abs(joint[1] - 8.16)).toBeLessThan(0.5e-2);
    expect(Math.abs(separate[0] - 15.39)).toBeLessThan(0.5e-2);
    expect(Math.abs(separate[1] - 7.73)).toBeLessThan(0.5e-2);
  });
});

describe('λ of methylene', () => {
  const folder = findSet('ch2_sto3g');

  it.skipIf(folder === null)('spin-free, without and with the median shift', async () => {
    const [none, median] = await lambdas(await hamiltonian(folder!, ['sf']), 'joint');
    expect(Math.abs(none - 8.73)).toBeLessThan(0.5e-2);
    expect(Math.abs(median - 3.93)).toBeLessThan(0.5e-2);
  });
});
