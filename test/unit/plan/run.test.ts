import { beforeAll, describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { expandVariants } from '../../../core/encode';
import type { IntegralSet } from '../../../core/integrals';
import { Cancelled, InputError, inlineContext, type JobContext } from '../../../core/job';
import {
  type ComparisonRequest,
  findTask,
  runComparison,
  runVerification,
  TASK_NAMES,
} from '../../../core/plan';

const TERMS = ['sf', 'so1', 'somf', 'so2'] as const;
const PAIR = 'triplet/separate/index/median/clean,triplet/separate/swap-layers/median/clean';

function request(variants: string, change: Partial<ComparisonRequest> = {}): ComparisonRequest {
  return {
    terms: TERMS,
    electrons: null,
    occupations: null,
    target: { value: 5, unit: 'cm-1', meaning: 'level' },
    variants: expandVariants(variants),
    threshold: 0,
    bits: 'auto',
    overlaps: [1],
    qubitsMax: null,
    ...change,
  };
}

let set: IntegralSet;
beforeAll(async () => {
  const context = inlineContext();
  const inputs = await openInputs({ files: ['app/demo/carbonyl'], recipe: null }, context);
  set = await loadInputs(inputs, 'all', 'throw', context);
});

describe('a comparison', () => {
  it('tells each variant as it ends, in the order asked for', async () => {
    const told: string[] = [];
    const run = await runComparison(set, request(`sparse/-/index/none/clean,${PAIR}`), inlineContext(), {
      onStart: (name) => told.push(`start ${name}`),
      onOutcome: ({ status, name }) => told.push(`${status} ${name}`),
    });
    const names = run.comparison.variants.map(({ name }) => name);
    expect(told).toEqual(names.flatMap((name) => [`start ${name}`, `done ${name}`]));
    expect(names).toEqual(['sparse/-/index/none/clean', ...PAIR.split(',')]);
  });

  it('computes what the two ways to treat spin share only once', async () => {
    let maps = 0;
    const counting: JobContext = {
      ...inlineContext(),
      map: (task, inputs) => {
        maps++;
        return inlineContext().map(task, inputs);
      },
    };
    await runComparison(set, request('triplet/separate/index/median/clean'), counting);
    const forOne = maps;
    maps = 0;
    const { comparison } = await runComparison(set, request(PAIR), counting);
    expect(forOne).toBeGreaterThan(0);
    expect(maps).toBe(forOne);
    const [index, swap] = comparison.variants;
    expect(swap!.lambda).toEqual(index!.lambda);
    expect(swap!.step.toffoli).toBeLessThan(index!.step.toffoli);
  });

  it('hands workers only tasks that they know by name', async () => {
    const used = new Set<string>();
    const checking: JobContext = {
      ...inlineContext(),
      map: (task, inputs) => {
        expect(findTask(task.name)).toBe(task);
        used.add(task.name);
        return inlineContext().map(task, inputs);
      },
    };
    await runComparison(
      set,
      request(`triplet/joint/index/none/clean,${PAIR},spinor/separate/index/none/clean`),
      checking,
    );
    expect(used.size).toBeGreaterThan(0);
    expect(TASK_NAMES).toEqual(expect.arrayContaining([...used]));
  });

  it('goes on after a variant that fails, which carries its problem', async () => {
    let calls = 0;
    const failing: JobContext = {
      ...inlineContext(),
      map: (task, inputs) => {
        if (calls++ > 0) return inlineContext().map(task, inputs);
        const problem = { code: 'x', where: 'w', found: 'f', expected: 'e', mend: 'm' };
        return Promise.reject(new InputError(problem));
      },
    };
    const { outcomes, comparison } = await runComparison(set, request(PAIR), failing);
    expect(outcomes.map(({ status }) => status)).toEqual(['failed', 'done']);
    expect(outcomes[0]).toMatchObject({ problem: { code: 'x', where: 'w' } });
    expect(comparison.variants).toHaveLength(1);
    expect(comparison.recommendation.variant).toBe(PAIR.split(',')[1]);
  });

  it('stops when it is told to', async () => {
    const stopped: JobContext = { ...inlineContext(), checkpoint: () => Promise.reject(new Cancelled()) };
    await expect(runComparison(set, request(PAIR), stopped)).rejects.toBeInstanceOf(Cancelled);
  });

  it('divides the accuracy of a splitting between its two levels', async () => {
    const one = await runComparison(set, request(PAIR), inlineContext());
    const target = { value: 5, unit: 'cm-1', meaning: 'splitting' } as const;
    const two = await runComparison(set, request(PAIR, { target, overlaps: [0.5, 0.25] }), inlineContext());
    const [level, splitting] = [one.comparison.variants[0]!, two.comparison.variants[0]!];
    // Two independent readings of standard deviation ε/√2 each; 1/0.5 + 1/0.25 runs.
    expect(splitting.walkSteps / level.walkSteps).toBeCloseTo(Math.SQRT2, 4);
    expect(splitting.repetitions).toBe(6);
    expect(splitting.campaignToffoli).toBe(6 * splitting.totalToffoli);
  });

  it('refuses overlaps that do not match the levels', async () => {
    const running = runComparison(set, request(PAIR, { overlaps: [1, 1] }), inlineContext());
    await expect(running).rejects.toMatchObject({ code: 'overlaps' });
  });
});

describe('a verification', () => {
  it('fails its check where the levels contradict the reference', async () => {
    const small = await openInputs({ files: ['test/fixtures/cli/h2'], recipe: null }, inlineContext());
    const two = await loadInputs(small, 'all', 'throw', inlineContext());
    const asked = {
      terms: 'all',
      electrons: null,
      occupations: null,
      variants: expandVariants('sparse/-/index/none/clean'),
      threshold: 0,
      states: 2,
    } as const;
    const levels = (...eigenvalues: number[]) => ({ levels: { spinfree: { eigenvalues } } });
    const right = await runVerification(two, asked, inlineContext());
    expect(right.checks.every(({ ok }) => ok)).toBe(true);
    const [lowest, next] = right.spectrum.exact;
    // Full configuration interaction of H₂, STO-3G, 1.4 bohr: −1.1373 Eh, Szabo & Ostlund, Modern Quantum
    // Chemistry, section 4.1 (quoted from memory; integrals of the fixture as printed there to four digits).
    expect(lowest).toBeCloseTo(-1.1373, 3);
    const wrong = await runVerification(two, asked, inlineContext(), levels(lowest! + 1e-3, next!));
    expect(wrong.checks.filter(({ ok }) => !ok).map(({ name }) => name)).toEqual([
      expect.stringContaining('reference.json'),
    ]);
  });
});

describe('an orbital window', () => {
  it('gives the same ground state as all orbitals where the frozen ones are inert', async () => {
    // H₂ and, far away, a closed shell that couples to nothing: the window must return H₂ with a shifted constant.
    const inputs = await openInputs(
      { files: ['test/fixtures/cli/h2-and-core'], recipe: null },
      inlineContext(),
    );
    const three = await loadInputs(inputs, 'all', 'throw', inlineContext());
    const asked = {
      terms: 'all',
      electrons: null,
      occupations: [2, 2, 0],
      variants: expandVariants('triplet/joint/index/median/clean'),
      threshold: 0,
      states: 2,
    } as const;
    const whole = await runVerification(three, asked, inlineContext());
    const window = { orbitals: [2, 3], electrons: null };
    const part = await runVerification(three, { ...asked, window }, inlineContext());
    expect(part.electrons).toBe(2);
    expect(part.spectrum.exact[0]).toBeCloseTo(whole.spectrum.exact[0]!, 9);
    // 2·(−10) + 5 of the closed shell, and the H₂ energy of the other fixture.
    expect(part.spectrum.exact[0]).toBeCloseTo(-15 - 1.1373, 3);
  });
});
