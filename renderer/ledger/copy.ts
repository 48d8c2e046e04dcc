import type { Column } from './columns';
import { columnTitle, sideWord } from './columns';
import type { Row, View } from './rows';

export const COPY_FORMATS = ['csv', 'markdown', 'latex'] as const;
export type CopyFormat = (typeof COPY_FORMATS)[number];

export const FORMAT_WORDS: Readonly<Record<CopyFormat, { name: string; extension: string }>> = {
  csv: { name: 'CSV', extension: 'csv' },
  markdown: { name: 'Markdown', extension: 'md' },
  latex: { name: 'LaTeX', extension: 'tex' },
};

export class StaleTable extends Error {
  override readonly name = 'StaleTable';
}

const REMARK = 'Planning estimate';

/** Head and rows of the table as text cells, numbers in full precision. */
function cellsOf(columns: readonly Column[], rows: readonly Row[], view: View, asked: string): string[][] {
  const sides = columns.flatMap((c) => c.sides.map((entry) => ({ entry, note: c.note })));
  const stale = sides.find(({ entry }) => entry.stale !== null);
  if (stale) throw new StaleTable(`${stale.entry.name} is ${stale.entry.stale}: reckon before copying`);
  const head = [
    `${REMARK}, ${asked}`,
    ...sides.map(({ entry, note }) => `${columnTitle(entry.name)}, ${note}, ${sideWord(entry.name)}`),
  ];
  const lines = rows.map((row) => {
    const unit = row.copyUnit ?? row.unit?.(view) ?? '';
    return [
      unit ? `${row.label} (${unit})` : row.label,
      ...sides.map(({ entry: { estimate } }) =>
        estimate ? (row.copied ?? plainValue(row))(estimate, view) : '',
      ),
    ];
  });
  return [head, ...lines];
}

const plainValue =
  (row: Row): NonNullable<Row['copied']> =>
  (e, view) => {
    const value = row.value(e, view);
    return value === null ? '' : String(value);
  };

const csvCell = (text: string) => (/[",\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

const LATEX: Readonly<Record<string, string>> = {
  '\\': '\\textbackslash{}',
  '{': '\\{',
  '}': '\\}',
  '&': '\\&',
  '%': '\\%',
  $: '\\$',
  '#': '\\#',
  _: '\\_',
  '^': '\\textasciicircum{}',
  '~': '\\textasciitilde{}',
  λ: '$\\lambda$',
  '⁻': '$^{-}$',
  '¹': '$^{1}$',
};

function latexCell(text: string): string {
  return text
    .replaceAll('⁻¹', '$^{-1}$')
    .split('$')
    .map((piece, at) => (at % 2 ? `$${piece}$` : escapeLatex(piece)))
    .join('');
}
const escapeLatex = (text: string) => [...text].map((c) => LATEX[c] ?? c).join('');

/**
 * The shown table as text: point as decimal sign, no grouping, full precision.
 *
 * @throws StaleTable where a figure no longer answers the present question.
 */
export function tableText(
  format: CopyFormat,
  columns: readonly Column[],
  rows: readonly Row[],
  view: View,
  asked: string,
): string {
  const cells = cellsOf(columns, rows, view, asked);
  if (format === 'csv') return `${cells.map((line) => line.map(csvCell).join(',')).join('\r\n')}\r\n`;
  const [head, ...lines] = cells as [string[], ...string[][]];
  if (format === 'markdown') {
    const line = (each: string[]) => `| ${each.map((c) => c.replaceAll('|', '\\|')).join(' | ')} |`;
    const bar = `| --- |${' ---: |'.repeat(head.length - 1)}`;
    return `${[line(head), bar, ...lines.map(line)].join('\n')}\n`;
  }
  const line = (each: string[]) => `  ${each.map(latexCell).join(' & ')} \\\\`;
  return [
    `\\begin{tabular}{l${'r'.repeat(head.length - 1)}}`,
    '  \\hline',
    line(head),
    '  \\hline',
    ...lines.map(line),
    '  \\hline',
    '\\end{tabular}',
    '',
  ].join('\n');
}
