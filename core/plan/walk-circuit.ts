import {
  type Blocks,
  bitsFor,
  hadamards,
  type ItemFacts,
  type LookupPolicy,
  type Machine,
  type Operation,
  outerBorrows,
  outerPrepare,
  outerScratch,
  preparedSize,
  prepareGradient,
  prepareWires,
  type SparseTables,
  type SpinorBlocks,
  type SpinorTables,
  type SquaresBlocks,
  sparseAncillas,
  sparseBlockEncoding,
  sparsePrepare,
  sparseStep,
  sparseTables,
  sparseWalkStep,
  sparseWires,
  spinorBlockEncoding,
  spinorStep,
  spinorTables,
  spinorWalkStep,
  spinorWires,
  type TripletTables,
  tripletBlockEncoding,
  tripletFacts,
  tripletStep,
  tripletTables,
  type WalkBlocks,
  type WeightTables,
  walkStep,
  walkWires,
} from '../circuit';
import { type Encoding, formatVariant, type VariantName } from '../encode';
import { InputError } from '../job';
import type { VariantEstimate } from './comparison';

export const CIRCUIT_PARTS = ['walk-step', 'block-encoding', 'prepare'] as const;
export type CircuitPart = (typeof CIRCUIT_PARTS)[number];

/** The walk of one encoding, its tables rounded, ready to be emitted any number of times. */
export interface WalkCircuit {
  /** Allocates the part's wires, named, and emits it once on them. What PREPARE alone lends stays in use. */
  emit(part: CircuitPart, machine: Machine, options: EmitOptions): void;
}

export interface EmitOptions {
  /** Wire that switches the reflection of the walk step; null: none. */
  readonly control: number | null;
  /** Whether the phase gradient, which a run prepares once, is prepared here. */
  readonly withGradient: boolean;
}

/** What of an estimate decides the circuit. */
export type CircuitEstimate = Pick<VariantEstimate, 'bits' | 'walkSteps'>;

/** Bits of the phase register of a run. */
export const phaseBitsOf = ({ walkSteps }: CircuitEstimate): number => bitsFor(walkSteps + 1);

/**
 * The circuit that an estimate stands for, with the same bits and blocks.
 *
 * @throws InputError `no-circuit` for encodings whose circuit is not emitted.
 */
export function walkCircuit(
  encoding: Encoding,
  variant: VariantName,
  estimate: CircuitEstimate,
  qubitsMax: number | null,
): WalkCircuit {
  const { keep, rotation } = estimate.bits;
  const widths = { keepBits: keep, rotationBits: rotation, phaseBits: phaseBitsOf(estimate) };
  const policy: LookupPolicy = { mode: variant.lookup, block: 'auto', qubitCap: qubitsMax };
  const { items, spinors, terms } = encoding.shape;
  if (encoding.program && items) {
    const { blocks } = tripletStep(items, variant.spin, widths, policy);
    const tables = tripletTables(encoding.program(), { keep, innerKeep: keep, rotation });
    return tripletWalk(tables, variant.spin, blocks);
  }
  if (encoding.spinorProgram && spinors) {
    const { layout, blocks } = spinorStep(spinors, widths, policy);
    const bits = { keep, innerKeep: keep, rotation };
    return spinorWalk(spinorTables(encoding.spinorProgram(), bits, layout.merged), blocks);
  }
  if (encoding.sparseProgram && terms) {
    const { bits, refinement, blocks } = sparseStep(terms, widths, policy);
    return sparseWalk(sparseTables(encoding.sparseProgram(), bits, refinement), blocks);
  }
  throw new InputError({
    code: 'no-circuit',
    where: `variant "${formatVariant(variant)}"`,
    found: 'an encoding without an emitted circuit',
    expected: 'triplet factors, spinor factors or sparse terms of spatial orbitals',
    mend: 'Choose such a variant, e.g. triplet/separate/swap-layers/median/clean.',
  });
}

function tripletWalk(tables: TripletTables, spin: VariantName['spin'], blocks: WalkBlocks): WalkCircuit {
  return squaresWalk({
    weights: tables,
    facts: tripletFacts(tables),
    hasPaired: tables.hasPaired,
    blocks,
    open(machine) {
      const wires = walkWires(tables, machine, 'gradient');
      return {
        gradient: wires.gradient,
        step: (control) => walkStep(tables, wires, spin, blocks, control),
        blockEncoding: () => tripletBlockEncoding(tables, wires, spin, blocks),
      };
    },
  });
}

function spinorWalk(tables: SpinorTables, blocks: SpinorBlocks): WalkCircuit {
  return squaresWalk({
    weights: tables.weights,
    hasPaired: tables.layout.hasPaired,
    blocks,
    open(machine) {
      const wires = spinorWires(tables, machine, 'gradient');
      return {
        gradient: wires.gradient,
        step: (control) => spinorWalkStep(tables, wires, blocks, control),
        blockEncoding: () => spinorBlockEncoding(tables, wires, blocks),
      };
    },
  });
}

/** A form of encoding by squares, on wires of its own. */
interface SquaresEmitter {
  readonly weights: WeightTables;
  readonly facts?: ItemFacts;
  readonly hasPaired: boolean;
  readonly blocks: SquaresBlocks;
  open(machine: Machine): {
    readonly gradient: readonly number[];
    readonly step: (control: number | null) => Operation;
    readonly blockEncoding: () => Operation;
  };
}

function squaresWalk({ hasPaired, open, ...prepared }: SquaresEmitter): WalkCircuit {
  const { weights, blocks } = prepared;
  return {
    emit(part, machine, { control, withGradient }) {
      if (part === 'prepare') {
        const lent = machine.allocateRegister(outerScratch(prepared), 'alternate and keep');
        const idle = machine.allocateRegister(outerBorrows(blocks), 'borrowed');
        outerPrepare(prepared, prepareWires(weights, hasPaired, machine), lent, idle).run(machine);
        return;
      }
      const { gradient, step, blockEncoding } = open(machine);
      if (withGradient) {
        machine.enter('phase gradient, once a run');
        prepareGradient(machine, gradient);
        machine.leave();
      }
      (part === 'walk-step' ? step(control) : blockEncoding()).run(machine);
    },
  };
}

function sparseWalk(tables: SparseTables, blocks: Blocks): WalkCircuit {
  return {
    emit(part, machine, { control }) {
      const wires = sparseWires(tables.layout, machine);
      if (part === 'prepare') {
        const lent = machine.allocateRegister(preparedSize(tables.layout, blocks), 'prepared');
        hadamards(sparseAncillas(wires)).run(machine);
        sparsePrepare(tables, wires, blocks, lent).prepare.run(machine);
        return;
      }
      const operation =
        part === 'walk-step'
          ? sparseWalkStep(tables, wires, blocks, control)
          : sparseBlockEncoding(tables, wires, blocks);
      operation.run(machine);
    },
  };
}
