import type { Problem } from '../../core/job';
import type { VariantEstimate } from '../../core/plan/comparison';

export type EntryStatus = 'waiting' | 'running' | 'done' | 'stopped' | 'failed' | 'left-out';

/** One variant as the ledger sees it: where its reckoning stands and what is known so far. */
export interface Entry {
  /** `factorisation/grouping/spin/shift/lookup`. */
  readonly name: string;
  readonly status: EntryStatus;
  readonly stage: string;
  /** 0…1, null while unknown. */
  readonly fraction: number | null;
  readonly estimate: VariantEstimate | null;
  readonly problem: Problem | null;
  /** Why it was left out beforehand, or empty. */
  readonly reason: string;
  /** What could not be made as asked, or what was chosen on which evidence; one sentence each. */
  readonly notes: readonly string[];
  /** Why the figures no longer answer the present question, or null. */
  readonly stale: string | null;
}

/** What the two ways to treat spin share stands in one column; a variant without a partner stands alone. */
export interface Column {
  readonly key: string;
  readonly title: string;
  readonly note: string;
  /** Two entries, index first, or one. */
  readonly sides: readonly Entry[];
  readonly pinned: boolean;
  readonly leads: boolean;
  /** Why there is no second side; empty for a pair. */
  readonly alone: string;
}

export interface ColumnOptions {
  readonly pinned: readonly string[];
  readonly hidden: readonly string[];
  /** Figure to order by, ascending; null where a variant has none. */
  readonly orderBy: (estimate: VariantEstimate) => number | null;
  /** Largest number of logical qubits, or null. */
  readonly cap: number | null;
}

const SHIFTS: Readonly<Record<string, string>> = {
  none: 'no shift',
  median: 'median shift',
  optimised: 'optimised shift',
};

const capital = (word: string) => word.charAt(0).toUpperCase() + word.slice(1);
const axes = (name: string) => name.split('/') as [string, string, string, string, string];

/** Same terms, factorisation, grouping, shift and look-up: everything but the treatment of spin. */
export function pairKey(name: string): string {
  const [factorisation, grouping, , shift, lookup] = axes(name);
  return [factorisation, grouping, shift, lookup].join('/');
}

export function columnTitle(name: string): string {
  const [factorisation, grouping] = axes(name);
  // Spinor factors exist for separate blocks only, so the word would tell nothing.
  return grouping === '-' || factorisation === 'mixed' || factorisation === 'spinor'
    ? capital(factorisation)
    : `${capital(factorisation)}, ${grouping}`;
}

export function sideWord(name: string): string {
  const [factorisation, , spin] = axes(name);
  if (factorisation === 'sparse' || factorisation === 'spinor') return 'one form';
  return spin === 'swap-layers' ? 'swap layers' : 'in index';
}

function columnNote(name: string): string {
  const [, , , shift, lookup] = axes(name);
  return lookup === 'clean' ? SHIFTS[shift]! : `${SHIFTS[shift]!}, ${lookup}`;
}

function whyAlone(name: string): string {
  const [factorisation, , spin] = axes(name);
  if (factorisation === 'sparse')
    return 'Sparse coefficients carry no vectors to rotate, so there are no swap layers to compare with.';
  if (factorisation === 'spinor')
    return 'Spinor vectors mix both spins, so spin cannot be taken out of the index.';
  const other = spin === 'swap-layers' ? 'spin in the index' : 'swap layers';
  return `The same form with ${other} is not among the chosen variants.`;
}

/**
 * Orders the entries into columns: pinned first, then pairs, then single ones, each ascending by the chosen
 * figure; unfinished ones last.
 */
export function arrange(entries: readonly Entry[], options: ColumnOptions): Column[] {
  const groups = new Map<string, Entry[]>();
  for (const entry of entries) {
    const key = pairKey(entry.name);
    groups.set(key, [...(groups.get(key) ?? []), entry]);
  }
  const leader = cheapest(entries, options);
  const columns = [...groups].map(([key, members]): Column => {
    const sides = [...members].sort((a, b) => (axes(a.name)[2] < axes(b.name)[2] ? -1 : 1));
    const first = sides[0]!.name;
    return {
      key,
      title: columnTitle(first),
      note: columnNote(first),
      sides,
      pinned: options.pinned.includes(key),
      leads: leader !== null && pairKey(leader) === key,
      alone: sides.length === 2 ? '' : whyAlone(first),
    };
  });
  const rank = (c: Column) => {
    if (c.pinned) return 0;
    if (c.sides.some((s) => s.estimate === null)) return 3;
    return c.sides.length === 2 ? 1 : 2;
  };
  const best = (c: Column) =>
    Math.min(...c.sides.map((s) => (s.estimate && options.orderBy(s.estimate)) ?? Number.POSITIVE_INFINITY));
  return columns
    .filter((c) => !options.hidden.includes(c.key))
    .map((column, at) => ({ column, at }))
    .sort((a, b) => rank(a.column) - rank(b.column) || compare(best(a.column), best(b.column)) || a.at - b.at)
    .map(({ column }) => column);
}

const compare = (a: number, b: number) => (a === b ? 0 : a - b);

/** Name of the variant with the fewest Toffoli in one run among those within the cap, or null. */
export function cheapest(entries: readonly Entry[], { cap }: { cap: number | null }): string | null {
  let best: VariantEstimate | null = null;
  for (const { estimate, stale } of entries) {
    if (!estimate || stale !== null || (cap !== null && estimate.logicalQubits > cap)) continue;
    if (!best || estimate.totalToffoli < best.totalToffoli) best = estimate;
  }
  return best?.name ?? null;
}
