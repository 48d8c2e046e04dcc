import { encodedProgram, type TripletBits, tripletTables } from '../circuit';
import { formatVariant, type LambdaByPart } from '../encode';
import { roundingError } from '../estimate';
import type { IntegralSet } from '../integrals';
import { InputError, type JobContext } from '../job';
import { realisedRounding } from '../verify';
import type { CircuitRequest } from './circuit-run';
import { costOf, targetOf, thresholdOf } from './costing';
import { arraysOf, CONVENTIONS, type TableArray } from './encode-tables-layout';
import { type WindowEffect, windowEffect } from './encode-tables-levels';
import { Encodings } from './encodings';
import { hamiltonianOf, occupationsOf } from './system';

/** What rounding to the bits of the tables may change, hartree. */
export interface RoundingSummary {
  /** Worst case over all roundings, from λ and sizes alone; rigorous. */
  readonly worstCase: number;
  /** Statistical estimate from λ and sizes alone. */
  readonly estimate: number;
  /** From the rounded rows themselves, in the sector of the electrons; rigorous. */
  readonly realised: number;
  /** The same with items adding up as if independent; no bound. */
  readonly typical: number;
}

/** `tables.json` of an exported encoding: describes itself and the arrays beside it. */
export interface TablesDocument {
  readonly schema: 'spinwright-tables/1';
  readonly variant: string;
  readonly orbitals: number;
  readonly electrons: number;
  readonly terms: readonly string[];
  readonly constant: number;
  readonly lambda: LambdaByPart;
  readonly bits: TripletBits;
  readonly residual: {
    readonly frobenius: number;
    readonly oneNormBound: number;
    readonly dropped: number;
  };
  readonly rounding: RoundingSummary;
  /** Lowest levels of an orbital window around the Fermi level; null where none can be chosen. */
  readonly window: WindowEffect | null;
  readonly sizes: {
    readonly items: number;
    readonly rows: number;
    readonly itemBits: number;
    readonly rowBits: number;
    readonly hasFaces: boolean;
    readonly hasPaired: boolean;
  };
  readonly conventions: typeof CONVENTIONS;
  readonly arrays: readonly {
    readonly name: string;
    readonly file: string;
    readonly shape: readonly number[];
    readonly meaning: string;
  }[];
}

export interface EncodedTables {
  readonly document: TablesDocument;
  readonly arrays: readonly TableArray[];
}

/** Keep values and angle numbers are written as 32-bit numbers. */
const MOST_BITS = 32;

/**
 * The rounded tables of one triplet or compressed variant, with what rounding and truncation do to the energy.
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
  const hamiltonian = hamiltonianOf(set, request);
  const target = targetOf(request);
  const occupations = occupationsOf(set, request);
  const encodings = new Encodings(hamiltonian, thresholdOf(request, target), occupations);
  const reason = encodings.refusal(request.variant);
  if (reason !== null) {
    throw refuse(
      'left-out',
      reason,
      'an encoding that can be made',
      'Choose another grouping, e.g. separate.',
    );
  }
  const encoding = await encodings.of(request.variant, context);
  if (hamiltonian.kind !== 'spatial' || !occupations || !encoding.program) {
    throw refuse(
      'no-tables',
      'an encoding without rows over spatial orbitals',
      'triplet or compressed factors',
      'Choose e.g. triplet/separate/swap-layers/median/clean.',
    );
  }
  const { bits: used } = costOf(encoding, request.variant, target, request);
  const bits: TripletBits = { keep: used.keep, innerKeep: used.keep, rotation: used.rotation };
  if (bits.keep > MOST_BITS || bits.rotation > MOST_BITS) {
    throw refuse(
      'too-many-bits',
      `${bits.keep} bits of keep values, ${bits.rotation} of angles`,
      `at most ${MOST_BITS} each`,
      'Give fewer with --bits.',
    );
  }
  context.report('rounding the tables', 0, null);
  await context.checkpoint();
  const given = encoding.program();
  const tables = tripletTables(given, bits);
  const encoded = encodedProgram(given, tables);
  const realised = await realisedRounding(given, encoded, hamiltonian.electrons, context);
  const { rigorous, estimate } = roundingError(encoding.shape, encoding.lambda, used);
  const arrays = arraysOf(tables);
  return {
    document: {
      schema: 'spinwright-tables/1',
      variant,
      orbitals: hamiltonian.orbitals,
      electrons: hamiltonian.electrons,
      terms: hamiltonian.terms,
      constant: encoding.constant,
      lambda: encoding.lambda,
      bits,
      residual: encoding.residual,
      rounding: { worstCase: rigorous, estimate, realised: realised.bound, typical: realised.typical },
      window: await windowEffect(
        hamiltonian,
        given,
        encoded,
        occupations,
        encoding.residual.oneNormBound > 0,
        context,
      ),
      sizes: {
        items: tables.items.length,
        rows: tables.rowAddresses.length,
        itemBits: tables.itemBits,
        rowBits: tables.rowBits,
        hasFaces: tables.hasFaces,
        hasPaired: tables.hasPaired,
      },
      conventions: CONVENTIONS,
      arrays: arrays.map(({ name, shape, meaning }) => ({ name, file: `${name}.npy`, shape, meaning })),
    },
    arrays,
  };
}
