import type { Evidence } from '../../core/plan';
import { formatExactCount, formatSignificant } from '../../core/units';
import { textTable } from './text-table';

/** Exact against encoded spectra and the checks, failed ones first. */
export function verifyText({ electrons, terms, spectrum, checks }: Evidence): string {
  const names = Object.keys(spectrum.variants);
  const levels = spectrum.exact.map((exact, i) => [
    String(i + 1),
    exact.toFixed(10).replace('-', '\u2212'),
    ...names.map((name) => formatSignificant(spectrum.variants[name]![i]! - exact, 2)),
  ]);
  const ordered = [...checks.filter(({ ok }) => !ok), ...checks.filter(({ ok }) => ok)];
  const failed = checks.filter(({ ok }) => !ok).length;
  const lines = [
    `${electrons} electrons, ${terms.join(' + ')}`,
    '',
    'Exact levels in Eh, and what each encoding deviates from them:',
    ...names.map((name, n) => `  [${n + 1}] ${name}`),
    ...textTable(
      [
        { head: 'level', align: 'right' },
        { head: 'exact', align: 'right' },
        ...names.map((_, n) => ({ head: `[${n + 1}]`, align: 'right' as const })),
      ],
      levels,
    ),
    '',
    ...textTable(
      [
        { head: 'check', align: 'left' },
        { head: 'found', align: 'right' },
        { head: 'expected', align: 'right' },
        { head: 'tolerance', align: 'right' },
        { head: 'rests on', align: 'left' },
      ],
      ordered.map(({ name, value, expected, tolerance, source, ok }) => [
        `${ok ? 'holds ' : 'FAILED'} ${name}`,
        formatSignificant(value, 3),
        formatSignificant(expected, 3),
        formatSignificant(tolerance, 2),
        source,
      ]),
    ),
    '',
    `${formatExactCount(checks.length - failed)} hold, ${formatExactCount(failed)} failed`,
  ];
  return `${lines.join('\n')}\n`;
}
