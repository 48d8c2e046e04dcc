import {
  type AliasTable,
  aliasWord,
  bitsFor,
  comparison,
  controlledSwap,
  uniformSuperposition,
} from '../formulas';
import { gate, type LookupPolicy, lookup, type Piece, type Register, scope, unlookup } from './scope';

/** Registers of one alias-sampled index: they stay alive until PREPARE is undone. */
export function aliasRegisters(label: string, table: AliasTable): Register[] {
  return [
    { name: `${label} index`, qubits: bitsFor(table.rows) },
    { name: `${label} rotation qubit`, qubits: 1 },
    { name: `${label} alternate index and keep value`, qubits: aliasWord(table).bits },
    { name: `${label} comparison register`, qubits: table.keepBits },
    { name: `${label} flag`, qubits: 1 },
  ];
}

/** PREPARE of one index: equal superposition, look-up, comparison, swap. */
export function prepare(label: string, table: AliasTable, policy: LookupPolicy, main = false): Piece {
  return scope(
    `${label} PREPARE`,
    [],
    [
      gate(`${label} equal superposition`, 'prepare', uniformSuperposition(table.rows)),
      lookup(`${label} alias look-up`, 'prepare', { ...aliasWord(table), main }, policy),
      ...aliasGates(label, table),
    ],
  );
}

/** PREPARE† of one index. */
export function unprepare(label: string, table: AliasTable, policy: LookupPolicy): Piece {
  return scope(
    `${label} PREPARE†`,
    [],
    [
      ...aliasGates(label, table),
      unlookup(`${label} alias erasure`, 'prepare', aliasWord(table), policy),
      gate(`${label} equal superposition, undone`, 'prepare', uniformSuperposition(table.rows)),
    ],
  );
}

/** Comparison and swap of an alias-sampled index; their own inverse. */
export function aliasGates(label: string, table: AliasTable): Piece[] {
  return [
    gate(`${label} comparison`, 'prepare', comparison(table.keepBits)),
    gate(`${label} index swap`, 'prepare', controlledSwap(table.indexBits)),
  ];
}
