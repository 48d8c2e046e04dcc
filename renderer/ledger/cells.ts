import * as figures from '../figures/figures';
import type { Column, Entry } from './columns';
import type { Row, View } from './rows';

/** What one cell of the ledger prints. */
export interface Cell {
  readonly kind: 'figure' | 'none' | 'pending';
  readonly figure: string;
  readonly mark: { sign: string; words: string } | null;
  readonly stale: boolean;
}

/** A column's cells in one row: one spanning cell where both sides are equal, else one a side with a seam. */
export interface Cells {
  readonly spans: boolean;
  readonly cells: readonly Cell[];
  /** Change from index to swap layers in percent, printed in the seam. */
  readonly seam: string;
}

const NONE = '–';
const PENDING = 'to come';

function cellOf(entry: Entry, row: Row, view: View): Cell {
  const { estimate } = entry;
  if (!estimate) return { kind: 'pending', figure: PENDING, mark: null, stale: false };
  const figure = row.figure(estimate, view);
  return figure === null
    ? { kind: 'none', figure: NONE, mark: null, stale: entry.stale !== null }
    : { kind: 'figure', figure, mark: row.mark?.(estimate, view) ?? null, stale: entry.stale !== null };
}

export function cellsOf(column: Column, row: Row, view: View): Cells {
  const cells = column.sides.map((side) => cellOf(side, row, view));
  const [index, swap] = column.sides;
  if (!swap) return { spans: false, cells, seam: '' };
  if (!index!.estimate || !swap.estimate) return { spans: false, cells, seam: '' };
  const before = row.value(index!.estimate, view);
  const after = row.value(swap.estimate, view);
  const same = before === after && cells[0]!.stale === cells[1]!.stale;
  if (same) return { spans: true, cells: [cells[0]!], seam: '' };
  const mixed = cells[0]!.stale !== cells[1]!.stale;
  return {
    spans: false,
    cells,
    seam: before === null || after === null || mixed ? '' : figures.formatChange(before, after),
  };
}

/** The seam for a screen reader, as part of the right-hand figure. */
export function seamWords(before: number | null, after: number | null): string {
  if (before === null || after === null || before === after || before === 0) return '';
  const percent = Math.abs((100 * (after - before)) / before);
  const size = percent < 0.05 ? 'less than 0.1' : percent.toFixed(1);
  return `, ${size} percent ${after < before ? 'less' : 'more'} than in index`;
}
