import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import { aliasSampling } from '../primitives/alias-sampling';
import { controlledSwap } from '../primitives/look-up';
import { outputWires } from '../primitives/reading';
import { controlledHadamard, flipZeros, hadamards } from '../primitives/reflection';
import { idleWires, type SquaresForm, type SquaresWires } from './form';
import { type ItemDataWires, itemDataWires } from './item-data';

/** The item whose data are in the first of the wires. */
export function applied(form: SquaresForm, wires: SquaresWires, output: readonly number[]): Operation {
  const data = itemDataWires(form.weights, form.flags(0).length, output);
  return withChangeApart(data, (item) =>
    sequence(
      // 2|0⟩⟨0| − 1 is −1 times the flip.
      gate('Z', item.isSquare),
      gate('Z', item.negative),
      wires.square === null ? nothing : gate('CZ', item.paired, wires.square),
      form.aroundItem(item, (extra) => twoUses(form, wires, item, extra)),
    ),
  );
}

/** Moves the change of a product out of the wires that have another meaning for other entries: one AND each. */
function withChangeApart(data: ItemDataWires, apply: (item: ItemDataWires) => Operation): Operation {
  const { shared, change } = data;
  if (shared === 0) return apply(data);
  return scratch(shared, (own) =>
    within(
      within(
        asProduct(data),
        span(
          'change of a product',
          'select.other',
          repeat(shared, (i) =>
            sequence(gate('AND', data.isTwofold, change[i]!, own[i]!), gate('CX', own[i]!, change[i]!)),
          ),
        ),
      ),
      apply({ ...data, change: [...own, ...change.slice(shared)] }),
    ),
  );
}

/** Makes `isTwofold` say whether the entry is a product: twofold and no square. */
const asProduct = ({ isSquare, isTwofold }: Pick<ItemDataWires, 'isSquare' | 'isTwofold'>): Operation =>
  gate('CX', isSquare, isTwofold);

/**
 * B₂†·R·B₁ with B = PREPARE†·SELECT·PREPARE over the rows of the item. For a square R = 2|0⟩⟨0| − 1 (up to sign)
 * and B₁ = B₂, which gives 2(M/Λ)² − 1 however the angles are rounded; for a one-body item R and the product in
 * B₂ are switched off; for a product R is, see {@link productOrder}.
 */
function twoUses(
  form: SquaresForm,
  wires: SquaresWires,
  data: ItemDataWires,
  extra: readonly number[],
): Operation {
  if (form.weights.places) return productOrder(form, wires, data, extra);
  const address = [...wires.row, ...wires.item];
  const use = (second: boolean) =>
    innerBlock(
      form,
      wires,
      data,
      address,
      form.product({ ...data, face: wires.face, address, second, extra }),
    );
  return oneAfterTheOther(use(false), innerReflection(wires, data), use(true));
}

/** second†·between·first, `between` its own adjoint. */
function oneAfterTheOther(first: Operation, between: Operation, second: Operation): Operation {
  return {
    run(machine) {
      first.run(machine);
      between.run(machine);
      second.runAdjoint(machine);
    },
    runAdjoint(machine) {
      second.run(machine);
      between.runAdjoint(machine);
      first.runAdjoint(machine);
    },
  };
}

function innerReflection(wires: SquaresWires, { isSquare }: ItemDataWires): Operation {
  const zeros = [...wires.row, ...wires.innerUniform, ...wires.plus];
  return span('inner reflection', 'reflections', flipZeros(zeros, [isSquare]));
}

/**
 * Both uses where some entries are products of two vectors.
 *
 * P_n(τ)·P_m(σ) goes from order 0 to order 1, with the spins σ and τ changing wires; from order 1 to 0 the vectors
 * have changed places, and so have the spins. The two are each other's adjoints, so the whole is Hermitian, and with
 * the order and both spins projected on the plus state it is ½{M_m, M_n}, M = ½(P_↑ + P_↓). One AND a bit in which
 * vectors are told apart, and one for the spins.
 */
function productOrder(
  form: SquaresForm,
  wires: SquaresWires,
  data: ItemDataWires,
  extra: readonly number[],
): Operation {
  const { rowBits } = form.weights;
  const { place, change, isTwofold } = data;
  const order = wires.square!;
  const address = [...wires.row, ...place.slice(rowBits)];
  const product = form.product;
  const exchangeSpins = within(
    asProduct(data),
    span(
      'spins of a product',
      'select.other',
      repeat(wires.standIns.length, (i) => swapped(isTwofold, wires.plus[i]!, wires.standIns[i]!)),
    ),
  );
  return sequence(
    scratch(change.length, (first) => {
      const use = (second: boolean) => {
        const moved = sequence(
          repeat(change.length, (i) => gate('CX', first[i]!, place[i]!)),
          second ? repeat(change.length, (i) => gate('CX', change[i]!, place[i]!)) : nothing,
          repeat(rowBits, (i) => gate('CX', place[i]!, wires.row[i]!)),
        );
        return within(
          moved,
          innerBlock(form, wires, data, address, product({ ...data, address, second, extra })),
        );
      };
      return within(
        span(
          'order of a product',
          'select.other',
          repeat(change.length, (i) => gate('AND', order, change[i]!, first[i]!)),
        ),
        oneAfterTheOther(use(false), sequence(innerReflection(wires, data), exchangeSpins), use(true)),
      );
    }),
    within(asProduct(data), gate('CX', isTwofold, order)),
  );
}

function swapped(control: number, a: number, b: number): Operation {
  const run = (machine: Machine) => controlledSwap(machine, control, a, b);
  return { run, runAdjoint: run };
}

/** @param address - of the row, without a face that belongs to the outer index or the entry */
function innerBlock(
  form: SquaresForm,
  wires: SquaresWires,
  { sizes, face: faceOfEntry }: ItemDataWires,
  rowAddress: readonly number[],
  product: Operation,
): Operation {
  const { keepBits, rowBits, sizeBits, inner, places } = form.weights;
  const { innerKeep } = keepBits;
  const face = wires.face ?? faceOfEntry;
  const address = [...rowAddress, ...(face === null ? [] : [face])];
  const entries = new Map(
    inner.flatMap((table) =>
      // The index that alternates stand for is the low part of the address.
      Array.from(
        table.keep,
        (keep, j) =>
          [table.base + j, { keep, alternate: (table.base % 2 ** rowBits) + table.alternate[j]! }] as const,
      ),
    ),
  );
  const allEqual = !places && sizeBits.every((size) => size === rowBits);
  const uniform = allEqual
    ? hadamards(wires.row)
    : repeat(rowBits, (i) => controlledHadamard(sizes[i]!, wires.row[i]!));
  return scratch(outputWires(rowBits + innerKeep, form.blocks.inner) + innerKeep, (lent) => {
    const prepare = sequence(
      uniform,
      hadamards(wires.plus),
      aliasSampling(
        wires.row,
        {
          uniform: wires.innerUniform,
          output: lent.slice(0, -innerKeep),
          carries: lent.slice(-innerKeep),
          idle: idleWires(form.system, wires, address),
        },
        {
          address,
          addresses: Uint32Array.from(entries.keys()).sort(),
          alternate: (a) => entries.get(a)!.alternate,
          keep: (a) => entries.get(a)!.keep,
        },
        form.blocks.inner,
      ),
    );
    return within(span('inner PREPARE', 'prepare', prepare), product);
  });
}
