import { describe, expect, it } from 'vitest';
import { compareText } from '../../../app/cli/compare-text';
import { textTable, width, wrap } from '../../../app/cli/text-table';
import type { ComparisonRun, VariantEstimate, VariantOutcome } from '../../../core/plan';
import { estimate } from '../plan/estimates';

const INDEX = 'triplet/separate/index/median/clean';
const SWAP = 'triplet/separate/swap-layers/median/clean';
const SPARSE = 'sparse/-/index/none/clean';

function run(variants: readonly VariantEstimate[], others: readonly VariantOutcome[] = []): ComparisonRun {
  return {
    comparison: {
      schema: 'spinwright-comparison/1',
      hamiltonian: {
        orbitals: 8,
        electrons: 8,
        constant: -100,
        terms: [
          { name: 'sf', oneNorm: 1, maxAbs: 1 },
          { name: 'so1', oneNorm: 1, maxAbs: 1 },
        ],
      },
      target: { value: 5, unit: 'cm-1', hartree: 5 / 219474.6313632 },
      variants,
      recommendation: { variant: SWAP, reasons: ['a reason'] },
    },
    outcomes: [
      ...variants.map((v): VariantOutcome => ({ status: 'done', name: v.name, estimate: v })),
      ...others,
    ],
  };
}

const row = (text: string, label: string): string => {
  const found = text.split('\n').find((line) => line.startsWith(label));
  if (found === undefined) throw new Error(`no row ${label}`);
  return found.slice(label.length).trim().replace(/ +/g, ' ');
};

describe('the comparison in the terminal', () => {
  const sparse = estimate(SPARSE, {
    lambda: { oneBody: 10, twoBody: 30, total: 40, parts: {} },
    spectralFloor: { value: 8, kind: 'exact', sector: 'all', low: 8, high: 8 },
  });
  // Swap layers named first: index still stands left.
  const text = compareText(run([estimate(SWAP), estimate(INDEX), sparse]), 'level', 120);

  it('says what is asked and that it is an estimate', () => {
    expect(text.split('\n')[0]).toBe(
      '8 orbitals, 8 electrons, sf + so1; one level to 5 cm⁻¹ rms. Table look-up: clean. Planning estimate.',
    );
  });

  it('says what figures for a matrix element stand for', () => {
    const lines = compareText(run([sparse]), 'matrix-element', 120).split('\n');
    expect(lines[0]).toContain('a matrix element to 5 cm⁻¹');
    expect(lines[1]).toContain('one level');
  });

  it('puts the two ways to treat spin side by side with the change in percent', () => {
    expect(row(text, 'Toffoli a step')).toBe('940 −9.6 % 850 940');
    expect(row(text, '  rotations')).toBe('200 −50.0 % 100 200');
    expect(row(text, '  swap layers')).toBe('0 10 0');
    expect(text).toMatch(/ {2}index {5,}swap layers {5,}index\n/);
  });

  it('writes once what both have in common', () => {
    expect(row(text, 'λ, Eh')).toBe('8.000 40.00');
    expect(row(text, 'bits, keep / angle')).toBe('12 / 16 12 / 16');
    expect(row(text, 'walk steps')).toBe('1.00×10⁶ 1.00×10⁶');
  });

  it('marks a floor of all electron numbers and explains the mark', () => {
    expect(row(text, 'λ over its floor')).toBe('2.00 5.00*');
    expect(text).toContain('* over the floor for all electron numbers');
  });

  it('leaves out physical rows where no machine was assumed', () => {
    expect(text).not.toContain('physical qubits');
  });

  it.each([80, 100, 140])('keeps within %i columns', (columns) => {
    const others = ['spinor/joint', 'spinor/separate'].flatMap((name) =>
      ['none', 'median'].map((shift) => estimate(`${name}/index/${shift}/clean`)),
    );
    const wide = compareText(run([estimate(SWAP), estimate(INDEX), ...others, sparse]), 'level', columns);
    const [, ...body] = wide.split('\n');
    expect(Math.max(...body.map(width))).toBeLessThanOrEqual(columns);
    expect(wide.match(/^Toffoli a step/gm)!.length).toBe(columns < 120 ? 2 : 1);
  });

  it('names what was left out and what failed', () => {
    const problem = { code: 'x', where: 'w', found: 'f', expected: 'e', mend: 'M.' };
    const partial = run(
      [estimate(INDEX)],
      [
        { status: 'left-out', name: 'triplet/joint/index/median/clean', reason: 'too large' },
        { status: 'failed', name: SWAP, problem },
      ],
    );
    const shown = compareText(partial, 'splitting', 120);
    expect(shown).toContain('a splitting to 5 cm⁻¹');
    expect(shown).toContain('- left out: triplet/joint/index/median/clean: too large');
    expect(shown).toContain(`- failed: ${SWAP}: w: f; expected e. M.`);
  });
});

describe('text tables', () => {
  it('align columns by what they show', () => {
    const lines = textTable(
      [
        { head: 'name', align: 'left' },
        { head: 'n', align: 'right' },
      ],
      [
        ['λ\u0302', '1'],
        ['long name', '1000'],
      ],
    );
    expect(lines).toEqual(['name          n', '─'.repeat(15), `λ\u0302             1`, 'long name  1000']);
  });

  it('wrap words and indent what follows', () => {
    expect(wrap('- one two three', 9, '  ')).toEqual(['- one two', '  three']);
  });
});
