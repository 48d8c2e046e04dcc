import type { LookupMode, PrimitiveCost, Table } from '../formulas';
import {
  bestBlock,
  blockSizes,
  borrowedByLoad,
  erase,
  eraseToffoli,
  leaf,
  load,
  loadToffoli,
} from '../formulas';
import type { StepPart, Subroutine } from '../recipe';

/** How look-ups choose their block size k. */
export interface LookupPolicy {
  readonly mode: LookupMode;
  /** k of the main table (angles, or the coefficients of a term-by-term encoding); the small tables always choose theirs. */
  readonly block: number | 'auto';
  /** No look-up may lift the qubits alive above this; null = no cap. */
  readonly qubitCap: number | null;
}

/** A register: what it is called in the qubit ledger, and its size. */
export interface Register {
  readonly name: string;
  readonly qubits: number;
}

/**
 * A piece of a recipe, built once it is known how many qubits are alive around it: look-ups choose their block by
 * that. Null where the piece vanishes (an empty table).
 */
export type Piece = (live: number) => Subroutine | null;

/** A node whose registers live while its pieces run one after the other. */
export function scope(name: string, registers: readonly Register[], pieces: readonly Piece[]): Piece {
  return (live) => {
    const held = registers.filter((register) => register.qubits > 0);
    const inside = live + held.reduce((sum, register) => sum + register.qubits, 0);
    const children = pieces.map((piece) => piece(inside)).filter((child) => child !== null);
    if (children.length === 0 && held.length === 0) return null;
    return { name, ...(held.length > 0 ? { registers: held } : {}), children };
  };
}

/** A primitive, run `times` times. */
export function gate(name: string, part: StepPart, cost: PrimitiveCost, times = 1): Piece {
  return () => (times === 0 || (cost.toffoli === 0 && cost.t === 0) ? null : leaf(name, part, cost, times));
}

/** A look-up's table, and how it stands among the others. */
export interface LookupTable extends Table {
  /** The table that a given block size is meant for. */
  readonly main?: boolean;
  /** Added bitwise to a register that is in use already: select-swap then needs a copy of the word more. */
  readonly onto?: boolean;
}

/** Loads a row; the b result wires belong to the scope around it. */
export function lookup(name: string, part: StepPart, table: LookupTable, policy: LookupPolicy): Piece {
  return (live) => {
    if (table.rows <= 1) return null;
    const block = loadBlock(table, policy, live);
    const cost = loadCost(table, block, policy);
    // Borrowed wires that are not there to be borrowed have to be allocated.
    const missing = Math.max(0, borrowedByLoad(table, block, policy.mode) - idleWires(table, live));
    return leaf(name, part, { ...cost, scratch: cost.scratch + missing });
  };
}

/** Erases a row at the best block: its measured wires are free at once and serve as scratch. */
export function unlookup(name: string, part: StepPart, table: Table, policy: LookupPolicy): Piece {
  return (live) => {
    if (table.rows <= 1) return null;
    const { mode, qubitCap } = policy;
    const costAt = (block: number) => {
      const cost = erase(table.rows, block, mode);
      return { ...cost, scratch: Math.max(0, cost.scratch - table.bits) };
    };
    const fits = (block: number) =>
      (qubitCap === null || live + costAt(block).scratch <= qubitCap) && (mode !== 'dirty' || block <= live);
    const block =
      mode === 'plain' ? 1 : bestBlock(table.rows, (k) => eraseToffoli(table.rows, k, mode), fits);
    return leaf(name, part, costAt(block));
  };
}

function loadBlock(table: LookupTable, policy: LookupPolicy, live: number): number {
  const { mode, qubitCap, block } = policy;
  if (mode === 'plain') return 1;
  if (table.main && block !== 'auto') return Math.min(block, blockSizes(table.rows).at(-1)!);
  return bestBlock(
    table.rows,
    (k) => loadToffoli(table, k, mode),
    (k) =>
      (qubitCap === null || live + loadCost(table, k, policy).scratch <= qubitCap) &&
      borrowedByLoad(table, k, mode) <= idleWires(table, live),
  );
}

function loadCost(table: LookupTable, block: number, { mode }: LookupPolicy): PrimitiveCost {
  const cost = load(table, block, mode);
  return table.onto && mode === 'clean' && block > 1 ? { ...cost, scratch: cost.scratch + table.bits } : cost;
}

/** Wires alive that a look-up may borrow: all but its own address and result. */
function idleWires(table: Table, live: number): number {
  return Math.max(0, live - table.bits - Math.ceil(Math.log2(Math.max(table.rows, 1))));
}
