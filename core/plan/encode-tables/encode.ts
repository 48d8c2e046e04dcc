import type { LookupPolicy } from '../../circuit';
import { type Encoding, formatVariant } from '../../encode';
import { roundingError } from '../../estimate';
import { heldTerms, type OrbitalWindow } from '../../hamiltonian';
import type { IntegralSet } from '../../integrals';
import { InputError, type JobContext } from '../../job';
import type { CircuitRequest } from '../circuit-run';
import { costOf, targetOf } from '../costing';
import type { Frame } from '../frame';
import { refuseLeftOut, requestedEncodings } from '../requested-encodings';
import { hamiltonianOf, occupationsOf, type SystemRequest } from '../system';
import { phaseBitsOf } from '../walk-circuit';
import { whole } from './arrays';
import { TABLES_SCHEMA, type TablesDocument } from './document';
import type { FormName, FormProgram, Programs, RoundedTables, RoundingChoice } from './form';
import { FORMS } from './forms';
import { FRAME_ARRAY, type FrameSummary } from './frame';
import { windowEffect } from './levels';

/** The rounded tables of a variant, not written yet. */
export interface EncodedTables {
  /** The document but for its list of arrays and its checksum. */
  readonly summary: Omit<TablesDocument, 'arrays' | 'crc32'>;
  readonly rounded: Pick<RoundedTables<FormName>, 'data'>;
  /** The program that the tables encode exactly. */
  readonly encoded: FormProgram;
}

/** Keep values and angle numbers are written as 32-bit numbers. */
const MOST_BITS = 32;

/**
 * The rounded tables of one variant, with what rounding and truncation do to the energy.
 *
 * @throws InputError `left-out`, `no-tables`, `too-many-bits`
 */
export async function encodeTables(
  set: IntegralSet,
  request: CircuitRequest,
  context: JobContext,
): Promise<EncodedTables> {
  const variant = formatVariant(request.variant);
  const refuse = (code: string, found: string, expected: string, mend: string): InputError =>
    new InputError({ code, where: `variant "${variant}"`, found, expected, mend });
  const occupations = occupationsOf(set, request);
  const encodings = requestedEncodings(set, hamiltonianOf(set, request), request);
  refuseLeftOut(encodings, request.variant);
  const encoding = await encodings.of(request.variant, context);
  const frame = await encodings.frameOf(request.variant, context);
  const hamiltonian = await encodings.hamiltonianOf(request.variant, context);
  const estimate = costOf(encoding, request.variant, targetOf(request), request);
  const { bits: used } = estimate;
  if (used.keep > MOST_BITS || used.rotation > MOST_BITS) {
    throw refuse(
      'too-many-bits',
      `${used.keep} bits of keep values, ${used.rotation} of angles`,
      `at most ${MOST_BITS} each`,
      'Give fewer with --bits.',
    );
  }
  context.report('rounding the tables', 0, null);
  await context.checkpoint();
  const policy: LookupPolicy = {
    mode: request.variant.lookup,
    block: 'auto',
    qubitCap: request.qubitsMax,
  };
  const found = roundAs(encoding, { bits: used, phaseBits: phaseBitsOf(estimate), policy }, context);
  if (!found) {
    throw refuse(
      'no-tables',
      'an encoding whose rows cannot be listed',
      'one with a circuit: an odd number of spinors has none',
      'Choose another variant, or leave a spinor out.',
    );
  }
  const { form, conventions, rounded, encoded, inWindow } = found;
  const expected = roundingError(encoding.shape, encoding.lambda, used);
  const realised = await rounded.rounding(hamiltonian.electrons, context);
  const turned = frame?.record.turned ? frame.record : null;
  const window =
    // Turned orbitals have no occupations to choose a window by.
    hamiltonian.kind === 'spatial' && occupations && !(turned?.kind === 'orbital')
      ? await windowEffect(
          hamiltonian,
          {
            given: (own) => inWindow(rounded.given, own),
            encoded: (own) => inWindow(rounded.encoded, own),
            truncated: encoding.residual.oneNormBound > 0,
          },
          occupations,
          context,
        )
      : null;
  return {
    rounded: turned
      ? { data: { ...rounded.data, [FRAME_ARRAY.name]: whole(Float64Array.from(turned.rotation.flat())) } }
      : rounded,
    encoded,
    summary: {
      schema: TABLES_SCHEMA,
      form,
      variant,
      orbitals: rounded.encoded.orbitals,
      electrons: hamiltonian.electrons,
      terms: hamiltonian.kind === 'spatial' ? hamiltonian.terms : heldTerms(set),
      system: systemOf(request),
      constant: encoding.constant,
      lambda: encoding.lambda,
      bits: rounded.bits,
      sizes: turned ? { ...rounded.sizes, [FRAME_ARRAY.name]: turned.rotation.length } : rounded.sizes,
      residual: encoding.residual,
      rounding: {
        worstCase: expected.rigorous,
        estimate: expected.estimate,
        realised: realised.bound,
        typical: realised.typical,
      },
      window,
      ...(turned ? { frame: summaryOf(turned) } : {}),
      conventions,
    },
  };
}

const systemOf = ({ terms, electrons, occupations, window }: SystemRequest): TablesDocument['system'] => ({
  terms,
  electrons,
  occupations,
  window: window ?? null,
});

function summaryOf({ kind, judgedBy, lambda, rows, evaluations }: Frame['record']): FrameSummary {
  return { kind, judgedBy, lambda, rows, evaluations };
}

/** The tables in the first form that the encoding is of. */
function roundAs(encoding: Encoding, how: RoundingChoice, context: JobContext) {
  for (const known of FORMS) {
    const { form, conventions } = known;
    const rounded = known.round(encoding, how) as RoundedTables<FormName> | null;
    if (!rounded) continue;
    return {
      form,
      conventions,
      rounded,
      encoded: { form, program: rounded.encoded } as FormProgram,
      inWindow: (program: Programs[FormName], window: OrbitalWindow) =>
        known.inWindow(program as never, window, context),
    };
  }
  return null;
}
