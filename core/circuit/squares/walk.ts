import { type Operation, scratch, sequence, span, within } from '../gates/operation';
import { outputWires, readTable } from '../primitives/reading';
import { flipZeros } from '../primitives/reflection';
import { idleWires, type SquaresForm, type SquaresWires, squaresAncillas } from './form';
import { itemDataTable } from './item-data';
import { drawnData, outerPrepare, outerScratch } from './outer';
import { applied } from './uses';

/**
 * U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system: PREPARE† · SELECT · PREPARE with the squares of the items
 * inside SELECT. Everything allocated inside returns to |0⟩.
 */
export function squaresBlockEncoding(form: SquaresForm, wires: SquaresWires): Operation {
  const prepared = { ...form, facts: form };
  return scratch(outerScratch(prepared), (lent) =>
    within(
      outerPrepare(prepared, wires, lent, idleWires(form.system, wires, [...wires.item, wires.face])),
      squaresItem(form, wires, lent),
    ),
  );
}

/** One step of the walk: the block encoding and the reflection about the ancillas' zero state. */
export function squaresWalkStep(form: SquaresForm, wires: SquaresWires, control: number | null): Operation {
  return sequence(
    squaresBlockEncoding(form, wires),
    span(
      'reflection of the walk',
      'reflections',
      flipZeros(squaresAncillas(wires), control === null ? [] : [control]),
    ),
  );
}

/**
 * Loads what depends on the item alone, applies the item, and takes the data back.
 *
 * @param drawn - wires that the outer PREPARE left in use: where entries have places, their data are there already
 */
function squaresItem(form: SquaresForm, wires: SquaresWires, drawn: readonly number[]): Operation {
  if (form.weights.places) return applied(form, wires, drawn);
  const table = itemDataTable(form);
  return scratch(outputWires(table.width, form.blocks.items), (output) => {
    const idle = idleWires(form.system, wires, wires.item);
    const load = readTable(wires.item, output, table, form.blocks.items, idle);
    return within(span('item data', 'prepare', load), applied(form, wires, output));
  });
}

/** What the outer index leads to, where nothing but its wires (and the uniform number, where entries have places) steers. */
export function steeredItem(form: SquaresForm, wires: SquaresWires): Operation {
  if (!form.weights.places) return squaresItem(form, wires, []);
  const prepared = { ...form, facts: form };
  return scratch(outerScratch(prepared), (lent) =>
    within(
      drawnData(prepared, wires, lent, idleWires(form.system, wires, wires.item)),
      squaresItem(form, wires, lent),
    ),
  );
}
