import { type Machine, takeCensus, writeQasm } from '../circuit';
import { type Encoding, formatVariant, type VariantName } from '../encode';
import type { IntegralSet } from '../integrals';
import { InputError, type JobContext } from '../job';
import { type CircuitCount, countWalkStep } from './circuit-count';
import { costOf, targetOf } from './costing';
import type { FrameRecord } from './frame';
import type { ComparisonRequest } from './request';
import { refuseLeftOut, requestedEncodings } from './requested-encodings';
import { hamiltonianOf } from './system';
import { type CircuitEstimate, type CircuitPart, walkCircuit } from './walk-circuit';

/** A comparison of one variant, of which the circuit is wanted. */
export interface CircuitRequest extends Omit<ComparisonRequest, 'variants'> {
  readonly variant: VariantName;
}

/** Longest text that is written, in expected gates: some 150 MB. */
export const MOST_GATES = 5_000_000;

/** What was written. `circuit --json` prints it. */
export interface CircuitText {
  readonly schema: 'spinwright-circuit-text/1';
  readonly variant: string;
  readonly part: CircuitPart;
  readonly language: 'OpenQASM 3.0';
  readonly bits: { readonly keep: number; readonly rotation: number };
  /** Hartree: the block encoding holds (H − constant)/lambda. */
  readonly lambda: number;
  readonly constant: number;
  readonly wires: number;
  readonly registers: readonly { readonly name: string; readonly qubits: number }[];
  readonly lines: number;
  /** The turned basis that the system register is over; absent where it is the given one. */
  readonly frame?: FrameRecord;
}

interface Planned {
  readonly encoding: Encoding;
  /** Where the encoding is over a turned basis. */
  readonly frame: FrameRecord | null;
  readonly estimate: CircuitEstimate;
}

async function plan(set: IntegralSet, request: CircuitRequest, context: JobContext): Promise<Planned> {
  const encodings = requestedEncodings(set, hamiltonianOf(set, request), request);
  refuseLeftOut(encodings, request.variant);
  const encoding = await encodings.of(request.variant, context);
  const frame = encodings.records().find(({ turned }) => turned) ?? null;
  return { encoding, frame, estimate: costOf(encoding, request.variant, targetOf(request), request) };
}

/** Counts the walk step of a variant gate by gate: the `step` of a comparison under the same options. */
export async function countCircuit(
  set: IntegralSet,
  request: CircuitRequest,
  context: JobContext,
): Promise<CircuitCount> {
  const { encoding, frame, estimate } = await plan(set, request, context);
  const count = await countWalkStep(encoding, request.variant, estimate, request.qubitsMax, context);
  return frame ? { ...count, frame } : count;
}

const MEANING_OF_PART: Readonly<Record<CircuitPart, string>> = {
  'walk-step':
    'one step of the walk: block encoding, then the reflection of its index registers where control is 1',
  'block-encoding':
    'the block encoding U: with its index registers at 0 before and after, (H - constant)/lambda on the system',
  prepare: 'PREPARE of the outer index; registers below stay entangled',
};

/**
 * Writes a part of a variant's walk as OpenQASM 3.
 *
 * @param write - takes the text piece by piece
 * @throws InputError `too-long` above {@link MOST_GATES}, `no-circuit`
 */
export async function writeCircuit(
  set: IntegralSet,
  request: CircuitRequest & { readonly part: CircuitPart },
  context: JobContext,
  write: (chunk: string) => void,
): Promise<CircuitText> {
  const { encoding, frame, estimate } = await plan(set, request, context);
  const { part } = request;
  const variant = formatVariant(request.variant);
  context.report('rounding the tables', 0, null);
  await context.checkpoint();
  const walk = walkCircuit(encoding, request.variant, estimate, request.qubitsMax);
  const circuit = (machine: Machine) => {
    const control = part === 'walk-step' ? machine.allocateRegister(1, 'control')[0]! : null;
    walk.emit(part, machine, { control, withGradient: true });
  };
  context.report('measuring the circuit', 0, null);
  await context.checkpoint();
  const census = takeCensus(circuit);
  if (census.expectedGates > MOST_GATES) throw tooLong(variant, census.expectedGates);
  const { keep, rotation } = estimate.bits;
  const { constant, lambda } = encoding;
  const comments = [
    `${variant}: ${MEANING_OF_PART[part]}`,
    `lambda ${lambda.total} Eh, constant ${constant} Eh, ${keep} bits of keep values, ${rotation} bits of angles`,
    'A ccx into a qubit of work that is 0 is an AND: one Toffoli state; it is taken back by a measurement.',
    ...(frame ? frameComments(frame) : []),
  ];
  const expected = Math.round(census.expectedGates);
  const lines = writeQasm(circuit, census, {
    comments,
    write,
    onLines: (done) => context.report('writing the circuit', Math.min(done, expected), expected),
  });
  return {
    schema: 'spinwright-circuit-text/1',
    variant,
    part,
    language: 'OpenQASM 3.0',
    bits: { keep, rotation },
    lambda: lambda.total,
    constant,
    wires: census.wires,
    registers: census.registers.map(({ name, wires }) => ({ name, qubits: wires.length })),
    lines,
    ...(frame ? { frame } : {}),
  };
}

/** The basis in words and numbers: without it nobody could prepare a state for the circuit. */
function frameComments({ kind, rotation }: FrameRecord): string[] {
  const meaning =
    kind === 'spin'
      ? "turned spin axes: component l of an operator is L'_l = sum_k F_kl L_k, rows of F:"
      : 'turned orbitals: orbital p is sum_q F_pq times the given orbital q, rows of F:';
  return [meaning, ...rotation.map((row) => `  ${row.join(' ')}`)];
}

function tooLong(variant: string, gates: number): InputError {
  return new InputError({
    code: 'too-long',
    where: `variant "${variant}"`,
    found: `about ${gates.toPrecision(2)} gates`,
    expected: `at most ${MOST_GATES} for a text`,
    mend: 'Use --count-only, a smaller --window, fewer --bits or a higher --threshold.',
  });
}
