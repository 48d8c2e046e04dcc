import type { StepPart } from '../circuit/recipe';
import { formatChange, formatCount, formatExactCount, formatRatio, formatShare } from '../units';
import type { Comparison, VariantEstimate } from './comparison';

const PART_WORDS: Readonly<Record<StepPart, string>> = {
  prepare: 'state preparation',
  'select.lookup': 'table look-up',
  'select.rotations': 'rotations',
  'select.swaps': 'swap layers',
  'select.other': 'the rest of SELECT',
  reflections: 'reflections',
  control: 'control',
};

/**
 * The variant with the fewest Toffoli in one run among those within the qubit cap, with the reasons as sentences
 * computed from the figures. Variants share target and overlap, so one run orders them as the whole campaign does.
 */
export function recommend(
  variants: readonly VariantEstimate[],
  qubitsMax: number | null,
): Comparison['recommendation'] {
  const within = variants
    .filter((v) => qubitsMax === null || v.logicalQubits <= qubitsMax)
    .sort((a, b) => a.totalToffoli - b.totalToffoli || a.logicalQubits - b.logicalQubits);
  const best = within[0];
  if (!best) return { variant: null, reasons: noneFits(variants, qubitsMax) };
  const reasons = [
    `fewest Toffoli in one run: ${formatCount(best.totalToffoli)} = ${formatCount(best.walkSteps)} walk steps of ` +
      `${formatCount(best.step.toffoli)}, on ${formatCount(best.logicalQubits)} logical qubits`,
    ...againstRunnerUp(best, within),
    largestPart(best),
    ...swapLayers(best, variants),
    ...floor(best),
    ...overCap(variants, best, qubitsMax),
  ];
  return { variant: best.name, reasons };
}

function noneFits(variants: readonly VariantEstimate[], qubitsMax: number | null): string[] {
  if (variants.length === 0) return ['no variant was computed'];
  const least = variants.reduce((a, b) => (b.logicalQubits < a.logicalQubits ? b : a));
  return [
    `no variant fits in ${formatExactCount(qubitsMax ?? 0)} logical qubits; the smallest, ${least.name}, ` +
      `needs ${formatExactCount(least.logicalQubits)}`,
  ];
}

/** The next best that is not merely the same variant with its spin treated otherwise. */
function againstRunnerUp(best: VariantEstimate, ascending: readonly VariantEstimate[]): string[] {
  const other = ascending.find((v) => v !== best && !isPair(v, best));
  if (!other) return [];
  const share = best.totalToffoli / other.totalToffoli;
  const lambda = formatRatio(best.lambda.total / other.lambda.total);
  const step = formatRatio(best.step.toffoli / other.step.toffoli);
  return [
    `${formatShare(share)} of the Toffoli of the runner-up, ${other.name}: λ ${lambda} times, step ${step} times as large`,
  ];
}

function largestPart({ step }: VariantEstimate): string {
  const [part, toffoli] = (Object.entries(step.parts) as [StepPart, number][]).reduce((a, b) =>
    b[1] > a[1] ? b : a,
  );
  return `largest part of its step: ${PART_WORDS[part]}, ${formatShare(toffoli / step.toffoli)}`;
}

function isPair(a: VariantEstimate, b: VariantEstimate): boolean {
  return (
    a.factorisation === b.factorisation &&
    a.grouping === b.grouping &&
    a.shift === b.shift &&
    a.lookup === b.lookup &&
    a.spinInSelect !== b.spinInSelect
  );
}

/** What swap layers bring to the whole step, beside what they bring to the rotations. */
function swapLayers(best: VariantEstimate, variants: readonly VariantEstimate[]): string[] {
  const other = variants.find((v) => isPair(v, best));
  if (!other) return [];
  const [swap, index] = best.spinInSelect === 'swap-layers' ? [best, other] : [other, best];
  const rotations = formatCount(swap.step.parts['select.rotations'] - index.step.parts['select.rotations']);
  const layers = formatCount(swap.step.parts['select.swaps'] - index.step.parts['select.swaps']);
  const change = formatChange(index.step.toffoli, swap.step.toffoli);
  return [
    `swap layers change its whole step by ${change} against spin in the index: rotations ${rotations}, layers +${layers} Toffoli`,
  ];
}

function floor({ lambda, spectralFloor }: VariantEstimate): string[] {
  if (spectralFloor.kind !== 'exact' || !spectralFloor.value) return [];
  const sector = spectralFloor.sector === 'eta' ? 'the sector of its electrons' : 'all electron numbers';
  return [
    `its λ is ${formatRatio(lambda.total / spectralFloor.value)} times the least any block encoding of H in ${sector} can have`,
  ];
}

function overCap(
  variants: readonly VariantEstimate[],
  best: VariantEstimate,
  qubitsMax: number | null,
): string[] {
  const cheaperOver = variants.filter(
    (v) => qubitsMax !== null && v.logicalQubits > qubitsMax && v.totalToffoli < best.totalToffoli,
  );
  return cheaperOver.map(
    (v) =>
      `${v.name} would be cheaper (${formatCount(v.totalToffoli)}) but needs ${formatExactCount(v.logicalQubits)} ` +
      `logical qubits, above the cap of ${formatExactCount(qubitsMax!)}`,
  );
}
