import { describe, expect, it } from 'vitest';
import type { EncodingShape } from '../../../core/encode';
import { chooseBits, GUARD_BITS, LEAST_BITS } from '../../../core/estimate';

const SHAPE: EncodingShape = {
  kind: 'triplet',
  orbitals: 5,
  factors: 30,
  rows: 300,
  pairRows: 100,
  oneBodyRows: 12,
  oneBodyPairRows: 6,
  maxRowsPerFactor: 17,
  spinDependent: true,
};
const AUTO = { keep: 'auto', rotation: 'auto' } as const;

/** Deterministic numbers in [0, 1): a linear congruence, multiplier of Numerical Recipes. */
function numbers(seed: number): () => number {
  let state = seed;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
}

function sphere(angles: readonly number[]): number[] {
  let rest = 1;
  const vector = angles.map((angle) => {
    const component = rest * Math.cos(angle);
    rest *= Math.sin(angle);
    return component;
  });
  return [...vector, rest];
}

describe('the rigorous angle bound', () => {
  // |u' − u| ≤ √(N−1) π/2^β for angles rounded to a grid of 2π/2^β, checked on real vectors.
  it('is never exceeded, and is not idle', () => {
    const next = numbers(7);
    let worst = 0;
    for (const [n, beta] of [
      [2, 6],
      [5, 8],
      [20, 10],
    ] as const) {
      const grid = (2 * Math.PI) / 2 ** beta;
      for (let trial = 0; trial < 400; trial++) {
        const angles = Array.from({ length: n - 1 }, () => 2 * Math.PI * next());
        const exact = sphere(angles);
        const rounded = sphere(angles.map((angle) => grid * Math.round(angle / grid)));
        const distance = Math.hypot(...exact.map((x, i) => x - rounded[i]!));
        const bound = (Math.sqrt(n - 1) * Math.PI) / 2 ** beta;
        expect(distance).toBeLessThanOrEqual(bound);
        worst = Math.max(worst, distance / bound);
      }
    }
    expect(worst).toBeGreaterThan(0.5);
  });
});

describe('chosen widths', () => {
  it('keep the rigorous error bound within the budget, with one bit less not', () => {
    const lambda = { oneBody: 3, twoBody: 5 };
    const budget = { prepare: 1e-5, rotation: 2e-5 };
    const { keep, rotation } = chooseBits(SHAPE, lambda, budget, AUTO);
    const angleError = (bits: number) => ((Math.PI * Math.sqrt(4)) / 2 ** bits) * (8 * 5 + 2 * 3);
    expect(angleError(rotation.rigorous!)).toBeLessThanOrEqual(2e-5);
    expect(angleError(rotation.rigorous! - 1)).toBeGreaterThan(2e-5);
    const keepError = (bits: number) => (8 + 4 * 5 + 3) / 2 ** bits;
    expect(keepError(keep.rigorous!)).toBeLessThanOrEqual(1e-5);
    expect(keepError(keep.rigorous! - 1)).toBeGreaterThan(1e-5);
  });

  it('use the estimate and guard bits by default, which is below the rigorous figure here', () => {
    const { keep, rotation } = chooseBits(
      SHAPE,
      { oneBody: 3, twoBody: 5 },
      { prepare: 1e-6, rotation: 1e-6 },
      AUTO,
    );
    expect(keep.used).toBe(keep.estimate! + GUARD_BITS);
    expect(rotation.used).toBe(rotation.estimate! + GUARD_BITS);
    expect(keep.used).toBeLessThan(keep.rigorous!);
    expect(rotation.used).toBeLessThan(rotation.rigorous!);
  });

  // λ = 8 Eh, 200 entries, 5 cm⁻¹ = 2.28e-5 Eh: log₂(8/2.28e-5) = 18.4.
  it('ask for 19 rigorous keep bits at λ = 8 Eh and 5 cm⁻¹', () => {
    const sparse = { ...SHAPE, kind: 'sparse', rows: 200 } as const;
    const { keep, rotation } = chooseBits(
      sparse,
      { oneBody: 3, twoBody: 5 },
      { prepare: 2.28e-5, rotation: 1 },
      AUTO,
    );
    expect(keep.rigorous).toBe(19);
    expect(rotation).toMatchObject({ used: 0, rigorous: null, chosen: 'none needed' });
  });

  it('obey what is given and never fall below the least sensible width', () => {
    const lambda = { oneBody: 1, twoBody: 1 };
    const loose = { prepare: 10, rotation: 10 };
    expect(chooseBits(SHAPE, lambda, loose, AUTO).keep).toMatchObject({
      used: LEAST_BITS,
      chosen: 'least sensible',
    });
    const given = chooseBits(SHAPE, lambda, loose, { keep: 10, rotation: 16 });
    expect([given.keep.used, given.rotation.used]).toEqual([10, 16]);
  });

  it('grow by one bit for every halving of the budget', () => {
    const at = (budget: number) =>
      chooseBits(SHAPE, { oneBody: 3, twoBody: 5 }, { prepare: budget, rotation: budget }, AUTO);
    expect(at(5e-7).rotation.used - at(1e-6).rotation.used).toBe(1);
    expect(at(5e-7).keep.used - at(1e-6).keep.used).toBe(1);
  });
});
