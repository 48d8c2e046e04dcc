import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import { carryStep, lessThanConstant } from '../primitives/arithmetic';
import type { Blocks } from '../primitives/look-up';
import { outputWires, readTable } from '../primitives/reading';
import { flipZeros, hadamards } from '../primitives/reflection';
import { firstAddresses } from '../primitives/unary-iteration';
import type { SparseLayout } from './layout';
import { multiple, multipleWires } from './multiple';
import { type PlusWires, select } from './select';
import { rowBit, type SparseTables } from './tables';

/** Wires that live through a whole walk step. `zeros` of the walk's reflection are all but the system's. */
export interface SparseWires {
  readonly system: readonly number[];
  /** Lower bits of the address. */
  readonly low: readonly number[];
  /** u: upper bits of the address and the number that alias sampling compares. */
  readonly uniform: readonly number[];
  /** Splits shared coefficients between the two spin–orbit kinds. */
  readonly share: readonly number[];
  readonly plus: PlusWires;
}

export function sparseWires(layout: SparseLayout, machine: Machine): SparseWires {
  const { address, share, exchanged, spins } = layout;
  const isFixed = spins === 'fixed';
  const allocate = (size: number, name: string) => machine.allocateRegister(size, name);
  return {
    system: allocate(2 * layout.orbitals, 'system'),
    low: allocate(address.lowBits, 'row low'),
    uniform: allocate(address.uniformBits, 'uniform'),
    share: allocate(share?.bits ?? 0, 'share'),
    plus: {
      order: allocate(isFixed ? 0 : 1, 'order')[0] ?? null,
      spins: allocate(isFixed ? 1 : 2, 'sigma'),
      kinds: allocate(2, 'kind') as [number, number],
      placing: allocate(exchanged ? 1 : 0, 'placing')[0] ?? null,
    },
  };
}

/** Wires whose all-zero state the block encoding is projected on. */
export function sparseAncillas(wires: SparseWires): number[] {
  return [...wires.low, ...wires.uniform, ...ownWires(wires)];
}

/** Index wires that no address is made of. */
function ownWires({ share, plus }: SparseWires): number[] {
  const some = (wire: number | null) => (wire === null ? [] : [wire]);
  return [...share, ...some(plus.order), ...plus.spins, ...plus.kinds, ...some(plus.placing)];
}

/** Wires that the look-up may borrow; {@link sparseIdleQubits} many. */
const sparseIdle = (wires: SparseWires): number[] => [...wires.system, ...ownWires(wires)];

export const sparseIdleQubits = ({ orbitals, share, exchanged, spins }: SparseLayout): number =>
  2 * orbitals + (share?.bits ?? 0) + (spins === 'fixed' ? 3 : 5) + (exchanged ? 1 : 0);

/**
 * U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system, the ancillas being `sparseAncillas` and everything allocated
 * inside returned to |0⟩: PREPARE† · SELECT · PREPARE, and U² = 1.
 */
export function sparseBlockEncoding(tables: SparseTables, wires: SparseWires, blocks: Blocks): Operation {
  return within(hadamards(sparseAncillas(wires)), withTerm(tables, wires, blocks));
}

/** One step of the walk: the block encoding and the reflection about the ancillas' zero state. */
export function sparseWalkStep(
  tables: SparseTables,
  wires: SparseWires,
  blocks: Blocks,
  control: number | null,
): Operation {
  return sequence(
    sparseBlockEncoding(tables, wires, blocks),
    span(
      'reflection of the walk',
      'reflections',
      flipZeros(sparseAncillas(wires), control === null ? [] : [control]),
    ),
  );
}

/** Wires that hold what PREPARE works out, while SELECT runs. */
export function preparedWires(
  { address, keepBits, wordWidth, rowWidth, share }: SparseLayout,
  blocks: Blocks,
) {
  return {
    multiple: multipleWires(address.factor, address.uniformBits),
    output: outputWires(rowWidth, blocks),
    carries: keepBits,
    chosen: wordWidth,
    share: share?.bits ?? 0,
  };
}

