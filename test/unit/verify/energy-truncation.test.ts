import { describe, expect, it } from 'vitest';
import { addScaled, fromStoredForm, type SpatialHamiltonian, spinorForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { type ComplexMatrix, hermitianEigenvalues } from '../../../core/linalg';
import { determinantStatistics, referenceDeterminant, secondOrder } from '../../../core/verify';
import { difference, matrixOf } from '../encode/fock-space';
import { ALL_KINDS, randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const N = 3;

/** Diagonal one-body part of well separated orbitals, and a weak random rest. */
function gapped(seed: number, strength: number): SpatialHamiltonian {
  const { h, g, ...rest } = randomHamiltonian(N, seed, ALL_KINDS, 3);
  const levels = { ...h, planes: h.planes.map((x) => strength * x) };
  for (let p = 0; p < N; p++) levels.planes[p * N + p]! += 2 * p;
  const scaled = (values: Float64Array) => values.map((x) => strength * x);
  const { charge, spinOrbit, spinSpin } = g;
  return fromStoredForm({
    ...rest,
    h: levels,
    g: {
      charge: scaled(charge!),
      spinOrbit: { same: scaled(spinOrbit!.same), other: scaled(spinOrbit!.other as Float64Array) },
      spinSpin: scaled(spinSpin!),
    },
  });
}

const bits = (x: number): number => x.toString(2).replaceAll('0', '').length;

/** Differences of orbital energies that lead from `determinant` to `state`, from energies of ionised determinants. */
function gapTo(fock: ComplexMatrix, determinant: number, state: number): number {
  const energy = (s: number) => fock.re[s * fock.n + s]!;
  let gap = 0;
  for (let P = 0; P < 2 * N; P++) {
    const other = determinant ^ (1 << P);
    if ((state ^ determinant) & (1 << P)) gap += energy(determinant) - energy(other);
  }
  return gap;
}

/**
 * Second order over determinants of the dense Fock-space matrix. Those less than 0.1 Eh above the reference under `given`
 * are diagonalised with it; other gaps below 0.1 Eh are left out.
 */
function overDeterminants(fock: ComplexMatrix, given: ComplexMatrix, determinant: number) {
  const space = [determinant];
  let [correlation, omitted] = [0, 0];
  for (let state = 0; state < fock.n; state++) {
    const changed = state ^ determinant;
    if (bits(state) !== bits(determinant) || changed === 0 || bits(changed) > 4) continue;
    if (given.re[state * fock.n + state]! - given.re[determinant * fock.n + determinant]! < 0.1) {
      space.push(state);
      continue;
    }
    const i = state * fock.n + determinant;
    const coupling = fock.re[i]! ** 2 + fock.im[i]! ** 2;
    if (gapTo(given, determinant, state) > -0.1) {
      if (coupling > 1e-20) omitted++;
      continue;
    }
    correlation += coupling / gapTo(fock, determinant, state);
  }
  const pick = (plane: Float64Array) =>
    Float64Array.from(space.flatMap((row) => space.map((column) => plane[row * fock.n + column]!)));
  const matrix = { n: space.length, re: pick(fock.re), im: pick(fock.im) };
  return { reference: hermitianEigenvalues(matrix)[0]!, correlation, omitted, size: space.length };
}

const asState = (occupied: Uint8Array): number => occupied.reduce((sum, x, P) => sum + x * 2 ** P, 0);

describe('second order', () => {
  // Closed shell, open shells with spin density: the sum runs over all of Fock space, without Slater–Condon rules.
  it.each([[[2, 0, 0]], [[2, 1, 0]], [[2, 1, 1]], [[1, 1, 1]]])(
    'from occupations %s: the sum over determinants, before and after',
    async (occupations) => {
      const electrons = occupations.reduce((a, b) => a + b);
      const occupied = referenceDeterminant(occupations, electrons);
      const [given, changed] = [gapped(4, 0.05), gapped(5, 0.05)];
      const [a, b] = [given, changed].map((h) =>
        overDeterminants(matrixOf(h), matrixOf(given), asState(occupied)),
      );
      expect(a!.correlation).toBeLessThan(-1e-4);
      for (const [x, y] of [
        [given, changed],
        [spinorForm(given), spinorForm(changed)],
        [given, spinorForm(changed)],
      ] as const) {
        const before = await secondOrder(x, occupied, null, ctx);
        const after = await secondOrder(y, occupied, before, ctx);
        expect(before.omitted).toBe(a!.omitted);
        expect(before.space).toHaveLength(a!.size);
        expect(before.reference).toBeCloseTo(a!.reference, 11);
        expect(before.correlation).toBeCloseTo(a!.correlation, 11);
        expect(after.reference).toBeCloseTo(b!.reference, 11);
        expect(after.correlation).toBeCloseTo(b!.correlation, 11);
      }
    },
  );

  it('an open shell is diagonalised among its determinants', async () => {
    const occupied = referenceDeterminant([2, 1, 1], 4);
    const { space } = await secondOrder(gapped(4, 0.01), occupied, null, ctx);
    expect(space[0]).toEqual({ from: [], to: [] });
    expect(space.length).toBeGreaterThan(1);
  });

  it('fills the fullest orbitals first, ↑ before ↓', () => {
    expect([...referenceDeterminant([2, 1, 1], 4)]).toEqual([1, 1, 1, 0, 1, 0]);
    expect([...referenceDeterminant([5 / 3, 5 / 3, 5 / 3], 5)]).toEqual([1, 1, 1, 1, 1, 0]);
    expect([...referenceDeterminant([0, 2, 0], 2)]).toEqual([0, 0, 1, 1, 0, 0]);
  });
});

it('random determinants give the moments of the whole sector', async () => {
  const given = randomHamiltonian(N, 6, ALL_KINDS, 3);
  const other = randomHamiltonian(N, 7, ALL_KINDS, 3);
  const changed = fromStoredForm({
    ...given,
    h: addScaled(given.h, other.h, 0.1),
    g: { ...given.g, charge: given.g.charge!.map((x, i) => x + 0.1 * other.g.charge![i]!) },
  });
  const delta = difference(matrixOf(changed), matrixOf(given));
  const states = Array.from({ length: 4 ** N }, (_, s) => s).filter((s) => bits(s) === 3);
  const shifts = states.map((s) => delta.re[s * delta.n + s]!);
  const mean = shifts.reduce((a, b) => a + b) / shifts.length;
  const spread = Math.sqrt(shifts.reduce((a, x) => a + (x - mean) ** 2, 0) / shifts.length);
  const rms = (distance: number) => {
    let [sum, count] = [0, 0];
    for (const s of states) {
      for (const t of states) {
        if (bits(s ^ t) !== distance) continue;
        sum += delta.re[s * delta.n + t]! ** 2 + delta.im[s * delta.n + t]! ** 2;
        count++;
      }
    }
    return Math.sqrt(sum / count);
  };
  const samples = 20_000;
  const found = await determinantStatistics(given, changed, 3, { samples }, ctx);
  // Four standard errors of a mean; a relative 4 % for the root mean squares of some ten distinct values.
  expect(Math.abs(found.mean - mean)).toBeLessThan((4 * spread) / Math.sqrt(samples));
  expect(Math.abs(found.spread / spread - 1)).toBeLessThan(0.04);
  expect(Math.abs(found.singles / rms(2) - 1)).toBeLessThan(0.04);
  expect(Math.abs(found.doubles / rms(4) - 1)).toBeLessThan(0.04);
  expect(await determinantStatistics(given, given, 3, { samples: 10 }, ctx)).toMatchObject({
    mean: 0,
    spread: 0,
  });
});
