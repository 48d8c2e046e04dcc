import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, scratch, sequence, span, within } from '../gates/operation';
import type { Rotate } from '../primitives/majorana';
import { type Grid, gradientWires, rotateByGradient, rotateExactly } from '../primitives/phase-gradient';
import {
  type SquaresBlocks,
  type SquaresForm,
  type SquaresWires,
  squaresAncillas,
  squaresWires,
} from '../squares/form';
import { squaresBlockEncoding, squaresWalkStep, steeredItem } from '../squares/walk';
import type { ItemFlag } from './layout';
import { type ProductBlocks, product } from './product';
import type { SpinorTables } from './tables';

export interface SpinorBlocks extends SquaresBlocks, ProductBlocks {}

/** Wires that live through a whole walk step. */
export interface SpinorWires extends SquaresWires {
  readonly system: readonly number[];
  /** Gradient register, empty where rotations are exact. */
  readonly gradient: readonly number[];
  readonly half: Rotate;
  readonly whole: Rotate;
  /** By numbers on the coarser steps of phases, which the upper wires of the gradient serve. */
  readonly phase: Rotate;
}

/**
 * Allocates the wires of a walk.
 *
 * @param rotations - `gradient`: by addition into a gradient register, which the caller prepares; `exact`: for
 *   simulators only.
 */
export function spinorWires(
  { layout, weights }: SpinorTables,
  machine: Machine,
  rotations: 'gradient' | 'exact',
): SpinorWires {
  const modulusBits = layout.angleBits + 2;
  const system = machine.allocateRegister(2 * layout.orbitals, 'system');
  const gradient =
    rotations === 'gradient' ? machine.allocateRegister(gradientWires(modulusBits), 'gradient') : [];
  const rotate =
    (grid: Grid, spared = 0): Rotate =>
    (target, angle) =>
      rotations === 'gradient'
        ? rotateByGradient(target, angle, gradient.slice(spared), grid)
        : rotateExactly(target, angle, modulusBits - spared, grid);
  return {
    system,
    gradient,
    half: rotate('half steps'),
    whole: rotate('whole steps'),
    phase: rotate('whole steps', layout.angleBits - layout.phaseBits),
    ...squaresWires(weights, layout.hasPaired, layout.partners ? ['partner'] : [], machine),
  };
}

/** Wires whose all-zero state the block encoding is projected on. */
export const spinorAncillas = (wires: SpinorWires): number[] => squaresAncillas(wires);

/** The spinor form of an encoding by squares; see {@link SquaresForm}. */
export function spinorForm(tables: SpinorTables, wires: SpinorWires, blocks: SpinorBlocks): SquaresForm {
  const { layout, items, weights } = tables;
  const isSquare = (t: number) => t < items.length - layout.oneBodyItems;
  const flag: Readonly<Record<ItemFlag, (t: number) => boolean>> = {
    phases: (t) => items[t]!.kind !== 'real',
    'phases of a square': (t) => items[t]!.kind !== 'real' && isSquare(t),
    spins: (t) => items[t]!.kind === 'full',
    'spins of a square': (t) => items[t]!.kind === 'full' && isSquare(t),
    tilted: (t) => items[t]!.axis !== 3,
    'along y': (t) => items[t]!.axis === 2,
    odd: (t) => items[t]!.faces[0]!.odd,
    'sign change': (t) => items[t]!.faces.some((face) => face.sign !== items[t]!.faces[0]!.sign),
  };
  const partner = wires.plus[0] ?? null;
  const productWires = { ...wires, partner };
  return {
    weights,
    blocks,
    system: wires.system,
    isSquare,
    isNegative: (t) => items[t]!.faces[0]!.sign < 0,
    isPaired: (t) => items[t]!.paired,
    flags: (t) => layout.flags.map((name) => flag[name](t)),
    aroundItem({ paired, flags }, square) {
      const { face } = wires;
      const sign = face === null ? nothing : gate('CZ', face, flags[layout.flags.indexOf('sign change')]!);
      if (wires.square === null) return sequence(sign, square([]));
      return scratch(1, ([reversed]) =>
        sequence(
          sign,
          within(
            span('second square', 'select.other', gate('AND', wires.square!, paired, reversed!)),
            square([reversed!]),
          ),
        ),
      );
    },
    product: (use) => product(tables, productWires, blocks, use, use.extra[0] ?? null),
  };
}

/** U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system: see squaresBlockEncoding. */
export function spinorBlockEncoding(
  tables: SpinorTables,
  wires: SpinorWires,
  blocks: SpinorBlocks,
): Operation {
  return squaresBlockEncoding(spinorForm(tables, wires, blocks), wires);
}

/** One step of the walk: the block encoding and the reflection about the ancillas' zero state. */
export function spinorWalkStep(
  tables: SpinorTables,
  wires: SpinorWires,
  blocks: SpinorBlocks,
  control: number | null,
): Operation {
  return squaresWalkStep(spinorForm(tables, wires, blocks), wires, control);
}

/** See {@link steeredItem}. */
export function withSpinorItem(tables: SpinorTables, wires: SpinorWires, blocks: SpinorBlocks): Operation {
  return steeredItem(spinorForm(tables, wires, blocks), wires);
}
