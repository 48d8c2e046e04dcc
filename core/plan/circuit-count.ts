import { type GateCount, GateCounter, Machine, STEP_PARTS, type StepPart } from '../circuit';
import { type Encoding, formatVariant, type VariantName } from '../encode';
import type { JobContext } from '../job';
import type { FrameRecord } from './frame';
import { type CircuitEstimate, phaseBitsOf, walkCircuit } from './walk-circuit';

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
  /** The turned basis that the system register is over; absent where it is the given one. */
  readonly frame?: FrameRecord;
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
  estimate: CircuitEstimate,
  qubitsMax: number | null,
  context: JobContext,
): Promise<CircuitCount> {
  context.report('rounding the tables', 0, null);
  await context.checkpoint();
  const walk = walkCircuit(encoding, variant, estimate, qubitsMax);
  context.report('emitting the walk step', 0, null);
  await context.checkpoint();
  const counter = new GateCounter({ toffoliOnly: true });
  const machine = new Machine(counter);
  const phaseBits = phaseBitsOf(estimate);
  const phaseRegister = machine.allocateRegister(phaseBits);
  machine.allocateRegister(Math.max(phaseBits - 1, 0));
  walk.emit('walk-step', machine, { control: phaseRegister[0]!, withGradient: false });

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
