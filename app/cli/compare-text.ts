import type { Comparison, ComparisonRun, VariantEstimate } from '../../core/plan';
import { formatChange, formatSignificant } from '../../core/units';
import { type CompareRow, compareRows, unitText } from './compare-rows';
import { outcomeLines } from './outcome-text';
import { padEnd, padStart, width, wrap } from './text-table';

/** One variant, or the two that differ in how SELECT treats spin alone. */
interface Column {
  readonly variants: readonly [VariantEstimate] | readonly [VariantEstimate, VariantEstimate];
  /** Lines of head over the whole column, the same number for every column. */
  readonly head: readonly string[];
}

/** What the figures mean where an element is wanted instead of an energy. */
const MATRIX_ELEMENT =
  'Reckoned as phase estimation of one level; estimating matrix elements directly is not reckoned.';
const GAP = '   ';
const SEAM = 10;
const LEAST_CELL = 11;
const LEAST_LINE = 80;

/** The comparison for a terminal of `columns` columns. */
export function compareText(
  { comparison, outcomes }: ComparisonRun,
  meaning: string,
  columns: number,
): string {
  const lines = [...title(comparison, meaning), ''];
  if (comparison.variants.length > 0) {
    const rows = compareRows(comparison);
    for (const block of blocks(pairUp(comparison.variants, sharesLookup(comparison)), rows, columns))
      lines.push(...block, '');
  }
  if (comparison.variants.some((v) => v.spectralFloor.sector === 'all')) {
    lines.push('* over the floor for all electron numbers, since the encoding is not shifted', '');
  }
  lines.push(...recommendation(comparison, columns));
  for (const line of outcomeLines(outcomes)) lines.push(...bullet(line, columns));
  return `${lines.join('\n').trimEnd()}\n`;
}

const sharesLookup = ({ variants }: Comparison): boolean => new Set(variants.map((v) => v.lookup)).size === 1;

function title(comparison: Comparison, meaning: string): string[] {
  const { hamiltonian, target, variants } = comparison;
  const wanted = { level: 'one level', splitting: 'a splitting', 'matrix-element': 'a matrix element' }[
    meaning
  ];
  const terms = hamiltonian.terms.map(({ name }) => name).join(' + ');
  const value = formatSignificant(target.value, Math.max(1, String(target.value).replace(/\D/g, '').length));
  return [
    `${hamiltonian.orbitals} orbitals, ${hamiltonian.electrons} electrons, ${terms}; ` +
      `${wanted ?? meaning} to ${value} ${unitText(target.unit)} rms. ` +
      `${sharesLookup(comparison) ? `Table look-up: ${variants[0]!.lookup}. ` : ''}Planning estimate.`,
    ...(meaning === 'matrix-element' ? [MATRIX_ELEMENT] : []),
    ...(variants.length === 0 ? ['No variant was computed.'] : []),
  ];
}

/** Pairs stand where their first member stood: index left, swap layers right. */
function pairUp(variants: readonly VariantEstimate[], oneLookup: boolean): Column[] {
  const key = (v: VariantEstimate): string => [v.factorisation, v.grouping, v.shift, v.lookup].join('/');
  const taken = new Set<VariantEstimate>();
  const columns: Column[] = [];
  for (const v of variants) {
    if (taken.has(v)) continue;
    const other = variants.find(
      (w) => key(w) === key(v) && w.spinInSelect !== v.spinInSelect && !taken.has(w),
    );
    taken.add(v);
    if (other) taken.add(other);
    const members = other
      ? v.spinInSelect === 'index'
        ? ([v, other] as const)
        : ([other, v] as const)
      : ([v] as const);
    columns.push({ variants: members, head: head(v, oneLookup) });
  }
  return columns;
}

/** The look-up is left out where all variants share it. */
function head(v: VariantEstimate, oneLookup: boolean): string[] {
  const lines = [
    v.factorisation,
    v.grouping === '-' ? '' : v.grouping,
    v.shift === 'none' ? 'no shift' : `${v.shift} shift`,
  ];
  return oneLookup ? lines : [...lines, `${v.lookup} look-up`];
}

