import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise, lightParts } from '../../../core/factor';
import { normalOrder, type SpatialHamiltonian } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { difference, matrixOf, operatorNorm } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const OCCUPATIONS = [2, 0.5, 1.5];
const PLAIN = parseVariant('triplet/separate/index/none/clean');

const HAMILTONIANS: Readonly<Record<string, SpatialHamiltonian>> = {
  'one spin–orbit array': randomHamiltonian(
    3,
    21,
    { charge: true, spinOrbit: 'multiple', spinSpin: false },
    4,
  ),
  'all terms': randomHamiltonian(3, 22, { charge: true, spinOrbit: 'independent', spinSpin: true }, 4),
};

async function thinnable(h: SpatialHamiltonian) {
  const whole = await factorise(
    h,
    { grouping: 'separate', threshold: 1e-3, occupations: OCCUPATIONS, keepSpinParts: true },
    ctx,
  );
  return { whole, parts: await lightParts(whole, 3, OCCUPATIONS, ctx) };
}

describe.each(Object.entries(HAMILTONIANS))('spin-dependent parts without light rows: %s', (_, h) => {
  const exact = matrixOf(h);

  it('moves no eigenvalue by more than the one-norm in the residual, and nothing at cut 0', async () => {
    const { parts } = await thinnable(h);
    let before = -1;
    for (const share of [0, 1e-3, 1e-2, 0.1, 0.3, 1]) {
      const { factorisation } = await parts.at(share * parts.heaviest, ctx);
      const encoding = await buildEncoding(h, factorisation, PLAIN, {}, ctx);
      const moved = operatorNorm(difference(matrixOf(encoding.rebuild()), exact));
      expect(moved).toBeLessThanOrEqual(encoding.residual.oneNormBound + 1e-10);
      if (share === 0) expect(moved).toBeLessThan(1e-3 + 1e-10);
      expect(encoding.residual.oneNormBound).toBeGreaterThanOrEqual(before);
      before = encoding.residual.oneNormBound;
    }
    expect(before).toBeGreaterThan(1);
  });

  it('has fewer rows the higher the cut, of weights above it', async () => {
    const { parts } = await thinnable(h);
    const rowsAt = async (cut: number) => {
      const { factorisation } = await parts.at(cut, ctx);
      const { shape } = await buildEncoding(h, factorisation, PLAIN, {}, ctx);
      return shape.rows;
    };
    const rows: number[] = [];
    for (const share of [0, 0.1, 0.3, 1]) rows.push(await rowsAt(share * parts.heaviest));
    expect(rows.every((own, i) => i === 0 || own < rows[i - 1]!)).toBe(true);
  });

  it('keeps the Fock operator of the reference', async () => {
    const { whole, parts } = await thinnable(h);
    const half = OCCUPATIONS.map((x) => x / 2);
    const fockOf = async (cut: number) => {
      const { factorisation } = await parts.at(cut, ctx);
      const rebuilt = (await buildEncoding(h, factorisation, PLAIN, {}, ctx)).rebuild();
      if (rebuilt.kind !== 'spatial') return null;
      return normalOrder(rebuilt, half, half).even.planes.subarray(9);
    };
    const full = await fockOf(0);
    const thin = await fockOf(0.2 * parts.heaviest);
    // Spin–spin factors of lower rank have no packed form.
    if (!full || !thin) return expect(whole.blocks.some(({ part }) => part === 'spin-spin')).toBe(true);
    const size = Math.hypot(...full);
    expect(size).toBeGreaterThan(0.1);
    expect(Math.hypot(...full.map((x, i) => x - thin[i]!))).toBeLessThan(1e-10 * size);
  });
});
