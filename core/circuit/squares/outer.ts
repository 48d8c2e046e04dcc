import { nothing, type Operation, sequence, span } from '../gates/operation';
import { aliasData, aliasSampling } from '../primitives/alias-sampling';
import { borrowedWires } from '../primitives/borrowed-look-up';
import { outputWires } from '../primitives/reading';
import { hadamards } from '../primitives/reflection';
import { firstAddresses } from '../primitives/unary-iteration';
import type { PrepareWires, SquaresBlocks, SquaresForm } from './form';
import { type ItemFacts, itemDataTable, itemDataWidth } from './item-data';

/** What the outer PREPARE depends on; `facts` only where it reads the data of entries. */
type Prepared = Pick<SquaresForm, 'weights' | 'blocks'> & { readonly facts?: ItemFacts };

function factsOf({ facts }: Prepared): ItemFacts {
  if (!facts) throw new RangeError('entries with places are prepared together with their data');
  return facts;
}

/** Wires that the outer PREPARE leaves in use: alternate and keep value, and the carries of their comparison. */
export function outerScratch(prepared: Prepared): number {
  const { weights, blocks } = prepared;
  const { keep } = weights.keepBits;
  const read = weights.places
    ? 2 * itemDataWidth(weights, factsOf(prepared).flags(0).length)
    : weights.outer.indexBits;
  return outputWires(read + keep, blocks.outer) + keep;
}

/** Wires that the look-up of the outer PREPARE borrows. */
export const outerBorrows = ({ outer: { read, slice } }: Pick<SquaresBlocks, 'outer'>): number =>
  slice === undefined ? 0 : borrowedWires({ block: read, slice });

/**
 * Puts items, faces and squares into superposition with the square roots of their weights as amplitudes.
 *
 * @param lent - `outerScratch` wires in |0⟩, which stay entangled with the rest until the adjoint.
 * @param idle - wires that its look-up may borrow.
 */
export function outerPrepare(
  prepared: Prepared,
  wires: PrepareWires,
  lent: readonly number[],
  idle: readonly number[],
): Operation {
  const { weights, blocks } = prepared;
  const { outer, keepBits, places } = weights;
  const index = [...wires.item, ...(wires.face === null ? [] : [wires.face])];
  const sampled = places
    ? sequence(hadamards(wires.outerUniform), drawnData(prepared, wires, lent, idle))
    : aliasSampling(
        index,
        samplingWires(wires, lent, keepBits.keep, idle),
        {
          address: index,
          addresses: firstAddresses(2 ** index.length),
          alternate: (i) => outer.alternate[i]!,
          keep: (i) => outer.keep[i]!,
        },
        blocks.outer,
      );
  return span(
    'outer PREPARE',
    'prepare',
    sequence(hadamards(index), wires.square === null ? nothing : hadamards([wires.square]), sampled),
  );
}

const samplingWires = (
  wires: PrepareWires,
  lent: readonly number[],
  keepBits: number,
  idle: readonly number[],
) => ({
  uniform: wires.outerUniform,
  output: lent.slice(0, -keepBits),
  carries: lent.slice(-keepBits),
  idle,
});

/** Brings the data of the entry that index and uniform number draw into the first of the lent wires. */
export function drawnData(
  prepared: Prepared,
  wires: PrepareWires,
  lent: readonly number[],
  idle: readonly number[],
): Operation {
  const { outer, keepBits } = prepared.weights;
  const table = itemDataTable(factsOf(prepared));
  return aliasData(
    samplingWires(wires, lent, keepBits.keep, idle),
    {
      address: wires.item,
      addresses: firstAddresses(2 ** wires.item.length),
      alternate: (i) => outer.alternate[i]!,
      keep: (i) => outer.keep[i]!,
      dataBits: table.width,
      data: table.bit,
    },
    prepared.blocks.outer,
  );
}
