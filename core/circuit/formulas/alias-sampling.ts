import { type LookupMode, loadToffoli, type Table } from './table-lookup';

/** Sizes of a table that prepares weights over its rows by coherent alias sampling. */
export interface AliasTable {
  /** L: number of weights. */
  readonly rows: number;
  /** Bits of what is sampled: the row index, or the whole index word of a term. */
  readonly indexBits: number;
  /** ℵ: bits of the probability with which a row keeps its own index. */
  readonly keepBits: number;
  /** Bits of an index word that are loaded for the row itself too (term by term); 0 where the row number is the index. */
  readonly ownBits: number;
  /** Bits that ride along and are not swapped. */
  readonly extraBits: number;
}

/** The table behind it: alternate index, keep value, and what rides along. */
export function aliasWord({ rows, indexBits, keepBits, ownBits, extraBits }: AliasTable): Table {
  return { rows, bits: indexBits + keepBits + ownBits + extraBits };
}

/**
 * Toffoli of coherent alias sampling after the equal superposition: look-up, comparison of ℵ bits, controlled swap
 * of the index. Babbush et al., Phys. Rev. X 8, 041015 (2018).
 */
export function aliasToffoli(table: AliasTable, block: number, mode: LookupMode): number {
  return loadToffoli(aliasWord(table), block, mode) + table.keepBits + table.indexBits;
}