/** PREPARE after its Hadamard gates, and what it leaves for SELECT. */
interface Prepared {
  readonly prepare: Operation;
  /** Describes a coefficient. */
  readonly word: readonly number[];
  /** Whether a shared coefficient acts as spin–other-orbit; null where none is shared. */
  readonly other: number | null;
}

/** Wires in |0⟩ that {@link sparsePrepare} takes. */
export function preparedSize(layout: SparseLayout, blocks: Blocks): number {
  return Object.values(preparedWires(layout, blocks)).reduce((sum, size) => sum + size, 0);
}

/**
 * Finds the word of a coefficient from the address numbers.
 *
 * @param lent - `preparedSize` wires in |0⟩, which stay in use until the adjoint.
 */
export function sparsePrepare(
  tables: SparseTables,
  wires: SparseWires,
  blocks: Blocks,
  lent: readonly number[],
): Prepared {
  const { layout } = tables;
  const { address, keepBits, wordWidth } = layout;
  const sizes = preparedWires(layout, blocks);
  const free = [...lent];
  const take = (size: number) => free.splice(0, size);
  const { compute, value } = multiple(address.factor, wires.uniform, take(sizes.multiple));
  const output = take(sizes.output);
  const carries = take(sizes.carries);
  const chosen = take(sizes.chosen);
  const shareWires = take(sizes.share);
  const { uniformBits } = address;
  const word = output.slice(0, wordWidth);
  const change = output.slice(wordWidth, 2 * wordWidth);
  const table = {
    addresses: firstAddresses(address.rows),
    width: layout.rowWidth,
    bit: (row: number, bit: number) => rowBit(tables, row, bit),
  };
  const stays = carries[keepBits - 1]!;
  const prepare = sequence(
    span('row number', 'prepare', compute),
    span(
      'coefficient look-up',
      'prepare',
      readTable(
        [...wires.low, ...value.slice(uniformBits)],
        output,
        table,
        blocks,
        sparseIdle(wires),
        null,
        'in output',
      ),
    ),
    span(
      'comparison',
      'prepare',
      lessThan(
        value.slice(uniformBits - keepBits, uniformBits),
        output.slice(2 * wordWidth, layout.rowWidth),
        carries,
      ),
    ),
    span(
      'choice of the word',
      'prepare',
      sequence(
        gate('X', stays),
        repeat(wordWidth, (i) =>
          sequence(gate('AND', stays, change[i]!, chosen[i]!), gate('CX', chosen[i]!, word[i]!)),
        ),
      ),
    ),
    layout.share === null
      ? nothing
      : span('spin–orbit kind', 'prepare', lessThanConstant(wires.share, layout.share.threshold, shareWires)),
  );
  return { prepare, word, other: shareWires[shareWires.length - 1] ?? null };
}

/** Finds the word of a coefficient, applies SELECT, and takes the word back. */
export function withTerm(tables: SparseTables, wires: SparseWires, blocks: Blocks): Operation {
  const { layout, program } = tables;
  return scratch(preparedSize(layout, blocks), (lent) => {
    const { prepare, word, other } = sparsePrepare(tables, wires, blocks, lent);
    return within(prepare, select(layout, wires.system, word, wires.plus, other, program.otherSign));
  });
}

/** [x < y] as the last carry of y + (2^ℵ − 1 − x); x, y are left changed, and all carries kept, until taken back. */
function lessThan(x: readonly number[], y: readonly number[], carries: readonly number[]): Operation {
  return sequence(
    repeat(x.length, (i) => gate('X', x[i]!)),
    repeat(x.length, (i) => carryStep(x[i]!, y[i]!, i === 0 ? -1 : carries[i - 1]!, carries[i]!)),
  );
}
