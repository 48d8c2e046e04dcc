import { describe, expect, it } from 'vitest';
import { buildHamiltonian, type SpinHamiltonian } from '../../core/hamiltonian';
import { pairsTriangleLength, type SpatialIntegrals, symmetricPair } from '../../core/integrals';
import { inlineContext } from '../../core/job';
import { exactSpectrum } from '../../core/verify';
import { multiplets } from './atomic-multiplets';
import { findSet, loadSet } from './data-set';

/*
 * Intermediate coupling of a p shell: E. U. Condon & G. H. Shortley, The Theory of Atomic Spectra (1935), chapters VII
 * (Slater integrals) and XI (intermediate coupling), quoted from memory, with F₂ = F²/25 and H' = ζ Σ l·s. The
 * matrices below were checked against the other limit, F₂ = 0, where p³ᐟ² and p¹ᐟ² electrons add ζ/2 and −ζ each.
 */
interface Shell {
  readonly f0: number;
  readonly f2: number;
  readonly zeta: number;
}

/** A p shell (x, y, z real orbitals) with the given Slater integrals F⁰, F² and spin–orbit parameter, hartree. */
function shellHamiltonian({ f0, f2, zeta }: Shell, electrons: number): SpinHamiltonian {
  const values = new Float64Array(pairsTriangleLength(3));
  const set = (p: number, q: number, r: number, s: number, x: number) => {
    values[symmetricPair(symmetricPair(p, q), symmetricPair(r, s))] = x;
  };
  // Real p functions: (aa|aa) = F⁰ + 4F²/25, (aa|bb) = F⁰ − 2F²/25, (ab|ab) = 3F²/25.
  for (let a = 0; a < 3; a++) {
    set(a, a, a, a, f0 + (4 * f2) / 25);
    for (let b = 0; b < a; b++) {
      set(a, a, b, b, f0 - (2 * f2) / 25);
      set(a, b, a, b, (3 * f2) / 25);
    }
  }
  // ζ l·s = ½ζ Σ_k l_k σ_k with ⟨a|l_k|b⟩ = −i ε_kab.
  const spin = new Float64Array(27);
  for (let k = 0; k < 3; k++) {
    const [a, b] = [(k + 1) % 3, (k + 2) % 3];
    spin[9 * k + 3 * a + b] = -zeta / 2;
    spin[9 * k + 3 * b + a] = zeta / 2;
  }
  const part = { role: 'test', origin: 'test' };
  const integrals: SpatialIntegrals = {
    kind: 'spatial',
    orbitals: 3,
    electrons,
    ms2: electrons % 2,
    occupations: new Float64Array(3).fill(electrons / 3),
    constants: { sf: 0 },
    oneElectron: [{ ...part, id: 'so', term: 'so1', charge: null, spin }],
    twoElectron: [{ ...part, id: 'coulomb', term: 'sf', kind: 'charge-charge', values }],
    meanFieldCoversActive: false,
    findings: [],
    provenance: { title: 'p shell', files: [] },
  };
  return buildHamiltonian(integrals);
}

type Level = readonly [twoJ: number, energy: number];

/** Both eigenvalues of [[a, c], [c, b]]. */
function pair(a: number, b: number, c: number): [number, number] {
  const root = Math.hypot((a - b) / 2, c);
  return [(a + b) / 2 - root, (a + b) / 2 + root];
}

/** The three real roots of x³ + bx² + cx + d, by the trigonometric formula (F. Viète). */
function cubicRoots(b: number, c: number, d: number): number[] {
  const p = c - (b * b) / 3;
  const q = (2 * b ** 3) / 27 - (b * c) / 3 + d;
  const size = 2 * Math.sqrt(-p / 3);
  const angle = Math.acos(Math.max(-1, Math.min(1, (3 * q) / (p * size)))) / 3;
  return [0, 1, 2].map((k) => size * Math.cos(angle - (2 * Math.PI * k) / 3) - b / 3);
}

/** p²: ³P and ¹D, ¹S mix at J = 2 and J = 0; p⁴ is the same with ζ → −ζ (holes) and its own centre. */
function p2(F0: number, F2: number, zeta: number): Level[] {
  const [p, d, s] = [F0 - 5 * F2, F0 + F2, F0 + 10 * F2];
  const two = pair(p + zeta / 2, d, zeta / Math.SQRT2);
  const zero = pair(p - zeta, s, Math.SQRT2 * zeta);
  return [
    [2, p - zeta / 2],
    [4, two[0]],
    [4, two[1]],
    [0, zero[0]],
    [0, zero[1]],
  ];
}