/** Breaks the columns into blocks that fit the line, each with its own labels. */
function blocks(all: readonly Column[], rows: readonly CompareRow[], lineWidth: number): string[][] {
  const labelWidth = Math.max(...rows.map(({ label }) => width(label)));
  const room = Math.max(LEAST_LINE, lineWidth) - labelWidth;
  const result: string[][] = [];
  let block: Column[] = [];
  let used = 0;
  for (const column of all) {
    const needed = GAP.length + columnWidth(column, rows);
    if (block.length > 0 && used + needed > room) {
      result.push(render(block, rows, labelWidth));
      block = [];
      used = 0;
    }
    block.push(column);
    used += needed;
  }
  if (block.length > 0) result.push(render(block, rows, labelWidth));
  return result;
}

function cellWidth({ variants, head }: Column, rows: readonly CompareRow[]): number {
  const widest = Math.max(LEAST_CELL, ...variants.flatMap((v) => rows.map((row) => width(row.text(v)))));
  return variants.length === 2 ? widest : Math.max(widest, ...head.map(width));
}

function columnWidth(column: Column, rows: readonly CompareRow[]): number {
  const cell = cellWidth(column, rows);
  return column.variants.length === 2 ? 2 * cell + SEAM : cell;
}

function render(block: readonly Column[], rows: readonly CompareRow[], labelWidth: number): string[] {
  const widths = block.map((column) => columnWidth(column, rows));
  const line = (label: string, cells: readonly string[]): string =>
    [padEnd(label, labelWidth), ...cells.map((cell, c) => padEnd(cell, widths[c]!))].join(GAP).trimEnd();
  const lines = block[0]!.head.map((_, h) =>
    line(
      '',
      block.map((column, c) => align(column, column.head[h]!, widths[c]!)),
    ),
  );
  lines.push(
    line(
      '',
      block.map((column) => spinHead(column, cellWidth(column, rows))),
    ),
  );
  lines.push(
    line(
      '─'.repeat(labelWidth),
      widths.map((w) => '─'.repeat(w)),
    ),
  );
  for (const row of rows) {
    lines.push(
      line(
        row.label,
        block.map((column) => cells(column, row, cellWidth(column, rows))),
      ),
    );
  }
  return lines;
}

const align = ({ variants }: Column, text: string, columns: number): string =>
  variants.length === 2 ? centred(text, columns) : padStart(text, columns);

function spinHead({ variants }: Column, cell: number): string {
  return variants
    .map((v) => padStart(v.spinInSelect === 'index' ? 'index' : 'swap layers', cell))
    .join(' '.repeat(SEAM));
}

/** Equal on both sides: written once in the middle. Different: left, change in percent, right. */
function cells({ variants }: Column, row: CompareRow, cell: number): string {
  const [left, right] = variants;
  if (!right) return padStart(row.text(left), cell);
  const [a, b] = [row.text(left), row.text(right)];
  const same = row.number ? row.number(left) === row.number(right) : a === b;
  if (same) return centred(a, 2 * cell + SEAM);
  const change = row.number ? formatChange(row.number(left), row.number(right)) : '';
  return padStart(a, cell) + centred(change === '–' ? '' : change, SEAM) + padStart(b, cell);
}

function centred(text: string, columns: number): string {
  const free = Math.max(0, columns - width(text));
  return padEnd(' '.repeat(Math.floor(free / 2)) + text, columns);
}

function recommendation({ recommendation: { variant, reasons } }: Comparison, columns: number): string[] {
  return [
    variant === null ? 'Recommended: none' : `Recommended: ${variant}`,
    ...reasons.flatMap((reason) => bullet(reason, columns)),
  ];
}

const bullet = (text: string, columns: number): string[] =>
  wrap(`- ${text}`, Math.max(LEAST_LINE, columns), '  ');
