import type { VariantEstimate } from '../../core/plan/comparison';
import { type EnergyUnit, fromHartree } from '../../core/units';
import * as figures from '../figures/figures';

/** What the rows need to know beside the estimate. */
export interface View {
  readonly target: { readonly value: number; readonly unit: EnergyUnit };
  /** Largest number of logical qubits, or null. */
  readonly cap: number | null;
  /** Unit all durations of the sheet are printed in. */
  readonly time: figures.TimeUnit;
}

export interface Row {
  readonly id: RowId;
  readonly label: string;
  /** Unit in the row head, where it is the same along the row. */
  readonly unit?: (view: View) => string;
  /** Null: not applicable to this variant. */
  readonly figure: (e: VariantEstimate, view: View) => string | null;
  /** The full number behind the figure, for ordering, comparing and copying. */
  readonly value: (e: VariantEstimate, view: View) => number | null;
  /** Unit of `value` where it is not the row head's, for copying. */
  readonly copyUnit?: string;
  /** What is copied where the figure is more than one number. */
  readonly copied?: (e: VariantEstimate, view: View) => string;
  /** The figures that decide the choice stand in bold. */
  readonly key?: boolean;
  /** A stronger rule above the row. */
  readonly opens?: boolean;
  /** Marks a figure that needs a word: `*` another floor, `▲` over the cap. */
  readonly mark?: (e: VariantEstimate, view: View) => { sign: string; words: string } | null;
}

export type RowId =
  | 'lambda'
  | 'floor'
  | 'rows'
  | 'bits'
  | 'residual'
  | 'step'
  | 't'
  | 'walk'
  | 'run'
  | 'qubits'
  | 'time'
  | 'runs'
  | 'campaign'
  | 'physical'
  | 'distance';

/**
 * λ over the least λ any block encoding of the same operator can have, and whether that is a bound only because the
 * floor itself is known from below; null where the floor is 0 or unknown.
 */
export function overFloor(e: VariantEstimate): { readonly ratio: number; readonly bound: boolean } | null {
  const { value, low } = e.spectralFloor;
  const floor = value ?? low;
  return floor ? { ratio: e.lambda.total / floor, bound: value === null } : null;
}

export const ROWS: readonly Row[] = [
  {
    id: 'lambda',
    label: 'λ, all parts',
    unit: () => 'Eh',
    opens: true,
    figure: (e) => figures.normUnderHead(e.lambda.total),
    value: (e) => e.lambda.total,
  },
  {
    id: 'floor',
    label: 'λ over its floor',
    figure: (e) => {
      const over = overFloor(e);
      return over && `${over.bound ? '≤ ' : ''}${figures.formatRatio(over.ratio)}`;
    },
    value: (e) => overFloor(e)?.ratio ?? null,
    mark: (e) =>
      e.spectralFloor.sector === 'all' && overFloor(e)
        ? { sign: '*', words: 'against the floor of all electron numbers' }
        : null,
  },
  {
    id: 'rows',
    label: 'Factors / table rows',
    figure: (e) =>
      e.factorisation === 'sparse'
        ? figures.formatCount(e.rows)
        : `${figures.formatCount(e.factors)} / ${figures.formatCount(e.rows)}`,
    value: (e) => e.rows,
    copied: (e) => (e.factorisation === 'sparse' ? `${e.rows}` : `${e.factors} / ${e.rows}`),
  },
  {
    id: 'bits',
    label: 'Weight / angle bits',
    figure: (e) => (e.factorisation === 'sparse' ? `${e.bits.keep}` : `${e.bits.keep} / ${e.bits.rotation}`),
    // One number for both, so that the two sides of a pair can be compared.
    value: (e) => e.bits.keep * 100 + e.bits.rotation,
    copied: (e) => (e.factorisation === 'sparse' ? `${e.bits.keep}` : `${e.bits.keep} / ${e.bits.rotation}`),
  },
  {
    id: 'residual',
    label: 'Left out, bound',
    unit: (view) => figures.UNIT_WORDS[view.target.unit],
    figure: (e, view) => figures.energyUnderHead(e.residual.oneNormBound, view.target),
    value: (e, view) => fromHartree(e.residual.oneNormBound, view.target.unit),
  },
  {
    id: 'step',
    label: 'Toffoli a step',
    key: true,
    figure: (e) => figures.formatCount(e.step.toffoli),
    value: (e) => e.step.toffoli,
  },
  { id: 't', label: 'T gates a step', figure: (e) => figures.formatCount(e.step.t), value: (e) => e.step.t },
  {
    id: 'walk',
    label: 'Walk steps',
    opens: true,
    figure: (e) => figures.formatCount(e.walkSteps),
    value: (e) => e.walkSteps,
  },
  {
    id: 'run',
    label: 'Toffoli, one run',
    key: true,
    figure: (e) => figures.formatCount(e.totalToffoli),
    value: (e) => e.totalToffoli,
  },
  {
    id: 'qubits',
    label: 'Logical qubits',
    figure: (e) => figures.formatCount(e.logicalQubits),
    value: (e) => e.logicalQubits,
    mark: (e, { cap }) =>
      cap !== null && e.logicalQubits > cap
        ? { sign: '▲', words: `over the cap of ${figures.formatCount(cap)}` }
        : null,
  },
  {
    id: 'time',
    label: 'Time, one run',
    unit: (view) => view.time,
    figure: (e, view) => (e.physical ? figures.timeUnderHead(e.physical.hours, view.time) : null),
    value: (e) => e.physical?.hours ?? null,
    copyUnit: 'h',
  },
  {
    id: 'runs',
    label: 'Runs expected',
    opens: true,
    figure: (e) => figures.formatSignificant(e.repetitions, 3),
    value: (e) => e.repetitions,
  },
  {
    id: 'campaign',
    label: 'Toffoli, whole campaign',
    figure: (e) => figures.formatCount(e.campaignToffoli),
    value: (e) => e.campaignToffoli,
  },
  {
    id: 'physical',
    label: 'Physical qubits',
    figure: (e) => (e.physical ? figures.formatCount(e.physical.qubits) : null),
    value: (e) => e.physical?.qubits ?? null,
  },
  {
    id: 'distance',
    label: 'Code distance',
    figure: (e) => (e.physical ? figures.formatCount(e.physical.distance) : null),
    value: (e) => e.physical?.distance ?? null,
  },
];

/** Shown without asking; the rest is under Columns. */
export const FIRST_ROWS: readonly RowId[] = ROWS.slice(0, 11).map((r) => r.id);
/** Of these, the two that go first where the window is low. */
export const TALL_ROWS: readonly RowId[] = ['bits', 't'];

export const rowById = (id: RowId): Row => ROWS.find((r) => r.id === id)!;
