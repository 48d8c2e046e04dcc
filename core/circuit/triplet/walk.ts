import type { Machine } from '../gates/machine';
import { gate, type Operation, sequence } from '../gates/operation';
import type { Rotate } from '../primitives/majorana';
import { gradientWires, rotateByGradient, rotateExactly } from '../primitives/phase-gradient';
import {
  idleWires,
  type SquaresBlocks,
  type SquaresForm,
  type SquaresWires,
  squaresAncillas,
  squaresWires,
} from '../squares/form';
import type { ItemFacts } from '../squares/item-data';
import { squaresBlockEncoding, squaresWalkStep, steeredItem } from '../squares/walk';
import { type ProductBlocks, product, type SpinTreatment } from './product';
import type { TripletTables } from './tables';

export interface WalkBlocks extends SquaresBlocks, ProductBlocks {}

/** Wires that live through a whole walk step. `zeros` of the walk's reflection are all but the system's. */
export interface WalkWires extends SquaresWires {
  readonly system: readonly number[];
  /** Gradient register, empty where rotations are exact. */
  readonly gradient: readonly number[];
  readonly rotate: Rotate;
  readonly sigma: number;
  readonly x: number;
}

/**
 * Allocates the wires of a walk.
 *
 * @param rotations - `gradient`: by addition into a gradient register, which the caller prepares; `exact`: for
 *   simulators only.
 */
export function walkWires(
  tables: TripletTables,
  machine: Machine,
  rotations: 'gradient' | 'exact',
): WalkWires {
  const modulusBits = tables.angleBits + 2;
  const system = machine.allocateRegister(2 * tables.orbitals, 'system');
  const gradient =
    rotations === 'gradient' ? machine.allocateRegister(gradientWires(modulusBits), 'gradient') : [];
  const index = squaresWires(tables, tables.hasPaired, ['sigma', 'kind'], machine, ['second sigma']);
  return {
    system,
    gradient,
    rotate: (target, angle) =>
      rotations === 'gradient'
        ? rotateByGradient(target, angle, gradient)
        : rotateExactly(target, angle, modulusBits),
    ...index,
    sigma: index.plus[0]!,
    x: index.plus[1]!,
  };
}

/** Wires whose all-zero state the block encoding is projected on. */
export const ancillaWires = (wires: WalkWires): number[] => squaresAncillas(wires);

/** What the triplet form says of its items. */
export function tripletFacts(tables: TripletTables): ItemFacts {
  const { items } = tables;
  return {
    weights: tables,
    isSquare: (t) => t < items.length - 1,
    isNegative: (t) => items[t]!.sign < 0,
    isPaired: (t) => items[t]!.paired,
    flags: () => [],
  };
}

/** The triplet form of an encoding by squares; see {@link SquaresForm}. */
export function tripletForm(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): SquaresForm {
  return {
    ...tripletFacts(tables),
    blocks,
    system: wires.system,
    // The one-body product lacks a factor i, which cancels where there are two uses.
    aroundItem: ({ isTwofold }, square) =>
      sequence(gate('X', isTwofold), gate('S', isTwofold), gate('X', isTwofold), square([])),
    product: ({ address, face, isTwofold, second }) =>
      product(
        tables,
        { ...wires, face, address, idle: idleWires(wires.system, wires, address) },
        spin,
        blocks,
        second ? isTwofold : null,
      ),
  };
}

/** U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system: see squaresBlockEncoding. */
export function blockEncoding(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): Operation {
  return squaresBlockEncoding(tripletForm(tables, wires, spin, blocks), wires);
}

/** One step of the walk: the block encoding and the reflection about the ancillas' zero state. */
export function walkStep(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  control: number | null,
): Operation {
  return squaresWalkStep(tripletForm(tables, wires, spin, blocks), wires, control);
}

/** See {@link steeredItem}. */
export function withItemData(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): Operation {
  return steeredItem(tripletForm(tables, wires, spin, blocks), wires);
}
