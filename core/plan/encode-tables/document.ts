import type { LambdaByPart } from '../../encode';
import { Crc32 } from '../../integrals';
import type { SystemRequest } from '../system';
import type { ElementName, Sizes } from './arrays';
import type { FormName } from './form';
import type { FrameSummary } from './frame';
import type { WindowEffect } from './levels';

export const TABLES_SCHEMA = 'spinwright-tables/2';
export const TABLES_FILE = 'tables.json';

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

/** One array, and the file that holds it. */
export interface WrittenArray {
  readonly name: string;
  readonly file: string;
  readonly type: ElementName;
  readonly shape: readonly number[];
  /** The extents by the names that `sizes` has them under. */
  readonly extents: readonly (string | number)[];
  readonly meaning: string;
  /** Of the numbers, without the header of the file. */
  readonly crc32: number;
}

/** `tables.json` of an exported encoding: describes itself and the arrays beside it. */
export interface TablesDocument {
  readonly schema: typeof TABLES_SCHEMA;
  readonly form: FormName;
  readonly variant: string;
  readonly orbitals: number;
  readonly electrons: number;
  readonly terms: readonly string[];
  /** What was asked for of the files, beside the frame. */
  readonly system: Required<Omit<SystemRequest, 'frames'>>;
  readonly constant: number;
  readonly lambda: LambdaByPart;
  readonly bits: Sizes;
  /** Extents of the arrays, and what else reading needs. */
  readonly sizes: Sizes;
  readonly residual: {
    readonly frobenius: number;
    readonly oneNormBound: number;
    readonly dropped: number;
  };
  readonly rounding: RoundingSummary;
  /** Lowest levels of an orbital window around the Fermi level; null where none can be chosen. */
  readonly window: WindowEffect | null;
  /** The turned basis that the tables are over; absent where it is the given one. */
  readonly frame?: FrameSummary;
  readonly conventions: Readonly<Record<string, string>>;
  readonly arrays: readonly WrittenArray[];
  /** Of all the rest, see {@link documentChecksum}. */
  readonly crc32: number;
}

/** CRC-32 of a document without its own, as JSON without blanks. */
export function documentChecksum(document: object): number {
  const crc = new Crc32();
  crc.push(new TextEncoder().encode(JSON.stringify({ ...document, crc32: undefined })));
  return crc.value;
}
