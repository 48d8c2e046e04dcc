import { timeUnit } from '../figures/figures';
import type { Reckoning } from '../figures/reckoning';
import { words } from '../figures/reckoning';
import { type Cells, cellsOf } from '../ledger/cells';
import {
  arrange,
  type Column,
  cheapest,
  columnTitle,
  type Entry,
  pairKey,
  sideWord,
} from '../ledger/columns';
import { explain } from '../ledger/explain';
import { FIRST_ROWS, ROWS, type Row, type RowId, rowById, TALL_ROWS, type View } from '../ledger/rows';
import type { LoadState } from './load.svelte';
import type { StopLine } from './stops';
import type { TargetState } from './target.svelte';
import type { VariantsState } from './variants.svelte';

/** One figure of the grid: the row and the entry it belongs to. */
export interface Cursor {
  readonly row: RowId;
  readonly name: string;
}

export interface SheetRow {
  readonly row: Row;
  readonly cells: readonly Cells[];
}

/** Which columns and rows the ledger shows, in what order, and where the focus is. */
export class LedgerState {
  order = $state<RowId>('run');
  pinned = $state.raw<readonly string[]>([]);
  hidden = $state.raw<readonly string[]>([]);
  rowsOn = $state.raw<readonly RowId[]>(FIRST_ROWS);
  /** Set by the window where it is too low for all rows. */
  low = $state(false);
  #cursor = $state.raw<Cursor | null>(null);
  /** What is open under the heading. */
  panel = $state<'none' | 'columns' | 'order' | 'copy'>('none');
  /** The full slip over the lower charts. */
  slipOpen = $state(false);
  readonly #variants: VariantsState;
  readonly #target: TargetState;
  readonly #load: LoadState;

  constructor(variants: VariantsState, target: TargetState, load: LoadState) {
    this.#variants = variants;
    this.#target = target;
    this.#load = load;
  }

