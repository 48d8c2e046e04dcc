import { beforeAll, describe, expect, it } from 'vitest';
import { parseVariant } from '../../../core/encode';
import { rotateOrbitals, rotateSpin, type SpatialHamiltonian } from '../../../core/hamiltonian';
import type { IntegralSet, SpatialIntegrals } from '../../../core/integrals';
import { inlineContext } from '../../../core/job';
import { multiply, transpose } from '../../../core/linalg';
import {
  comparisonDocument,
  countCircuit,
  hamiltonianOf,
  runComparison,
  runVerification,
  writeCircuit,
} from '../../../core/plan';
import { frameChecks } from '../../../core/plan/frame-checks';
import { exactSpectrum } from '../../../core/verify';
import { findSet, loadSet } from '../../published/data-set';
import { largestDifference } from '../hamiltonian/random-hamiltonian';
import { tilted } from './tilted';

const ctx = inlineContext();
const TERMS = ['sf', 'so1', 'somf', 'so2'] as const;
const SYSTEM = { terms: TERMS, electrons: null, occupations: null } as const;
const BOTH = { spin: 'optimised', orbital: 'optimised' } as const;
const JOINT = 'triplet/joint/index/median/clean';
const SPARSE = 'sparse/-/index/none/clean';

const comparison = (variants: readonly string[], change: object = {}) => ({
  ...SYSTEM,
  target: { value: 5, unit: 'cm-1' as const, meaning: 'level' as const },
  variants: variants.map(parseVariant),
  threshold: 0,
  bits: 'auto' as const,
  overlaps: [1],
  qubitsMax: null,
  ...change,
});

const matrixOf = (rows: readonly (readonly number[])[]) => Float64Array.from(rows.flat());

function expectOrthogonal(rows: readonly (readonly number[])[]) {
  const n = rows.length;
  const u = matrixOf(rows);
  multiply(u, u, n, n, n, { transposeB: true }).forEach((x, i) => {
    expect(x).toBeCloseTo(i % (n + 1) === 0 ? 1 : 0, 12);
  });
}

let atom: SpatialIntegrals;
let molecule: IntegralSet;
beforeAll(async () => {
  atom = tilted(await loadSet(findSet('f_sto3g_2p')!));
  molecule = await loadSet(findSet('oh_sto3g')!);
});

describe('compare with optimised frames', () => {
  const VARIANTS = [JOINT, 'spinor/joint/index/median/clean', SPARSE];

  it('records each frame with λ before and after, which are those of the table with and without it', async () => {
    const set = tilted(molecule);
    const given = await runComparison(set, comparison(VARIANTS), ctx);
    expect(given.comparison.frames).toBeUndefined();
    expect(comparisonDocument(given.comparison)).not.toHaveProperty('frames');
    const { comparison: found, outcomes } = await runComparison(
      set,
      comparison(VARIANTS, { frames: BOTH }),
      ctx,
    );
    const document = JSON.parse(JSON.stringify(comparisonDocument(found)));
    expect(document.frames.map((frame: { kind: string }) => frame.kind)).toEqual(['spin', 'orbital']);
    const [spin, orbital] = found.frames!;
    for (const [frame, name] of [
      [spin!, JOINT],
      [orbital!, SPARSE],
    ] as const) {
      expect(frame.variants).toEqual([name]);
      expect(frame.judgedBy).toBe(name);
      expect(frame.turned).toBe(true);
      expectOrthogonal(frame.rotation);
      const lambdaOf = (list: typeof found) => list.variants.find((v) => v.name === name)!.lambda.total;
      expect(frame.lambda.before).toBe(lambdaOf(given.comparison));
      expect(frame.lambda.after).toBe(lambdaOf(found));
      expect(frame.lambda.after).toBeLessThan(frame.lambda.before);
      const outcome = outcomes.find((o) => o.name === name)!;
      expect(outcome.status === 'done' && outcome.notes?.join()).toMatch(/turned: λ \d/);
    }
    // The norms of spinor factors do not know where the axes point.
    expect(found.variants[1]).toEqual(given.comparison.variants[1]);
  });

  it('keeps the given frame where nothing better is found, and says so', async () => {
    const { comparison: found, outcomes } = await runComparison(
      molecule,
      comparison([JOINT], { frames: { spin: 'optimised', orbital: 'given' } }),
      ctx,
    );
    const [frame] = found.frames!;
    expect(frame!.turned).toBe(false);
    expect(frame!.rotation).toEqual([
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ]);
    expect(frame!.lambda.after).toBe(frame!.lambda.before);
    const [outcome] = outcomes;
    expect(outcome!.status === 'done' && outcome!.notes?.join()).toContain('spin axes as given');
  });

  it('estimates the energy error of truncation in the given orbitals', async () => {
    const request = comparison([SPARSE], { threshold: 1e-3, frames: BOTH });
    const { comparison: found } = await runComparison(molecule, request, ctx);
    const { oneNormBound, energyEstimate } = found.variants[0]!.residual;
    expect(found.frames![0]!.turned).toBe(true);
    expect(oneNormBound).toBeGreaterThan(5e-4);
    expect(energyEstimate).not.toBeNull();
    expect(Math.abs(energyEstimate!)).toBeGreaterThan(0);
    expect(Math.abs(energyEstimate!)).toBeLessThan(oneNormBound);
  });
});

