import type { Column } from './columns';

/** Widths of the ledger in CSS pixels; the charts below the table stand on the same grid. */
export const LABEL = 170;
export const SIDE = 90;
export const SEAM = 48;
export const SINGLE = 92;
export const GAP = 8;
export const BAR = 50;

export interface Place {
  readonly left: number;
  readonly width: number;
  /** Centre of each side's cells. */
  readonly centres: readonly number[];
}

export interface Grid {
  readonly places: readonly Place[];
  readonly width: number;
}

/** Where each column stands, measured from the table's left edge. */
export function gridOf(columns: readonly Pick<Column, 'sides'>[]): Grid {
  const places: Place[] = [];
  let left = LABEL;
  columns.forEach(({ sides }, at) => {
    if (at > 0) left += GAP;
    const pair = sides.length === 2;
    const width = pair ? 2 * SIDE + SEAM : SINGLE;
    const centres = pair ? [left + SIDE / 2, left + SIDE + SEAM + SIDE / 2] : [left + SINGLE / 2];
    places.push({ left, width, centres });
    left += width;
  });
  return { places, width: left };
}
