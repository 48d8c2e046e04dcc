import { flushSync } from 'svelte';
import { describe, expect, it } from 'vitest';
import type { EncodingShape } from '../../../../core/encode';
import { Cancelled, InputError } from '../../../../core/job';
import type { Engine } from '../../../../renderer/engine/engine';
import type { Reading, VariantNews } from '../../../../renderer/engine/protocol';
import type { Shell } from '../../../../renderer/shell';
import { Desk } from '../../../../renderer/state/desk.svelte';
import { estimate } from '../fixture';

const READING: Reading = {
  title: 'A set',
  kind: 'spatial',
  orbitals: 8,
  electrons: 8,
  constant: -94,
  terms: [
    { name: 'sf', oneNorm: 37, maxAbs: 4 },
    { name: 'so2', oneNorm: 0.003, maxAbs: 1e-5 },
  ],
  parts: [
    {
      id: 'coulomb',
      origin: 'FCIDUMP',
      holds: '8⁴',
      role: 'spin-free',
      term: 'sf',
      units: 'Eh',
      readAs: 'as is',
    },
  ],
  findings: [],
  bytes: 10,
  meanFieldCoversActive: false,
};
const SHAPE: EncodingShape = {
  kind: 'triplet',
  orbitals: 8,
  factors: 148,
  rows: 7000,
  pairRows: 2000,
  oneBodyRows: 20,
  oneBodyPairRows: 8,
  maxRowsPerFactor: 30,
  spinDependent: true,
};
const FILES = { name: 'set', chosenOneByOne: false, files: [{ path: 'FCIDUMP', blob: new Blob(['x']) }] };

interface Script {
  readonly read?: () => Promise<Reading>;
  readonly reckon?: (
    variants: readonly string[],
    tell: (news: VariantNews) => void,
    signal: AbortSignal,
  ) => Promise<void>;
}

function desk({ read, reckon }: Script = {}): Desk {
  const engine = {
    async run(
      job: string,
      input: { variants: readonly string[] },
      options: { onNews: (n: VariantNews) => void; signal: AbortSignal },
    ) {
      if (job === 'read') return read ? read() : READING;
      await (reckon ?? answerAll)(input.variants, options.onNews, options.signal);
      return { recommendation: { variant: null, reasons: [] } };
    },
  } as unknown as Engine;
  const shell: Shell = {
    kind: 'browser',
    open: async () => FILES,
    demo: async () => FILES,
    given: async () => null,
    save: async () => true,
    recent: async () => [],
    openRecent: async () => null,
    onCommand: () => () => {},
  };
  return new Desk(engine, shell);
}

async function answerAll(variants: readonly string[], tell: (news: VariantNews) => void): Promise<void> {
  for (const name of variants) {
    tell({ status: 'started', name });
    if (name.startsWith('triplet')) tell({ status: 'sized', name, shape: SHAPE });
    tell({ status: 'done', name, estimate: estimate(name) });
  }
}

async function loaded(script: Script = {}): Promise<Desk> {
  const d = desk(script);
  await d.load.read(FILES);
  flushSync();
  return d;
}

describe('the job from files to ledger', () => {
  it('starts empty at every stop, and says so', () => {
    const d = desk();
    expect(Object.values(d.lines).map((l) => l.mark)).toEqual([
      'empty',
      'empty',
      'full',
      'empty',
      'empty',
      'empty',
    ]);
    expect(d.variants.canReckon).toBe(false);
  });

  it('reads, reckons and names who leads', async () => {
    const d = await loaded();
    expect(d.lines.load).toMatchObject({ mark: 'full', fact: '1 array, 8 orbitals' });
    expect(d.terms.kept).toEqual(['sf', 'so2']);
    await d.reckon();
    expect(d.lines.variants).toMatchObject({ mark: 'full', fact: '8 of 8 done' });
    expect(d.lines.ledger.fact).toContain('leads');
    expect(d.ledger.columns).toHaveLength(6);
  });

  it('shows a file that cannot be read in four parts and can read another', async () => {
    const problem = { code: 'x', where: 'FCIDUMP:3', found: 'a', expected: 'b', mend: 'c' };
    let bad = true;
    const d = desk({
      read: async () => {
        if (bad) throw new InputError(problem);
        return READING;
      },
    });
    await d.load.read(FILES);
    expect(d.load.phase).toBe('failed');
    expect(d.load.problem).toEqual(problem);
    expect(d.lines.load.mark).toBe('error');
    bad = false;
    await d.load.read(FILES);
    expect(d.lines.load.mark).toBe('full');
  });

  it('does not reckon with an error among the findings', async () => {
    const finding = {
      severity: 'error' as const,
      code: 'x',
      where: 'FCIDUMP',
      found: 'a',
      expected: 'b',
      mend: 'c',
    };
    const d = await loaded({ read: async () => ({ ...READING, findings: [finding] }) });
    expect(d.load.ready).toBeNull();
    expect(d.lines.load).toMatchObject({ mark: 'error', fact: '1 error in the files' });
  });

  it('keeps what is finished when the job is stopped, and goes on with the rest', async () => {
    let asked: readonly string[] = [];
    let stopAt = 2;
    const d = await loaded({
      reckon: async (variants, tell, signal) => {
        asked = variants;
        for (const [at, name] of variants.entries()) {
          tell({ status: 'started', name });
          if (at === stopAt) {
            d.stopJob();
            expect(signal.aborted).toBe(true);
            throw new Cancelled();
          }
          tell({ status: 'done', name, estimate: estimate(name) });
        }
      },
    });
    await d.reckon();
    expect(d.variants.entries.map((e) => e.status)).toEqual([
      'done',
      'done',
      ...Array.from({ length: 6 }, () => 'stopped'),
    ]);
    expect(d.variants.busy).toBe(false);
    stopAt = -1;
    await d.reckon();
    expect(asked).toHaveLength(6);
    expect(d.variants.done).toBe(8);
  });

  it('marks one variant as failed and finishes the others', async () => {
    const problem = {
      code: 'x',
      where: 'v',
      found: 'too large',
      expected: 'less',
      mend: 'raise the threshold',
    };
    const d = await loaded({
      reckon: async (variants, tell) => {
        for (const [at, name] of variants.entries())
          tell(
            at === 0
              ? { status: 'failed', name, problem }
              : { status: 'done', name, estimate: estimate(name) },
          );
      },
    });
    await d.reckon();
    expect(d.variants.entries[0]).toMatchObject({ status: 'failed', problem });
    expect(d.lines.variants.mark).toBe('error');
    expect(d.variants.done).toBe(7);
  });
});

