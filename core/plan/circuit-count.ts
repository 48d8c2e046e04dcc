import {
  bitsFor,
  type GateCount,
  GateCounter,
  Machine,
  STEP_PARTS,
  type StepPart,
  tripletStep,
  tripletTables,
  walkStep,
  walkWires,
} from '../circuit';
import { type Encoding, formatVariant, type VariantName } from '../encode';
import { InputError, type JobContext } from '../job';
import type { VariantEstimate } from './comparison';

/** What `circuit --count-only --json` prints: one walk step, counted gate by gate as it is emitted. */
export interface CircuitCount {
  readonly schema: 'spinwright-circuit/1';
  readonly variant: string;
  readonly bits: { readonly keep: number; readonly rotation: number };
  readonly step: {
    readonly toffoli: number;
    readonly t: number;
    readonly parts: Readonly<Record<StepPart, number>>;
  };
  /** Most wires alive at once, the phase register included. */
  readonly wires: number;
  /** Every subroutine with its own gates. */
  readonly tree: GateCount;
}

/** Toffoli that the phase register costs a step beside the control of the reflection: its unfolding into steps. */
const COUNTER_STEP = 1;

/**
 * Emits the walk step that an estimate stands for, with the same bits and blocks, into a counter. Nothing is
 * stored: a step of ten million gates streams by.
 *
 * @throws InputError `no-circuit` for encodings whose circuit is not emitted.
 */
export async function countWalkStep(
  encoding: Encoding,
  variant: VariantName,
  estimate: Pick<VariantEstimate, 'bits' | 'walkSteps'>,
  qubitsMax: number | null,
  context: JobContext,
): Promise<CircuitCount> {
  const { items } = encoding.shape;
  if (!encoding.program || !items || variant.lookup === 'dirty') {
    throw new InputError({
      code: 'no-circuit',
      where: `variant "${formatVariant(variant)}"`,
      found: 'an encoding without an emitted circuit',
      expected: 'triplet factors with clean or plain look-ups',
      mend: 'Choose such a variant, e.g. triplet/separate/swap-layers/median/clean.',
    });
  }
  context.report('rounding the tables', 0, null);
  await context.checkpoint();
  const phaseBits = bitsFor(estimate.walkSteps + 1);
  const { keep, rotation } = estimate.bits;
  const { blocks } = tripletStep(
    items,
    variant.spin,
    { keepBits: keep, rotationBits: rotation, phaseBits },
    { mode: variant.lookup, block: 'auto', qubitCap: qubitsMax },
  );
  const tables = tripletTables(encoding.program(), { keep, innerKeep: keep, rotation });
  context.report('emitting the walk step', 0, null);
  await context.checkpoint();
  const counter = new GateCounter({ toffoliOnly: true });
  const machine = new Machine(counter);
  const phaseRegister = machine.allocateRegister(phaseBits);
  machine.allocateRegister(Math.max(phaseBits - 1, 0));
  const wires = walkWires(tables, machine, 'gradient');
  walkStep(tables, wires, variant.spin, blocks, phaseRegister[0]!).run(machine);

  const byPart = counter.toffoliByPart();
  const parts = Object.fromEntries(STEP_PARTS.map((part) => [part, byPart.get(part) ?? 0])) as Record<
    StepPart,
    number
  >;
  // The control sits inside the reflection's ladder; an estimate books it, and the counter's step, as control.
  parts.reflections -= 1;
  parts.control += 1 + COUNTER_STEP;
  const { t } = GateCounter.total(counter.root);
  return {
    schema: 'spinwright-circuit/1',
    variant: formatVariant(variant),
    bits: estimate.bits,
    step: { toffoli: STEP_PARTS.reduce((sum, part) => sum + parts[part], 0), t, parts },
    wires: machine.peak,
    tree: counter.root,
  };
}
