import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import { aliasSampling } from '../primitives/alias-sampling';
import { type Blocks, lookUp } from '../primitives/look-up';
import type { Rotate } from '../primitives/majorana';
import { gradientWires, rotateByGradient, rotateExactly } from '../primitives/phase-gradient';
import { controlledHadamard, flipZeros, hadamards } from '../primitives/reflection';
import { firstAddresses } from '../primitives/unary-iteration';
import { type ProductBlocks, product, type SpinTreatment } from './product';
import type { TripletTables } from './tables';

export interface WalkBlocks extends ProductBlocks {
  readonly outer: Blocks;
  readonly items: Blocks;
  readonly inner: Blocks;
}

/** Wires that the outer PREPARE puts into superposition. */
export interface PrepareWires {
  /** Item number, lowest bit first. */
  readonly item: readonly number[];
  readonly face: number | null;
  readonly square: number | null;
  readonly outerUniform: readonly number[];
}

/** Wires that live through a whole walk step. `zeros` of the walk's reflection are all but the system's. */
export interface WalkWires extends PrepareWires {
  readonly system: readonly number[];
  /** Gradient register, empty where rotations are exact. */
  readonly gradient: readonly number[];
  readonly rotate: Rotate;
  readonly row: readonly number[];
  readonly innerUniform: readonly number[];
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
  const allocate = (size: number, name: string) => machine.allocateRegister(size, name);
  const modulusBits = tables.angleBits + 2;
  const system = allocate(2 * tables.orbitals, 'system');
  const gradient = rotations === 'gradient' ? allocate(gradientWires(modulusBits), 'gradient') : [];
  return {
    system,
    gradient,
    rotate: (target, angle) =>
      rotations === 'gradient'
        ? rotateByGradient(target, angle, gradient)
        : rotateExactly(target, angle, modulusBits),
    ...prepareWires(tables, machine),
    row: allocate(tables.rowBits, 'row'),
    innerUniform: allocate(tables.bits.innerKeep, 'inner uniform'),
    sigma: allocate(1, 'sigma')[0]!,
    x: allocate(1, 'kind')[0]!,
  };
}

/** Allocates the wires of the outer PREPARE alone. */
export function prepareWires(tables: TripletTables, machine: Machine): PrepareWires {
  const allocate = (size: number, name: string) => machine.allocateRegister(size, name);
  return {
    item: allocate(tables.itemBits, 'item'),
    face: allocate(tables.hasFaces ? 1 : 0, 'face')[0] ?? null,
    square: allocate(tables.hasPaired ? 1 : 0, 'square')[0] ?? null,
    outerUniform: allocate(tables.bits.keep, 'outer uniform'),
  };
}

/** Wires whose all-zero state the block encoding is projected on. */
export function ancillaWires(wires: WalkWires): number[] {
  const single = [wires.face, wires.square].filter((w) => w !== null);
  return [
    ...wires.item,
    ...single,
    ...wires.outerUniform,
    ...wires.row,
    ...wires.innerUniform,
    wires.sigma,
    wires.x,
  ];
}

/**
 * U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system, the ancillas being `ancillaWires` and everything allocated
 * inside returned to |0⟩: PREPARE† · SELECT · PREPARE with the squares of the items inside SELECT.
 */
export function blockEncoding(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): Operation {
  return scratch(outerScratch(tables, blocks), (lent) =>
    within(outerPrepare(tables, wires, blocks, lent), withItemData(tables, wires, spin, blocks)),
  );
}

/** Wires that the outer PREPARE leaves in use: alternate and keep value, and the carries of their comparison. */
export function outerScratch({ outer, bits }: TripletTables, blocks: Pick<WalkBlocks, 'outer'>): number {
  return (outer.indexBits + bits.keep) * blocks.outer.read + bits.keep;
}

/**
 * Puts items, faces and squares into superposition with the square roots of their weights as amplitudes.
 *
 * @param lent - `outerScratch` wires in |0⟩, which stay entangled with the rest until the adjoint.
 */
