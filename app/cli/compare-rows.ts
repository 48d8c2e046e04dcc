import { STEP_PARTS, type StepPart } from '../../core/circuit';
import type { Comparison, VariantEstimate } from '../../core/plan';
import {
  type EnergyUnit,
  formatCount,
  formatDuration,
  formatRatio,
  formatSignificant,
  fromHartree,
  NOT_APPLICABLE,
} from '../../core/units';

/** One row of the comparison: how a figure is written, and the number by which two columns compare. */
export interface CompareRow {
  readonly label: string;
  readonly text: (v: VariantEstimate) => string;
  /** Absent where a change in percent says nothing. */
  readonly number?: (v: VariantEstimate) => number;
}

export const PART_LABELS: Readonly<Record<StepPart, string>> = {
  prepare: 'prepare',
  'select.lookup': 'table look-up',
  'select.rotations': 'rotations',
  'select.swaps': 'swap layers',
  'select.other': 'rest of SELECT',
  reflections: 'reflections',
  control: 'control',
};

const UNIT_TEXT: Readonly<Partial<Record<EnergyUnit, string>>> = { hartree: 'Eh', 'cm-1': 'cm⁻¹' };

/** The unit as people write it. */
export const unitText = (unit: EnergyUnit): string => UNIT_TEXT[unit] ?? unit;

/** The rows in the order of the table, without those that are empty in every column. */
export function compareRows({ target, variants }: Comparison): CompareRow[] {
  const unit = unitText(target.unit);
  const energy = (hartree: number): string => {
    const value = fromHartree(hartree, target.unit);
    return value > 0 && value < 0.001 ? '< 0.001' : formatSignificant(value, 3);
  };
  const used = (part: StepPart): boolean => variants.some((v) => v.step.parts[part] !== 0);
  const rows: CompareRow[] = [
    counted(
      'λ, Eh',
      (v) => v.lambda.total,
      (x) => formatSignificant(x, 4),
    ),
    { label: 'λ over its floor', text: floorRatio },
    counted('factors', (v) => v.factors),
    counted('table rows', (v) => v.rows),
    { label: `left out at most, ${unit}`, text: (v) => energy(v.residual.oneNormBound) },
    { label: 'bits, keep / angle', text: (v) => `${v.bits.keep} / ${v.bits.rotation}` },
    counted('Toffoli a step', (v) => v.step.toffoli),
    ...STEP_PARTS.filter(used).map((part) => counted(`  ${PART_LABELS[part]}`, (v) => v.step.parts[part])),
    counted('T gates a step', (v) => v.step.t),
    counted('logical qubits', (v) => v.logicalQubits),
    counted('walk steps', (v) => v.walkSteps),
    counted('Toffoli, one run', (v) => v.totalToffoli),
    counted(
      'runs expected',
      (v) => v.repetitions,
      (x) => formatSignificant(x, 3),
    ),
    counted('Toffoli, campaign', (v) => v.campaignToffoli),
  ];
  if (variants.some((v) => v.physical)) {
    rows.push(
      {
        label: 'physical qubits',
        text: (v) => (v.physical ? formatCount(v.physical.qubits) : NOT_APPLICABLE),
      },
      {
        label: 'time of one run',
        text: (v) => (v.physical ? formatDuration(v.physical.hours * 3600) : NOT_APPLICABLE),
      },
    );
  }
  return rows;
}

function counted(
  label: string,
  number: (v: VariantEstimate) => number,
  format: (value: number) => string = formatCount,
): CompareRow {
  return { label, number, text: (v) => format(number(v)) };
}

/** `*`: the floor of all electron numbers; `≤` where only a lower bound of the floor is known. */
function floorRatio({ lambda, spectralFloor: { value, low, sector } }: VariantEstimate): string {
  const mark = sector === 'all' ? '*' : '';
  if (value !== null) return value === 0 ? NOT_APPLICABLE : formatRatio(lambda.total / value) + mark;
  return low ? `≤ ${formatRatio(lambda.total / low)}${mark}` : NOT_APPLICABLE;
}
