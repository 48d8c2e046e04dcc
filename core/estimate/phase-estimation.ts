import { InputError } from '../job';
import type { Accuracy, Level } from './target';

/**
 * Walk steps ⌈πλ/(2ε)⌉ of one phase estimation whose energy has standard deviation ε, with the sine-window phase
 * register and forward/backward control of the walk: Babbush et al., Phys. Rev. X 8, 041015 (2018).
 *
 * @param lambda - λ in hartree, > 0.
 * @param deviation - ε in hartree, > 0.
 */
export function walkSteps(lambda: number, deviation: number): number {
  const steps = Math.ceil((Math.PI * lambda) / (2 * deviation));
  if (!Number.isFinite(steps) || steps < 0) {
    throw new InputError({
      code: 'target-out-of-range',
      where: 'target',
      found: `λ = ${lambda} Eh with a standard deviation of ${deviation} Eh`,
      expected: 'a finite λ and a positive target',
      mend: 'Give a target above zero, such as 5cm-1.',
    });
  }
  return Math.max(1, steps);
}

/**
 * Probability that the error of a sine-window register of many steps stays within `multiple` standard deviations:
 * ∫ (4/π²) cos²(πv/2)/(1 − v²)² dv over |v| ≤ multiple, v in standard deviations.
 */
export function sineWindowConfidence(multiple: number): number {
  const intervals = 64 * Math.ceil(multiple);
  const h = multiple / intervals;
  let sum = 0;
  for (let i = 0; i <= intervals; i++) {
    const weight = i === 0 || i === intervals ? 1 : i % 2 === 1 ? 4 : 2;
    sum += weight * sineWindowDensity(i * h);
  }
  return (2 * sum * h) / 3;
}

/** Density of the error v ≥ 0 in standard deviations; its removable pole at v = 1 has the value ¼. */
function sineWindowDensity(v: number): number {
  const gap = 1 - v;
  if (Math.abs(gap) < 1e-5) return 0.25;
  const ratio = Math.cos((Math.PI * v) / 2) / (gap * (1 + v));
  return (4 / (Math.PI * Math.PI)) * ratio * ratio;
}

/**
 * By what whole number the steps must be multiplied for the asked accuracy: 1 for a standard deviation, else the
 * least multiple of it within which the error stays with that probability (3 for 99 %). Above 99.9 % repeated runs
 * with their median are cheaper.
 */
export function confidenceFactor(accuracy: Accuracy): number {
  if (accuracy.kind === 'rms') return 1;
  const { probability } = accuracy;
  if (!(probability > 0 && probability < 1)) {
    throw new InputError({
      code: 'confidence-out-of-range',
      where: 'target accuracy',
      found: String(probability),
      expected: 'a probability between 0 and 1',
      mend: 'Give for instance 0.99, or ask for the standard deviation.',
    });
  }
  let multiple = 1;
  while (multiple < MOST_MULTIPLES && sineWindowConfidence(multiple) < probability) multiple += 1;
  return multiple;
}

/** The tail beyond m deviations falls as 1/m³: a thousand covers any probability a double can tell from 1 here. */
const MOST_MULTIPLES = 1000;

/** Mean number of runs until each level was read once: Σ 1/overlap. */
export function meanRuns(levels: readonly Level[]): number {
  return levels.reduce((sum, { label, overlap }) => sum + 1 / checkOverlap(label, overlap), 0);
}

/** Runs after which the wanted state was met at least once with probability `confidence`: ⌈ln(1 − P)/ln(1 − p)⌉. */
export function runsForConfidence(overlap: number, confidence: number): number {
  if (checkOverlap('start state', overlap) === 1) return 1;
  return Math.max(1, Math.ceil(Math.log1p(-confidence) / Math.log1p(-overlap)));
}

function checkOverlap(label: string, overlap: number): number {
  if (overlap > 0 && overlap <= 1) return overlap;
  throw new InputError({
    code: 'overlap-out-of-range',
    where: `overlap of ${label}`,
    found: String(overlap),
    expected: 'a squared overlap above 0 and at most 1',
    mend: 'Give the squared overlap of start state and wanted state, such as 0.8.',
  });
}
