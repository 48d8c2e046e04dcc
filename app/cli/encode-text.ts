import type { TablesDocument } from '../../core/plan';
import { formatExactCount, formatSignificant } from '../../core/units';
import { textTable } from './text-table';

/** What was written, and what rounding and truncation do to the energy. */
export function encodeText(tables: TablesDocument, path: string): string {
  const { variant, bits, sizes, arrays, lambda, rounding, residual, window } = tables;
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
    `Wrote ${path}: ${variant}, ${formatExactCount(sizes.items)} items, ${formatExactCount(sizes.rows)} rows, ${bits.keep} bits of keep values, ${bits.rotation} of angles.`,
    `tables.json says how to read the ${arrays.length} arrays. lambda ${formatSignificant(lambda.total, 6)} Eh.`,
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
