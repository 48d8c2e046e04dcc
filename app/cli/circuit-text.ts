import { STEP_PARTS } from '../../core/circuit';
import type { CircuitCount, CircuitText } from '../../core/plan';
import { formatExactCount, formatShare } from '../../core/units';
import { PART_LABELS } from './compare-rows';
import { textTable } from './text-table';

/** One walk step as it was counted. */
export function circuitCountText({ variant, bits, step, wires }: CircuitCount): string {
  const row = (name: string, count: number): string[] => [
    name,
    formatExactCount(count),
    step.toffoli > 0 ? formatShare(count / step.toffoli) : '',
  ];
  return `${[
    `${variant}, ${bits.keep} bits of keep values, ${bits.rotation} bits of angles. Counted gate by gate.`,
    '',
    ...textTable(
      [
        { head: '', align: 'left' },
        { head: 'one walk step', align: 'right' },
        { head: 'share', align: 'right' },
      ],
      [
        row('Toffoli', step.toffoli),
        ...STEP_PARTS.filter((part) => step.parts[part] > 0).map((part) =>
          row(`  ${PART_LABELS[part]}`, step.parts[part]),
        ),
        ['T gates', formatExactCount(step.t), ''],
        ['qubits', formatExactCount(wires), ''],
      ],
    ),
  ].join('\n')}\n`;
}

/** What was written. */
export function circuitText(
  { variant, part, language, wires, registers, lines }: CircuitText,
  path: string,
): string {
  return `${[
    `Wrote ${path}: ${variant}, ${part}, ${language}, ${formatExactCount(lines)} lines, ${formatExactCount(wires)} qubits.`,
    '',
    ...textTable(
      [
        { head: 'register', align: 'left' },
        { head: 'qubits', align: 'right' },
      ],
      registers.map(({ name, qubits }) => [name, formatExactCount(qubits)]),
    ),
  ].join('\n')}\n`;
}
