import type { TablesCheck, TablesDocument } from '../../core/plan';
import { formatExactCount, formatSignificant } from '../../core/units';
import { textTable } from './text-table';
import { checkLines } from './verify-text';

/** What was written, and what rounding and truncation do to the energy. */
export function encodeText(tables: TablesDocument, path: string): string {
  const { form, variant, arrays, lambda, rounding, residual, window } = tables;
  const energy = (x: number) => formatSignificant(x, 3);
  const rows: [string, number, string][] = [
    ['worst case', rounding.worstCase, 'rigorous, from sizes and lambda alone'],
    ['realised bound', rounding.realised, 'rigorous, from the rounded rows themselves'],
    ['realised, items independent', rounding.typical, 'expected size, no bound'],
    ['statistical estimate', rounding.estimate, 'expected size, from sizes and lambda alone'],
    ['truncation', residual.oneNormBound, 'rigorous, one-norm of what was dropped'],
  ];
  if (window) {
    const seen = `${window.states} lowest levels, ${window.electrons} electrons in orbitals ${window.orbitals.join(', ')}`;
    rows.push(
      ['largest shift of a level', window.largestShift, `exact: ${seen}`],
      ['largest shift of a gap', window.largestGapShift, 'exact, from the lowest level'],
      ['of that level shift, truncation', window.truncationShift, 'exact, before rounding'],
    );
  }
  return `${[
    `Wrote ${path}: ${variant}, tables of the ${form} form, ${contentsOf(tables)}, ${bitsOf(tables)}.`,
    `${arrays.length} arrays, ${sizeOf(tables)}; tables.json says how to read them. Read back, they are the rounded program number for number.`,
    `lambda ${formatSignificant(lambda.total, 6)} Eh.`,
    '',
    ...textTable(
      [
        { head: 'energy error', align: 'left' },
        { head: 'Eh', align: 'right' },
        { head: 'meaning', align: 'left' },
      ],
      rows.map(([name, value, meaning]) => [name, energy(value), meaning]),
    ),
  ].join('\n')}\n`;
}

/** What a folder of tables holds, and the checks. */
export function tablesText({ document, arrays, levels, checks }: TablesCheck, folder: string): string {
  const { form, variant, lambda, orbitals, electrons, terms } = document;
  const lines = [
    `${folder}: ${variant}, tables of the ${form} form, ${contentsOf(document)}, ${bitsOf(document)}.`,
    `${orbitals} orbitals, ${electrons} electrons, ${terms.join(' + ')}. lambda ${formatSignificant(lambda.total, 6)} Eh. All ${arrays} arrays are whole.`,
    '',
  ];
  if (levels) {
    lines.push(
      `Levels in Eh, ${levels.electrons} electrons in orbitals ${levels.orbitals.join(', ')}:`,
      ...textTable(
        [
          { head: 'level', align: 'right' },
          { head: 'files', align: 'right' },
          { head: 'tables deviate', align: 'right' },
        ],
        levels.files.map((exact, i) => [
          String(i + 1),
          exact.toFixed(10).replace('-', '\u2212'),
          formatSignificant(levels.tables[i]! - exact, 2),
        ]),
      ),
      '',
    );
  }
  lines.push(...checkLines(checks));
  return `${lines.join('\n')}\n`;
}

/** Sizes that a reader knows by name. */
const CONTENTS = [
  ['items', 'items'],
  ['rows', 'rows'],
  ['products', 'products of vectors'],
] as const;

const contentsOf = ({ sizes }: Pick<TablesDocument, 'sizes'>): string =>
  CONTENTS.flatMap(([name, word]) =>
    (sizes[name] ?? 0) === 0 ? [] : [`${formatExactCount(sizes[name]!)} ${word}`],
  ).join(', ');

function bitsOf({ bits, sizes }: Pick<TablesDocument, 'bits' | 'sizes'>): string {
  const { keep, rotation, phase } = bits;
  const words = [`${keep} bits of keep values`];
  if (rotation !== undefined) words.push(`${rotation} of angles`);
  if (phase !== undefined && rotation !== undefined && phase + 1 < rotation && sizes.phaseRows) {
    words.push(`${phase + 1} in light rows`);
  }
  return words.join(', ');
}

/** Of the numbers of all arrays. */
function sizeOf({ arrays }: TablesDocument): string {
  const bytes = arrays.reduce(
    (sum, { type, shape }) =>
      sum + Number(type.slice(2)) * shape.reduce((product, extent) => product * extent, 1),
    0,
  );
  return bytes < 1e6 ? `${formatSignificant(bytes / 1e3, 3)} kB` : `${formatSignificant(bytes / 1e6, 3)} MB`;
}
