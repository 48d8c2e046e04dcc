import { plainLine } from '../../core/job';
import type { Inspection } from '../../core/plan';
import { formatExactCount, formatOneNorm, formatSignificant } from '../../core/units';
import { textTable, wrap } from './text-table';

/** What the files hold, for a terminal of `columns` columns. */
export function inspectText(inspection: Inspection, columns: number): string {
  const { title, kind, orbitals, electrons, constant, terms, files, findings } = inspection;
  const bytes = files.reduce((sum, file) => sum + file.bytes, 0);
  const space = kind === 'spatial' ? `${orbitals} spatial orbitals` : `${2 * orbitals} complex spinors`;
  const lines = [
    ...(title ? [plainLine(title)] : []),
    `${space}, ${electrons} electrons, constant ${formatSignificant(constant, 12)} Eh; ` +
      `${files.length} ${files.length === 1 ? 'file' : 'files'}, ${formatExactCount(bytes)} bytes`,
    '',
    ...textTable(
      [
        { head: 'term', align: 'left' },
        { head: 'one-norm', align: 'right' },
        { head: 'largest integral, Eh', align: 'right' },
      ],
      terms.map(({ name, oneNorm, maxAbs }) => [name, formatOneNorm(oneNorm), formatSignificant(maxAbs, 4)]),
    ),
    '',
    findings.length === 0 ? 'Nothing to note.' : 'Findings',
    ...findings.flatMap(({ severity, where, found, expected, mend }) =>
      wrap(plainLine(`- ${severity}: ${where}: ${found}; expected ${expected}. ${mend}`), columns, '  '),
    ),
  ];
  return `${lines.join('\n')}\n`;
}
