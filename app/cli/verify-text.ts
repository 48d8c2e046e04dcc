import type { Check, Evidence } from '../../core/plan';
import { formatExactCount, formatSignificant } from '../../core/units';
import { textTable } from './text-table';

/** Exact against encoded spectra and the checks, failed ones first. */
export function verifyText({ electrons, terms, spectrum, truncation, checks }: Evidence): string {
  const names = Object.keys(spectrum.variants);
  const levels = spectrum.exact.map((exact, i) => [
    String(i + 1),
    exact.toFixed(10).replace('-', '\u2212'),
    ...names.map((name) => formatSignificant(spectrum.variants[name]![i]! - exact, 2)),
  ]);
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
    ...truncationText(truncation),
    ...checkLines(checks),
  ];
  return `${lines.join('\n')}\n`;
}

/** Checks, failed ones first, and how many hold. */
export function checkLines(checks: readonly Check[]): string[] {
  const ordered = [...checks.filter(({ ok }) => !ok), ...checks.filter(({ ok }) => ok)];
  const failed = checks.filter(({ ok }) => !ok).length;
  return [
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
}

/** What was dropped means for the energy: three views side by side. */
function truncationText(truncation: Evidence['truncation']): string[] {
  const found = Object.entries(truncation);
  if (found.length === 0) return [];
  const energy = (x: number) => formatSignificant(x, 2);
  const row = (name: string, meaning: string, of: (view: Evidence['truncation'][string]) => number) => [
    name,
    ...found.map(([, view]) => energy(of(view))),
    meaning,
  ];
  return [
    'What truncation changes, in Eh:',
    ...found.map(([name], n) => `  [${n + 1}] ${name}`),
    ...textTable(
      [
        { head: 'view', align: 'left' },
        ...found.map((_, n) => ({ head: `[${n + 1}]`, align: 'right' as const })),
        { head: 'meaning', align: 'left' },
      ],
      [
        row('one-norm', 'rigorous: no level moves by more', (view) => view.oneNormBound),
        row('first order', 'reference determinant and what is degenerate with it', (view) => view.firstOrder),
        row('second order', 'what its excitations add; an estimate', (view) => view.secondOrder),
        row('mean shift', 'random determinants: a shift that all levels share', (view) => view.random.mean),
        row(
          'spread',
          'random determinants: how differently levels are shifted',
          (view) => view.random.spread,
        ),
        row(
          'coupling',
          'random double excitations: root mean square of what mixes them',
          (view) => view.random.doubles,
        ),
      ],
    ),
    '',
  ];
}