describe('a changed question', () => {
  it('is recounted at once where the sizes of the encoding are known', async () => {
    const d = await loaded();
    await d.reckon();
    const walk = () =>
      d.ledger.entries.find((e) => e.name === 'triplet/joint/index/median/clean')!.estimate!.walkSteps;
    d.target.resolution.edit('2.5 cm-1');
    const fine = walk();
    d.target.resolution.edit('5 cm-1');
    // Walk steps are ⌈πλ/2ε⌉: half the target, twice the steps.
    expect(Math.abs(fine / 2 - walk())).toBeLessThanOrEqual(1);
    expect(d.ledger.entries.find((e) => e.name.startsWith('triplet'))!.stale).toBeNull();
  });

  it('goes stale where they are not, is never mixed in, and is asked for again', async () => {
    const d = await loaded();
    await d.reckon();
    d.target.resolution.edit('1 mEh');
    const sparse = d.ledger.entries.find((e) => e.name.startsWith('sparse'))!;
    expect(sparse.stale).toBe('from target 5 cm-1, reckon again');
    expect(d.ledger.leader).not.toBe(sparse.name);
    expect(d.variants.open).toContain(sparse.name);
    expect(d.lines.ledger.mark).toBe('stale');
  });

  it('goes stale for other terms, and comes back with them', async () => {
    const d = await loaded();
    await d.reckon();
    d.terms.toggle('so2');
    expect(d.variants.done).toBe(0);
    d.terms.toggle('so2');
    expect(d.variants.done).toBe(8);
  });

  it('keeps the last sound value while a field is not understood', () => {
    const d = desk();
    d.target.resolution.edit('0,5 meV');
    expect(d.target.target).toEqual({ value: 0.5, unit: 'meV' });
    d.target.resolution.edit('5 parsec');
    expect(d.target.resolution.problem).toContain('5 cm-1');
    expect(d.target.target).toEqual({ value: 0.5, unit: 'meV' });
    expect(d.lines.target.mark).toBe('error');
  });
});

describe('keys in the ledger', () => {
  it('walk through figures; a spanning one counts once', async () => {
    const d = await loaded();
    await d.reckon();
    const { ledger } = d;
    const [first, second] = ledger.columns;
    ledger.focusOn('step', first!.sides[0]!.name);
    ledger.move(1, 0);
    expect(ledger.cursor!.name).toBe(first!.sides[1]!.name);
    ledger.focusOn('lambda', first!.sides[0]!.name);
    ledger.move(1, 0);
    expect(ledger.cursor!.name).toBe(second!.sides[0]!.name);
    ledger.move(0, 1);
    expect(ledger.cursor!.row).toBe('floor');
    ledger.moveToEnd(true);
    expect(ledger.cursor!.name).toBe(ledger.columns[5]!.sides[0]!.name);
    ledger.moveToEnd(false);
    ledger.swapFocus();
    expect(ledger.cursor!.name).toBe(ledger.columns[0]!.sides[1]!.name);
  });

  it('pin, hide, show and order', async () => {
    const d = await loaded();
    await d.reckon();
    const { ledger } = d;
    const last = ledger.columns[5]!;
    ledger.focusOn('step', last.sides[0]!.name);
    ledger.togglePin();
    expect(ledger.columns[0]!.key).toBe(last.key);
    ledger.hide();
    expect(ledger.columns).toHaveLength(5);
    ledger.showAll();
    expect(ledger.columns).toHaveLength(6);
    ledger.focusOn('qubits', ledger.columns[1]!.sides[0]!.name);
    ledger.orderByFocus();
    expect(ledger.order).toBe('qubits');
  });

  it('explains the focused figure with its parts', async () => {
    const d = await loaded();
    await d.reckon();
    d.goTo('ledger');
    d.ledger.focusOn('step', 'sparse/-/index/optimised/clean');
    const text = d.reckoning.map((line) => line.map((p) => p.text).join('')).join('\n');
    expect(text).toContain('Toffoli a step 19\u202f154');
    expect(text).toContain('look-up 9\u202f574 + prepare 3\u202f720 + rotations 5\u202f712');
  });
});
