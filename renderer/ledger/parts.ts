import type { StepPart } from '../../core/circuit/recipe';
import type { VariantEstimate } from '../../core/plan/comparison';

/** Series of the step chart from the base up; the small parts share the last one, which says so. */
export const SERIES = [
  { id: 'lookup', word: 'look-up', colour: '--lookup', parts: ['select.lookup'] },
  { id: 'prepare', word: 'prepare', colour: '--prepare', parts: ['prepare'] },
  { id: 'rotations', word: 'rotations', colour: '--rotations', parts: ['select.rotations'] },
  { id: 'swaps', word: 'swap layers', colour: '--swaps', parts: ['select.swaps'] },
  {
    id: 'reflections',
    word: 'reflections, rest',
    colour: '--reflections',
    parts: ['reflections', 'select.other', 'control'],
  },
] as const satisfies readonly { id: string; word: string; colour: string; parts: readonly StepPart[] }[];

export type Series = (typeof SERIES)[number];

/** Toffoli of one series in one step; the five sum to the step. */
export function seriesToffoli(e: VariantEstimate, series: Series): number {
  return series.parts.reduce((sum, part) => sum + (e.step.parts[part] ?? 0), 0);
}

/** Names and colours of the λ parts, in the order they are drawn. */
export const LAMBDA_PARTS: Readonly<Record<string, { word: string; colour: string }>> = {
  coulomb: { word: 'Coulomb', colour: '--lcoul' },
  'one-body': { word: 'One-electron', colour: '--lone' },
  'one-body.charge': { word: 'One-electron, charge', colour: '--lone' },
  'one-body.spin': { word: 'One-electron, spin', colour: '--lnuc' },
  'two-body.even': { word: 'Two-electron, even', colour: '--lcoul' },
  'two-body.odd': { word: 'Two-electron, odd', colour: '--lother' },
  'same-orbit': { word: 'Same-orbit', colour: '--lsame' },
  'other-orbit': { word: 'Other-orbit', colour: '--lother' },
  'spin-spin': { word: 'Spin–spin', colour: '--lss' },
};

/** λ by part, known parts first in their fixed order; parts of exactly 0 are left out. */
export function lambdaParts(
  e: VariantEstimate,
): { id: string; word: string; colour: string; hartree: number }[] {
  const order = Object.keys(LAMBDA_PARTS);
  const rank = (id: string) => (order.includes(id) ? order.indexOf(id) : order.length);
  return Object.entries(e.lambda.parts)
    .filter(([, value]) => value > 0)
    .sort(([a], [b]) => rank(a) - rank(b))
    .map(([id, hartree]) => ({ id, hartree, ...(LAMBDA_PARTS[id] ?? { word: id, colour: '--lone' }) }));
}