  readonly entries = $derived.by((): readonly Entry[] =>
    this.#load.ready ? this.#variants.entries.filter((e) => e.status !== 'left-out') : [],
  );
  readonly leftOut = $derived.by(() => this.#variants.entries.filter((e) => e.status === 'left-out'));
  readonly anything = $derived(this.entries.some((e) => e.estimate !== null));

  readonly view = $derived.by((): View => {
    const hours = this.entries.flatMap((e) => (e.estimate?.physical ? [e.estimate.physical.hours] : []));
    return {
      target: this.#target.target,
      cap: this.#target.cap.value,
      time: timeUnit(hours.length ? Math.min(...hours) : 0),
    };
  });

  readonly columns = $derived.by((): readonly Column[] =>
    arrange(this.entries, {
      pinned: this.pinned,
      hidden: this.hidden,
      orderBy: (e) => rowById(this.order).value(e, this.view),
      cap: this.#target.cap.value,
    }),
  );

  readonly rows = $derived(
    ROWS.filter((r) => this.rowsOn.includes(r.id) && !(this.low && TALL_ROWS.includes(r.id))),
  );

  readonly sheet = $derived.by((): readonly SheetRow[] =>
    this.rows.map((row) => ({ row, cells: this.columns.map((c) => cellsOf(c, row, this.view)) })),
  );

  readonly leader = $derived.by(() => cheapest(this.entries, { cap: this.#target.cap.value }));

  /** The focused figure; the leader's Toffoli a step before anything was focused. */
  readonly cursor = $derived.by((): Cursor | null => {
    const names = this.columns.flatMap((c) => c.sides.map((s) => s.name));
    if (names.length === 0 || this.rows.length === 0) return null;
    const wanted = this.#cursor;
    const row = wanted && this.rows.some((r) => r.id === wanted.row) ? wanted.row : this.#firstRow();
    const name = wanted && names.includes(wanted.name) ? wanted.name : (this.leader ?? names[0]!);
    return { row, name: names.includes(name) ? name : names[0]! };
  });

  #firstRow(): RowId {
    return this.rows.some((r) => r.id === 'step') ? 'step' : this.rows[0]!.id;
  }

  readonly focused = $derived.by((): Entry | null => {
    const { cursor } = this;
    return this.entries.find((e) => e.name === cursor?.name) ?? null;
  });

  /** Key of the column that holds the focus. */
  readonly selected = $derived(this.focused ? pairKey(this.focused.name) : null);

  focusOn(row: RowId, name: string): void {
    this.#cursor = { row, name };
  }

  /** Arrow keys: rows up and down, figures left and right; a spanning figure counts once. */
  move(dx: number, dy: number): void {
    const at = this.cursor;
    if (!at) return;
    if (dy !== 0) {
      const ids = this.rows.map((r) => r.id);
      const next = Math.min(ids.length - 1, Math.max(0, ids.indexOf(at.row) + dy));
      this.focusOn(ids[next]!, at.name);
      return;
    }
    const stops = this.#stopsOf(at.row);
    const here = stops.findIndex((names) => names.includes(at.name));
    const next = stops[Math.min(stops.length - 1, Math.max(0, here + dx))]!;
    this.focusOn(at.row, dx < 0 ? next[next.length - 1]! : next[0]!);
  }

  /** First or last figure of the row. */
  moveToEnd(last: boolean): void {
    const at = this.cursor;
    if (!at) return;
    const stops = this.#stopsOf(at.row);
    this.focusOn(at.row, stops[last ? stops.length - 1 : 0]![0]!);
  }

  /** Names behind each figure of a row, left to right. */
  #stopsOf(row: RowId): string[][] {
    const line = this.sheet.find((s) => s.row.id === row)!;
    return this.columns.flatMap((column, at) => {
      const names = column.sides.map((s) => s.name);
      return line.cells[at]!.spans ? [names] : names.map((n) => [n]);
    });
  }

  /** From spin in the index to swap layers and back. */
  swapFocus(): void {
    const at = this.cursor;
    const column = this.columns.find((c) => c.sides.some((s) => s.name === at?.name));
    const other = column?.sides.find((s) => s.name !== at?.name);
    if (at && other) this.focusOn(at.row, other.name);
  }

  togglePin(key: string | null = this.selected): void {
    if (key === null) return;
    this.pinned = this.pinned.includes(key) ? this.pinned.filter((k) => k !== key) : [...this.pinned, key];
  }

  hide(key: string | null = this.selected): void {
    // The last column stays: an empty ledger would have no way back but the menu.
    if (key !== null && this.columns.length > 1) this.hidden = [...this.hidden, key];
  }

  show(key: string): void {
    this.hidden = this.hidden.filter((k) => k !== key);
  }

  showAll(): void {
    this.hidden = [];
  }

  toggleRow(id: RowId): void {
    const on = this.rowsOn.includes(id);
    if (on && this.rowsOn.length === 1) return;
    this.rowsOn = on ? this.rowsOn.filter((r) => r !== id) : [...this.rowsOn, id];
  }

  orderByFocus(): void {
    if (this.cursor) this.order = this.cursor.row;
  }

  readonly line = $derived.by((): StopLine => {
    if (!this.anything) return { mark: 'empty', fact: 'nothing reckoned yet', knows: false };
    if (this.entries.some((e) => e.stale !== null))
      return { mark: 'stale', fact: 'from an older question', knows: true };
    const waiting = this.entries.some((e) => e.estimate === null);
    const { leader } = this;
    const fact =
      leader === null
        ? 'none within the cap'
        : `${columnTitle(leader).toLowerCase()}, ${sideWord(leader)} leads`;
    return { mark: waiting ? 'half' : 'full', fact, knows: true };
  });

  readonly reckoning = $derived.by((): Reckoning => {
    const { cursor, focused } = this;
    if (!cursor || !focused || !this.anything)
      return [[words('Figures appear here as the variants are reckoned, each with its formula.')], []];
    return explain(cursor.row, focused, this.view);
  });
}
