import type { Desk } from '../state/desk.svelte';
import { rowById } from './rows';

/** The full number behind the focused figure, as it is copied: point as decimal sign, no grouping. */
export function focusedNumber(desk: Desk): string {
  const { cursor, focused, view } = desk.ledger;
  if (!cursor || !focused?.estimate) return '';
  const row = rowById(cursor.row);
  return row.copied?.(focused.estimate, view) ?? String(row.value(focused.estimate, view) ?? '');
}

/** Keys of the ledger grid. @returns true where the key was one of them. */
export function ledgerKey(event: KeyboardEvent, desk: Desk, { oncopy }: { oncopy: () => void }): boolean {
  const { ledger } = desk;
  const { key } = event;
  if (event.ctrlKey || event.metaKey) {
    if (key.toLowerCase() !== 'c') return false;
    oncopy();
    return true;
  }
  if (event.altKey) return false;
  const moves: Readonly<Record<string, () => void>> = {
    ArrowLeft: () => ledger.move(-1, 0),
    ArrowRight: () => ledger.move(1, 0),
    ArrowUp: () => ledger.move(0, -1),
    ArrowDown: () => ledger.move(0, 1),
    Home: () => ledger.moveToEnd(false),
    End: () => ledger.moveToEnd(true),
    x: () => ledger.swapFocus(),
    p: () => ledger.togglePin(),
    h: () => ledger.hide(),
    s: () => ledger.orderByFocus(),
    c: () => void navigator.clipboard.writeText(focusedNumber(desk)),
  };
  if (key === 'Enter') {
    ledger.slipOpen = !ledger.slipOpen;
    return true;
  }
  if (key === 'Escape') {
    if (ledger.slipOpen) ledger.slipOpen = false;
    else if (ledger.focused?.status === 'running') desk.variants.stop();
    else return false;
    return true;
  }
  const move = moves[key.length === 1 ? key.toLowerCase() : key];
  move?.();
  return move !== undefined;
}