/** p³: ⁴S, ²D, ²P at J = 3/2 give a cubic; ²D at 5/2 and ²P at 1/2 stay where they are. */
function p3(F0: number, F2: number, zeta: number): Level[] {
  const [s, d, p] = [-15 * F2, -6 * F2, 0];
  // det([[s, ζ, 0], [ζ, p, b], [0, b, d]] − x) with b² = 5ζ²/4, ⟨⁴S|²P⟩ = ζ.
  const [a2, b2] = [zeta * zeta, (5 * zeta * zeta) / 4];
  const roots = cubicRoots(-(s + d + p), s * d + s * p + d * p - a2 - b2, -(s * d * p) + a2 * d + b2 * s);
  return [[5, 3 * F0 + d], [1, 3 * F0 + p], ...roots.map((root): Level => [3, 3 * F0 + root])];
}

function formula({ f0, f2, zeta }: Shell, electrons: number): Level[] {
  const F2 = f2 / 25;
  if (electrons === 2) return p2(f0, F2, zeta);
  if (electrons === 3) return p3(f0, F2, zeta);
  if (electrons === 4) return p2(6 * f0 - 10 * F2, F2, -zeta);
  // One electron, or one hole in the filled shell of 15 pairs: 10F⁰ − 20F₂.
  const [centre, sign] = electrons === 1 ? [0, 1] : [10 * f0 - 20 * F2, -1];
  return [
    [3, centre + (sign * zeta) / 2],
    [1, centre - sign * zeta],
  ];
}

const SHELLS: readonly (readonly [string, Shell])[] = [
  ['carbon-like, near LS coupling', { f0: 0.55, f2: 0.24, zeta: 1.3e-4 }],
  ['lead-like, near jj coupling', { f0: 0.35, f2: 0.1, zeta: 3.3e-2 }],
  ['in between', { f0: 0.4, f2: 0.15, zeta: 9e-3 }],
  ['inverted', { f0: 0.4, f2: 0.15, zeta: -6e-3 }],
];

const expand = (levels: readonly Level[]) =>
  levels.flatMap(([twoJ, energy]) => Array<number>(twoJ + 1).fill(energy)).sort((a, b) => a - b);

describe.each(SHELLS)('p shell from F⁰, F² and ζ, %s', (_, shell) => {
  it.each([1, 2, 3, 4, 5])(
    '%i electrons: the closed formulas of intermediate coupling',
    async (electrons) => {
      const hamiltonian = shellHamiltonian(shell, electrons);
      const states = { states: Number.POSITIVE_INFINITY };
      const { values } = await exactSpectrum(hamiltonian, states, inlineContext());
      const expected = expand(formula(shell, electrons));
      expect(values).toHaveLength(expected.length);
      for (const [i, value] of expected.entries()) expect(Math.abs(values[i]! - value)).toBeLessThan(1e-12);
    },
  );
});

describe('carbon 2p shell of the data set', () => {
  const folder = findSet('c_631g_2p');

  it.skipIf(folder === null)(
    'follows the p² formulas with F₂ and ζ taken from its own integrals',
    async () => {
      const set = (await loadSet(folder!)) as SpatialIntegrals;
      const coulomb = set.twoElectron.find((part) => part.term === 'sf')!;
      const charge = set.oneElectron.find((part) => part.term === 'sf')!.charge!;
      const spin = set.oneElectron.find((part) => part.term === 'so1')!.spin!;
      if (coulomb.kind !== 'charge-charge') throw new Error('no Coulomb part');
      // (xy|xy) = 3F₂ and (xx|yy) = F₀ − 2F₂; h_xx twice and the core stand for the centre.
      const F2 = coulomb.values[symmetricPair(1, 1)]! / 3;
      const F0 = coulomb.values[symmetricPair(symmetricPair(1, 1), 0)]! + 2 * F2;
      // The file's orbitals may come in any order and sign of x, y, z: a one-electron level tells ζ with its sign.
      const one = await exactSpectrum(
        buildHamiltonian(set, { terms: ['so1'], electrons: 1 }),
        { states: 6 },
        inlineContext(),
      );
      const zeta = one.values[5]! * 2;
      expect(Math.abs(spin[9 * 2 + 1]!)).toBeCloseTo(zeta / 2, 9);
      const centre = set.constants.sf! + 2 * charge[0]! + F0;
      const { values } = await exactSpectrum(
        buildHamiltonian(set, { terms: ['sf', 'so1'] }),
        { states: 15 },
        inlineContext(),
      );
      const expected = expand(p2(centre, F2, zeta));
      for (const [i, value] of expected.entries()) expect(Math.abs(values[i]! - value)).toBeLessThan(1e-9);
      expect(multiplets(values, 1e-8).map(({ degeneracy }) => degeneracy)).toEqual([1, 3, 5, 5, 1]);
    },
  );
});
