import { STEP_PARTS } from '../../core/circuit';
import type { WhatIfResult } from '../../core/estimate';
import { formatCount, formatDuration, formatExactCount } from '../../core/units';
import { PART_LABELS } from './compare-rows';
import { textTable, wrap } from './text-table';

/** Costs from published numbers, beside the published totals where these very sizes were published. */
export function whatIfText(result: WhatIfResult, columns: number): string {
  const { parameters, step, published, difference, physical } = result;
  const rows: [string, string, string][] = [
    [
      'Toffoli a step',
      formatExactCount(step.toffoli),
      published ? formatExactCount(published.stepToffoli) : '',
    ],
    ...STEP_PARTS.filter((part) => step.parts[part] > 0).map((part): [string, string, string] => [
      `  ${PART_LABELS[part]}`,
      formatExactCount(step.parts[part]),
      '',
    ]),
    ['walk steps', formatExactCount(result.walkSteps), ''],
    [
      'Toffoli, one run',
      formatExactCount(result.totalToffoli),
      published ? formatExactCount(published.totalToffoli) : '',
    ],
    [
      'logical qubits',
      formatExactCount(result.logicalQubits),
      published ? formatExactCount(published.logicalQubits) : '',
    ],
  ];
  if (physical) {
    rows.push(['physical qubits', formatCount(physical.qubits), '']);
    rows.push(['time of one run', formatDuration(physical.hours * 3600), '']);
  }
  const lines = [
    `${parameters.method}, ${parameters.spinOrbitals} spin orbitals, λ ${parameters.lambda} Eh. ` +
      'Planning estimate.',
    '',
    ...textTable(
      [
        { head: '', align: 'left' },
        { head: 'reckoned', align: 'right' },
        { head: published ? 'published' : '', align: 'right' },
      ],
      rows,
    ),
  ];
  if (difference) {
    const because = [...difference.stepToffoli.because, ...difference.logicalQubits.because];
    lines.push('', 'Where reckoned and published differ (reckoned − published):');
    for (const { what, amount, basis } of because) {
      const sign = amount < 0 ? '' : '+';
      lines.push(...wrap(`- ${sign}${formatExactCount(amount)}: ${what} (${basis})`, columns, '  '));
    }
  }
  return `${lines.join('\n')}\n`;
}
