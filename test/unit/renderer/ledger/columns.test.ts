import { describe, expect, it } from 'vitest';
import type { VariantEstimate } from '../../../../core/plan/comparison';
import { cellsOf, seamWords } from '../../../../renderer/ledger/cells';
import { arrange, type ColumnOptions, cheapest, type Entry } from '../../../../renderer/ledger/columns';
import { gridOf } from '../../../../renderer/ledger/geometry';
import { rowById } from '../../../../renderer/ledger/rows';
import { estimate } from '../fixture';

const entry = (name: string, change: Partial<VariantEstimate> | null = {}): Entry => ({
  name,
  status: change ? 'done' : 'waiting',
  stage: '',
  fraction: null,
  estimate: change ? estimate(name, change) : null,
  problem: null,
  reason: '',
  notes: [],
  stale: null,
});

const JOINT = ['triplet/joint/index/median/clean', 'triplet/joint/swap-layers/median/clean'] as const;
const SEPARATE = [
  'triplet/separate/index/median/clean',
  'triplet/separate/swap-layers/median/clean',
] as const;
const SPARSE = 'sparse/-/index/none/clean';
const options = (change: Partial<ColumnOptions> = {}): ColumnOptions => ({
  pinned: [],
  hidden: [],
  orderBy: (e) => e.totalToffoli,
  cap: null,
  ...change,
});
const VIEW = { target: { value: 5, unit: 'cm-1' as const }, cap: null, time: 'days' as const };

describe('columns', () => {
  it('joins the two ways to treat spin, index left, whatever order they come in', () => {
    const [column] = arrange([entry(JOINT[1]), entry(JOINT[0])], options());
    expect(column!.sides.map((s) => s.name)).toEqual(JOINT);
    expect(column!.title).toBe('Triplet, joint');
    expect(column!.note).toBe('median shift');
  });

  it('orders pairs ascending, then single ones, unfinished ones last', () => {
    const entries = [
      entry('spinor/separate/index/median/clean', null),
      entry(SPARSE, { totalToffoli: 1 }),
      ...JOINT.map((n) => entry(n, { totalToffoli: 30 })),
      ...SEPARATE.map((n) => entry(n, { totalToffoli: 20 })),
    ];
    expect(arrange(entries, options()).map((c) => c.title)).toEqual([
      'Triplet, separate',
      'Triplet, joint',
      'Sparse',
      'Spinor',
    ]);
  });

  it('puts pinned columns left and leaves hidden ones out', () => {
    const entries = [
      ...JOINT.map((n) => entry(n, { totalToffoli: 30 })),
      ...SEPARATE.map((n) => entry(n)),
      entry(SPARSE),
    ];
    const columns = arrange(
      entries,
      options({ pinned: ['triplet/joint/median/clean'], hidden: ['sparse/-/none/clean'] }),
    );
    expect(columns.map((c) => [c.title, c.pinned])).toEqual([
      ['Triplet, joint', true],
      ['Triplet, separate', false],
    ]);
  });

  it('says why a variant stands alone', () => {
    const columns = arrange([entry(SPARSE), entry(JOINT[1])], options());
    expect(columns.map((c) => c.alone)).toEqual([
      expect.stringContaining('spin in the index is not among the chosen'),
      expect.stringContaining('no vectors to rotate'),
    ]);
  });

  it('leads only within the cap and with figures of the present question', () => {
    const cheap = entry(SPARSE, { totalToffoli: 1, logicalQubits: 3000 });
    const dear = entry(JOINT[0], { totalToffoli: 2, logicalQubits: 1000 });
    expect(cheapest([cheap, dear], { cap: null })).toBe(SPARSE);
    expect(cheapest([cheap, dear], { cap: 2000 })).toBe(JOINT[0]);
    expect(cheapest([{ ...cheap, stale: 'older' }, dear], { cap: null })).toBe(JOINT[0]);
    expect(cheapest([cheap, dear], { cap: 10 })).toBeNull();
  });
});

describe('cells', () => {
  const [pair] = arrange(
    JOINT.map((n) => entry(n)),
    options(),
  );

  it('writes once what is equal on both sides and prints the change in the seam where it is not', () => {
    expect(cellsOf(pair!, rowById('lambda'), VIEW)).toMatchObject({
      spans: true,
      cells: [{ figure: '18.94' }],
    });
    const step = cellsOf(pair!, rowById('step'), VIEW);
    expect(step.spans).toBe(false);
    expect(step.cells.map((c) => c.figure)).toEqual(['19\u202f154', '16\u202f430']);
    expect(step.seam).toBe('−14.2 %'); // (16430 − 19154) / 19154
  });

  it('says "to come" for what is not reckoned and "–" for what does not apply', () => {
    const [half] = arrange([entry(JOINT[0], { physical: null }), entry(JOINT[1], null)], options());
    const time = cellsOf(half!, rowById('time'), VIEW);
    expect(time.cells.map((c) => c.figure)).toEqual(['–', 'to come']);
    expect(time.seam).toBe('');
  });

  it('does not mix a figure of an older question into a change', () => {
    const [mixed] = arrange(
      [{ ...entry(JOINT[0]), stale: 'from target 10 cm-1' }, entry(JOINT[1])],
      options(),
    );
    const line = cellsOf(mixed!, rowById('step'), VIEW);
    expect(line.cells.map((c) => c.stale)).toEqual([true, false]);
    expect(line.seam).toBe('');
    expect(cellsOf(mixed!, rowById('lambda'), VIEW).spans).toBe(false);
  });

  it('marks what is over the cap and what is measured against another floor', () => {
    const [sparse] = arrange(
      [entry(SPARSE, { spectralFloor: { value: null, kind: 'bracket', sector: 'all', low: 10, high: 30 } })],
      options(),
    );
    const over = cellsOf(sparse!, rowById('qubits'), { ...VIEW, cap: 1000 });
    expect(over.cells[0]!.mark).toMatchObject({ sign: '▲', words: 'over the cap of 1\u202f000' });
    const floor = cellsOf(sparse!, rowById('floor'), VIEW);
    expect(floor.cells[0]).toMatchObject({ figure: '≤ 1.89', mark: { sign: '*' } });
  });

  it('reads the seam as part of the right-hand figure', () => {
    expect(seamWords(19154, 16430)).toBe(', 14.2 percent less than in index');
    expect(seamWords(100, 150)).toBe(', 50.0 percent more than in index');
    expect(seamWords(5, 5)).toBe('');
  });
});

describe('grid', () => {
  it('gives the chart the centres of the table cells', () => {
    const columns = arrange(
      [...JOINT, SPARSE].map((n) => entry(n)),
      options(),
    );
    const grid = gridOf(columns);
    // Label 170; pair 90 + 48 + 90; gap 8; single 92: page 10 of the design.
    expect(grid.places[0]).toEqual({ left: 170, width: 228, centres: [215, 353] });
    expect(grid.places[1]).toEqual({ left: 406, width: 92, centres: [452] });
    expect(grid.width).toBe(498);
  });
});
