import type { TablesDocument } from '../../core/plan';
import { formatExactCount, formatSignificant } from '../../core/units';
import { textTable } from './text-table';

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

/** Sizes that a reader knows by name. */
const CONTENTS = [
  ['items', 'items'],
  ['rows', 'rows'],
  ['products', 'products of vectors'],
] as const;

const contentsOf = ({ sizes }: TablesDocument): string =>
  CONTENTS.flatMap(([name, word]) =>
    (sizes[name] ?? 0) === 0 ? [] : [`${formatExactCount(sizes[name]!)} ${word}`],
  ).join(', ');

function bitsOf({ bits, sizes }: TablesDocument): string {
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
