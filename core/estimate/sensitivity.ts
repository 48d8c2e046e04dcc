import { type CostEstimate, type EstimateInput, estimateVariant } from './variant';

/** A point of cost against target. A change of `bits` from one point to the next is a kink in the curve. */
export interface TargetPoint {
  /** Target in hartree. */
  readonly hartree: number;
  readonly bits: CostEstimate['bits'];
  readonly stepToffoli: number;
  readonly totalToffoli: number;
  readonly campaignToffoli: number;
  readonly logicalQubits: number;
}

/** Costs over other targets, everything else as in `input`. */
export function costOverTargets(input: EstimateInput, hartrees: readonly number[]): TargetPoint[] {
  return hartrees.map((hartree) => {
    const cost = estimateVariant({ ...input, target: { ...input.target, hartree } });
    const { bits, totalToffoli, campaignToffoli, logicalQubits } = cost;
    return { hartree, bits, stepToffoli: cost.step.toffoli, totalToffoli, campaignToffoli, logicalQubits };
  });
}

/** A point of Toffoli against qubits. */
export interface FrontPoint {
  /** What led there: the block size of the largest table. */
  readonly lookupBlock: number;
  readonly stepToffoli: number;
  readonly totalToffoli: number;
  readonly logicalQubits: number;
  readonly overCap: boolean;
  /** True where no other block size has both fewer Toffoli and no more qubits. */
  readonly efficient: boolean;
}

/** Block sizes of the front: 1 to 2^12 covers every table with up to 10^7 rows and words above 100 bits. */
const FRONT_BLOCKS = Array.from({ length: 13 }, (_, j) => 2 ** j);

/** Toffoli against logical qubits for every block size of the largest table. Plain look-up has one point only. */
export function blockFront(input: EstimateInput): FrontPoint[] {
  const blocks = input.variant.lookup === 'plain' ? [1] : FRONT_BLOCKS;
  const points = blocks.map((lookupBlock) => {
    const cost = estimateVariant({ ...input, options: { ...input.options, lookupBlock } });
    const { totalToffoli, logicalQubits, overCap } = cost;
    return { lookupBlock, stepToffoli: cost.step.toffoli, totalToffoli, logicalQubits, overCap };
  });
  return points.map((point) => ({
    ...point,
    efficient: !points.some(
      (other) => other.stepToffoli < point.stepToffoli && other.logicalQubits <= point.logicalQubits,
    ),
  }));
}

/** Costs under other caps on the logical qubits, everything else as in `input`. */
export function costOverCaps(
  input: EstimateInput,
  caps: readonly number[],
): {
  readonly qubitsMax: number;
  readonly totalToffoli: number;
  readonly logicalQubits: number;
  readonly overCap: boolean;
}[] {
  return caps.map((qubitsMax) => {
    const { totalToffoli, logicalQubits, overCap } = estimateVariant({
      ...input,
      options: { ...input.options, qubitsMax },
    });
    return { qubitsMax, totalToffoli, logicalQubits, overCap };
  });
}
