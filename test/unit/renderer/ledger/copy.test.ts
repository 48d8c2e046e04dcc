import { describe, expect, it } from 'vitest';
import { arrange, type Entry } from '../../../../renderer/ledger/columns';
import { StaleTable, tableText } from '../../../../renderer/ledger/copy';
import { rowById } from '../../../../renderer/ledger/rows';
import { estimate } from '../fixture';

const NAMES = ['triplet/joint/index/median/clean', 'triplet/joint/swap-layers/median/clean'];
const entries = NAMES.map(
  (name): Entry => ({
    name,
    status: 'done',
    stage: '',
    fraction: 1,
    estimate: estimate(name),
    problem: null,
    reason: '',
    notes: [],
    stale: null,
  }),
);
const options = { pinned: [], hidden: [], orderBy: () => 0, cap: null };
const columns = arrange(entries, options);
const rows = [rowById('lambda'), rowById('rows'), rowById('run'), rowById('time')];
const view = { target: { value: 5, unit: 'cm-1' as const }, cap: null, time: 'days' as const };
const copy = (format: 'csv' | 'markdown' | 'latex') =>
  tableText(format, columns, rows, view, 'one level to 5 cm⁻¹ rms');

describe('copied table', () => {
  it('is CSV by RFC 4180 with full precision, a point as decimal sign and no grouping', () => {
    expect(copy('csv').split('\r\n')).toEqual([
      '"Planning estimate, one level to 5 cm⁻¹ rms","Triplet, joint, median shift, in index","Triplet, joint, median shift, swap layers"',
      '"λ, all parts (Eh)",18.9401,18.9401',
      'Factors / table rows,148 / 7210,148 / 7210',
      '"Toffoli, one run",27773300000,23823500000',
      '"Time, one run (h)",285.6,244.8',
      '',
    ]);
  });

  it('is a Markdown table with as many cells in every line', () => {
    const lines = copy('markdown').trimEnd().split('\n');
    expect(lines[1]).toBe('| --- | ---: | ---: |');
    for (const line of lines) expect(line.split(' | ')).toHaveLength(3);
  });

  it('is a LaTeX tabular without characters LaTeX would trip over', () => {
    const text = copy('latex');
    expect(text).toContain('\\begin{tabular}{lrr}');
    expect(text).toContain('$\\lambda$, all parts (Eh) & 18.9401 & 18.9401 \\\\');
    expect(text).toContain('cm$^{-1}$');
    expect(text).not.toMatch(/[λ⁻¹%]/);
  });

  it('is refused where a figure belongs to an older question', () => {
    const older = arrange([{ ...entries[0]!, stale: 'from target 10 cm-1' }, entries[1]!], options);
    expect(() => tableText('csv', older, rows, view, '')).toThrow(StaleTable);
  });
});