export function outerPrepare(
  { outer, bits }: TripletTables,
  wires: PrepareWires,
  blocks: Pick<WalkBlocks, 'outer'>,
  lent: readonly number[],
): Operation {
  const index = [...wires.item, ...(wires.face === null ? [] : [wires.face])];
  const sampled = aliasSampling(
    index,
    {
      uniform: wires.outerUniform,
      output: lent.slice(0, -bits.keep),
      carries: lent.slice(-bits.keep),
    },
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

/** One step of the walk: the block encoding and the reflection about the ancillas' zero state. */
export function walkStep(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  control: number | null,
): Operation {
  return sequence(
    blockEncoding(tables, wires, spin, blocks),
    span(
      'reflection of the walk',
      'reflections',
      flipZeros(ancillaWires(wires), control === null ? [] : [control]),
    ),
  );
}

/** Loads what depends on the item alone, applies the item, and takes the data back. */
export function withItemData(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): Operation {
  const { items, rowBits, sizeBits } = tables;
  const width = rowBits + 3;
  const last = items.length - 1;
  const table = {
    addresses: firstAddresses(items.length),
    width,
    bit(t: number, b: number) {
      if (b < rowBits) return sizeBits[t]! > b;
      if (b === rowBits) return items[t]!.sign < 0;
      if (b === rowBits + 1) return items[t]!.paired;
      return t !== last;
    },
  };
  return scratch(width * blocks.items.read, (output) => {
    const sizes = output.slice(0, rowBits);
    const [negative, paired, isSquare] = output.slice(rowBits, width) as [number, number, number];
    const apply = sequence(
      // The one-body product lacks a factor i, which the squares do not; and 2|0⟩⟨0| − 1 is −1 times the flip.
      gate('X', isSquare),
      gate('S', isSquare),
      gate('X', isSquare),
      gate('Z', isSquare),
      gate('Z', negative),
      wires.square === null ? nothing : gate('CZ', paired, wires.square),
      square(tables, wires, spin, blocks, sizes, isSquare),
    );
    return within(span('item data', 'prepare', lookUp(wires.item, output, table, blocks.items)), apply);
  });
}

/**
 * B₂†·R·B₁ with B = PREPARE†·SELECT·PREPARE over the rows of the item. For a square R = 2|0⟩⟨0| − 1 (up to sign)
 * and B₁ = B₂, which gives 2(M/Λ)² − 1 however the angles are rounded; for the one-body item R and the product in
 * B₂ are switched off.
 */
function square(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  sizes: readonly number[],
  isSquare: number,
): Operation {
  const use = (enabled: number | null) => innerBlock(tables, wires, spin, blocks, sizes, enabled);
  const zeros = [...wires.row, ...wires.innerUniform, wires.sigma, wires.x];
  const first = use(null);
  const second = use(isSquare);
  return {
    run(machine) {
      first.run(machine);
      span('inner reflection', 'reflections', flipZeros(zeros, [isSquare])).run(machine);
      second.runAdjoint(machine);
    },
    runAdjoint(machine) {
      second.run(machine);
      span('inner reflection', 'reflections', flipZeros(zeros, [isSquare])).run(machine);
      first.runAdjoint(machine);
    },
  };
}

function innerBlock(
  tables: TripletTables,
  wires: WalkWires,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  sizes: readonly number[],
  enabled: number | null,
): Operation {
  const { bits, rowBits, sizeBits, inner } = tables;
  const address = [...wires.row, ...wires.item];
  const samplingAddress = wires.face === null ? address : [...address, wires.face];
  const entries = new Map(
    inner.flatMap((table) =>
      Array.from(
        table.keep,
        (keep, j) => [table.base + j, { keep, alternate: table.alternate[j]! }] as const,
      ),
    ),
  );
  const allEqual = sizeBits.every((size) => size === rowBits);
  const uniform = allEqual
    ? hadamards(wires.row)
    : repeat(rowBits, (i) => controlledHadamard(sizes[i]!, wires.row[i]!));
  return scratch((rowBits + bits.innerKeep) * blocks.inner.read + bits.innerKeep, (lent) => {
    const prepare = sequence(
      uniform,
      hadamards([wires.sigma, wires.x]),
      aliasSampling(
        wires.row,
        {
          uniform: wires.innerUniform,
          output: lent.slice(0, -bits.innerKeep),
          carries: lent.slice(-bits.innerKeep),
        },
        {
          address: samplingAddress,
          addresses: Uint32Array.from(entries.keys()).sort(),
          alternate: (a) => entries.get(a)!.alternate,
          keep: (a) => entries.get(a)!.keep,
        },
        blocks.inner,
      ),
    );
    return within(
      span('inner PREPARE', 'prepare', prepare),
      product(tables, { ...wires, address }, spin, blocks, enabled),
    );
  });
}