describe('verify with optimised frames', () => {
  it('checks levels, the way back, and the emitted circuits over the turned basis', async () => {
    // Two orbitals of the tilted atom: simulated in a second.
    const window = { orbitals: [1, 2], electrons: 3 };
    const occupations = [1.5, 1.5, 2];
    const request = {
      ...SYSTEM,
      occupations,
      window,
      variants: [JOINT, SPARSE].map(parseVariant),
      threshold: 0,
      states: 4,
    };
    const evidence = await runVerification(atom, { ...request, frames: BOTH }, ctx);
    expect(evidence.checks.filter(({ ok }) => !ok)).toEqual([]);
    const named = (text: string) => evidence.checks.filter(({ name }) => name.includes(text));
    expect(evidence.frames!.find(({ kind }) => kind === 'spin')!.turned).toBe(true);
    expect(named(`spin axes turned for ${JOINT}: levels`)).toHaveLength(1);
    expect(named(`spin axes turned for ${JOINT}: integrals`)).toHaveLength(1);
    expect(named(`${JOINT}: emitted circuit against H`)).toHaveLength(1);
    expect((await runVerification(atom, request, ctx)).frames).toBeUndefined();
  });

  it('fails for a frame that is not what it says', async () => {
    const hamiltonian = hamiltonianOf(molecule, SYSTEM) as SpatialHamiltonian;
    const exact = await exactSpectrum(hamiltonian, { states: 4 }, ctx);
    const n = hamiltonian.orbitals;
    const wrong = Float64Array.from({ length: n * n }, (_, i) => (i % (n + 1) === 0 ? 1 : 0));
    wrong.set([Math.cos(0.01), Math.sin(0.01)], 0);
    const record = {
      kind: 'orbital',
      judgedBy: SPARSE,
      turned: true,
      rotation: Array.from({ length: n }, (_, p) => Array.from(wrong.subarray(p * n, (p + 1) * n))),
      lambda: { before: 1, after: 1 },
      rows: { before: 1, after: 1 },
      evaluations: 1,
    } as const;
    const frame = { hamiltonian: await rotateOrbitals(hamiltonian, wrong, ctx), record };
    const checks = await frameChecks(hamiltonian, frame, exact, 4, 1e-9, ctx);
    expect(checks.map(({ ok }) => ok)).toEqual([false, false]);
  });

  it('levels and energy estimates of turned orbitals', async () => {
    const evidence = await runVerification(
      molecule,
      { ...SYSTEM, variants: [parseVariant(SPARSE)], threshold: 1e-3, states: 6, frames: BOTH },
      ctx,
    );
    expect(evidence.checks.filter(({ ok }) => !ok)).toEqual([]);
    expect(evidence.frames![0]!.turned).toBe(true);
    const truncation = evidence.truncation[SPARSE]!;
    const shifts = evidence.spectrum.variants[SPARSE]!.map((level, i) => level - evidence.spectrum.exact[i]!);
    // First order of the reference, made over the given orbitals, is what the lowest level does.
    expect(truncation.firstOrder + truncation.secondOrder).toBeCloseTo(shifts[0]!, 6);
    expect(Math.abs(shifts[0]!)).toBeGreaterThan(1e-7);
  });
});

describe('circuits over a turned basis', () => {
  const request = (variant: string) => ({
    ...comparison([], { frames: BOTH, bits: 6 }),
    variant: parseVariant(variant),
  });

  it('carry it in their documents and on top of their text', async () => {
    const count = await countCircuit(molecule, request(SPARSE), ctx);
    expect(count.frame).toMatchObject({ kind: 'orbital', turned: true });
    expectOrthogonal(count.frame!.rotation);
    let text = '';
    const written = await writeCircuit(atom, { ...request(JOINT), part: 'prepare' }, ctx, (chunk) => {
      text += chunk;
    });
    expect(written.frame).toMatchObject({ kind: 'spin', turned: true });
    for (const row of written.frame!.rotation) expect(text).toContain(row.join(' '));
    const plain = await countCircuit(molecule, { ...request(SPARSE), frames: undefined } as never, ctx);
    expect(plain).not.toHaveProperty('frame');
  });
});

describe('the recorded matrices', () => {
  it('are those of the conventions: they turn the Hamiltonian of the files into that of the encoding', async () => {
    const set = tilted(molecule);
    const { comparison: found } = await runComparison(
      set,
      comparison([JOINT, SPARSE], { frames: BOTH }),
      ctx,
    );
    const hamiltonian = hamiltonianOf(set, SYSTEM) as SpatialHamiltonian;
    const n = hamiltonian.orbitals;
    const [spin, orbital] = found.frames!.map(({ rotation }) => matrixOf(rotation));
    const back = rotateSpin(rotateSpin(hamiltonian, spin!), transpose(spin!, 3, 3));
    expect(largestDifference(back.h.planes, hamiltonian.h.planes)).toBeLessThan(1e-13);
    const turned = await rotateOrbitals(hamiltonian, orbital!, ctx);
    const again = await runComparison(
      set,
      comparison([SPARSE], { frames: { spin: 'given', orbital: 'given' } }),
      ctx,
    );
    expect(again.comparison.variants[0]!.lambda.total).toBe(found.frames![1]!.lambda.before);
    const restored = await rotateOrbitals(turned, transpose(orbital!, n, n), ctx);
    expect(largestDifference(restored.g.charge!, hamiltonian.g.charge!)).toBeLessThan(1e-12);
  });
});
