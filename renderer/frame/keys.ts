import type { Desk } from '../state/desk.svelte';
import { STOPS } from '../state/stops';

/** The regions that F6 goes through, in order. */
const REGIONS = ['rail', 'sheet', 'reckoning'] as const;

/** True where a key belongs to what is being typed. */
function isTyping(target: EventTarget | null): boolean {
  return (
    target instanceof HTMLElement &&
    target.matches('input:not([type=checkbox]):not([type=radio]), textarea, select')
  );
}

function nextRegion(back: boolean): void {
  const here = REGIONS.findIndex((id) => document.getElementById(id)?.contains(document.activeElement));
  const step = back ? -1 : 1;
  const next = REGIONS[(here + step + REGIONS.length) % REGIONS.length]!;
  const region = document.getElementById(next);
  const inside = region?.querySelector<HTMLElement>(
    '[tabindex="0"], a[href], button:not(:disabled), input:not(:disabled)',
  );
  (next === 'reckoning' ? region : (inside ?? region))?.focus();
}

/** Keys that work everywhere in the window. */
export function globalKey(event: KeyboardEvent, desk: Desk): void {
  if (event.defaultPrevented) return;
  const { key } = event;
  if (key === 'F6') {
    nextRegion(event.shiftKey);
  } else if (key === 'Enter' && (event.ctrlKey || event.metaKey)) {
    void desk.reckon();
  } else if (key === 'Escape') {
    if (desk.keysOpen) desk.keysOpen = false;
    else if (desk.ledger.slipOpen) desk.ledger.slipOpen = false;
    else return;
  } else if (event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) {
    return;
  } else if (key === '?') {
    desk.keysOpen = true;
  } else if (/^[1-6]$/.test(key)) {
    desk.goTo(STOPS[Number(key) - 1]!);
  } else {
    return;
  }
  event.preventDefault();
}
