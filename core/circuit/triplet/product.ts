import type { Machine } from '../gates/machine';
import {
  adjoint,
  gate,
  nothing,
  type Operation,
  repeat,
  scratch,
  sequence,
  span,
  within,
} from '../gates/operation';
import { type Blocks, erase, type Table } from '../primitives/look-up';
import { majoranaRotation, type Rotate, swapLayer } from '../primitives/majorana';
import { contentAfterReading, outputWires, readTable } from '../primitives/reading';
import { FACE_FLAGS, IS_PAIR, ROW_FLAGS } from './rounded-row';
import { isPairRow, rowBit, type TripletTables } from './tables';

/** How spin enters SELECT. */
export type SpinTreatment = 'index' | 'swap-layers';

/** Wires that a product acts on or is steered by. */
export interface ProductWires {
  readonly system: readonly number[];
  /** The rotation by a loaded angle. */
  readonly rotate: Rotate;
  readonly sigma: number;
  readonly x: number;
  /** Which of the two squares of a paired item; null where no item is paired. */
  readonly square: number | null;
  /** Face of the item; null where no item has two. */
  readonly face: number | null;
  /** Row address, lowest bit first. */
  readonly address: readonly number[];
  /** Wires that a look-up may borrow. */
  readonly idle: readonly number[];
}

export interface ProductBlocks {
  readonly rows: Blocks;
  readonly pairs: Blocks;
}

/**
 * SELECT of one product: on row, σ, x it applies ±γ_{u,σ,x} γ_{v,σ⊕s,x⊕r}, the row operation without its factor i.
 * Its adjoint applies the adjoint, at the same cost.
 *
 * @param enabled - wire that must be 1 for anything to happen (the idle use of the one-body item), or null. Only
 *   the central X and the look-ups depend on it: everything else cancels by itself.
 */
export function product(
  tables: TripletTables,
  wires: ProductWires,
  spin: SpinTreatment,
  blocks: ProductBlocks,
  enabled: number | null,
): Operation {
  const run = (machine: Machine, first: 'u' | 'v') => {
    const output = machine.allocateRegister(outputWires(tables.rowWidth, blocks.rows));
    const row = splitRow(tables, output);
    const load = rowTable(tables, first);
    named(machine, 'angle look-up', 'select.lookup', () =>
      readTable(wires.address, output, load, blocks.rows, wires.idle, enabled).run(machine),
    );
    const body = productBody(tables, wires, spin, blocks, enabled, row);
    if (first === 'v') body.run(machine);
    else body.runAdjoint(machine);
    // The front of the register now holds the other vector, the copies behind it what was read at first.
    const now = rowTable(tables, first === 'v' ? 'u' : 'v');
    const behind = contentAfterReading(load, blocks.rows);
    named(machine, 'angle erasure', 'select.lookup', () =>
      erase(
        machine,
        wires.address,
        output,
        tables.rowAddresses,
        (address, position) =>
          position < tables.rowWidth ? now.bit(address, position) : behind(address, position),
        blocks.rows.erase,
        enabled,
      ),
    );
    machine.releaseRegister(output);
  };
  return { run: (machine) => run(machine, 'v'), runAdjoint: (machine) => run(machine, 'u') };
}

function named(machine: Machine, name: string, part: 'select.lookup', use: () => void): void {
  machine.enter(name, part);
  use();
  machine.leave();
}

function rowTable(tables: TripletTables, vector: 'u' | 'v'): Table {
  return {
    addresses: tables.rowAddresses,
    width: tables.rowWidth,
    bit: (address, bit) => rowBit(tables, vector, address, bit),
  };
}

interface RowWires {
  readonly angles: readonly (readonly number[])[];
  /** s, r, m, sign. */
  readonly signature: readonly number[];
  readonly isPair: number;
  readonly signOfPair: number;
  readonly faceChange: readonly number[];
}

function splitRow(tables: TripletTables, output: readonly number[]): RowWires {
  const { angleBits, orbitals } = tables;
  const flags = output.slice((orbitals - 1) * angleBits, tables.rowWidth);
  return {
    angles: Array.from({ length: orbitals - 1 }, (_, p) => output.slice(p * angleBits, (p + 1) * angleBits)),
    signature: flags.slice(0, 4),
    isPair: flags[IS_PAIR]!,
    signOfPair: flags[IS_PAIR + 1]!,
    faceChange: flags.slice(ROW_FLAGS, ROW_FLAGS + FACE_FLAGS),
  };
}

/** Everything between loading the row and erasing it. */
function productBody(
  tables: TripletTables,
  wires: ProductWires,
  spin: SpinTreatment,
  blocks: ProductBlocks,
  enabled: number | null,
  row: RowWires,
): Operation {
  const [s, r, m, sign] = row.signature as [number, number, number, number];
  const { sigma, x } = wires;
  const majorana = (spinWire: number, kindWire: number) =>
    rotatedMajorana(tables, wires, spin, enabled, row.angles, spinWire, kindWire);
  const layer = (control: number) =>
    spin === 'swap-layers' ? span('swap layer', 'select.swaps', swapLayer(control, wires.system)) : nothing;
  const signs = sequence(
    gate('CZ', x, r),
    gate('CZ', sigma, m),
    gate('Z', sign),
    wires.square === null ? nothing : gate('CZ', wires.square, row.signOfPair),
  );
  // σ ⊕ s and x ⊕ r are written over s and r, and taken back at the end.
  const secondSpin = gate('CX', sigma, s);
  const secondKind = gate('CX', x, r);
  const both = sequence(
    within(sequence(secondSpin, secondKind), sequence(layer(s), majorana(s, r))),
    layer(s),
    span('second vector', 'select.lookup', exchangeVectors(tables, wires, blocks, row)),
    majorana(sigma, x),
    layer(sigma),
    signs,
  );
  return faceApplied(wires, row, both);
}

/** Turns s, r, m, sign into those of the item's face while `inner` runs: one AND for each. */
function faceApplied(wires: ProductWires, row: RowWires, inner: Operation): Operation {
  const face = wires.face;
  if (face === null) return inner;
  return scratch(FACE_FLAGS, (changes) =>
    within(
      span(
        'face of the row',
        'select.other',
        repeat(FACE_FLAGS, (i) =>
          sequence(
            gate('AND', face, row.faceChange[i]!, changes[i]!),
            gate('CX', changes[i]!, row.signature[i]!),
          ),
        ),
      ),
      inner,
    ),
  );
}

/** Whether a look-up can be added onto wires in use: row by row, or through borrowed wires. */
export const addsOnto = ({ read, slice }: Blocks): boolean => read === 1 || slice !== undefined;

/** XORs (angles of u) ⊕ (angles of v) into the angle register where the row has two vectors: self-inverse. */
function exchangeVectors(
  tables: TripletTables,
  wires: ProductWires,
  blocks: ProductBlocks,
  row: RowWires,
): Operation {
  const addresses = tables.rowAddresses.filter((address) => isPairRow(tables, address));
  if (addresses.length === 0) return nothing;
  const angles = row.angles.flat();
  const table: Table = {
    addresses,
    width: angles.length,
    bit: (address, bit) => rowBit(tables, 'u', address, bit) !== rowBit(tables, 'v', address, bit),
  };
  if (addsOnto(blocks.pairs)) {
    const once = readTable(wires.address, angles, table, blocks.pairs, wires.idle, row.isPair);
    return { run: (machine) => once.run(machine), runAdjoint: (machine) => once.run(machine) };
  }
  return scratch(outputWires(angles.length, blocks.pairs), (output) =>
    within(
      readTable(wires.address, output, table, blocks.pairs, wires.idle, row.isPair),
      repeat(angles.length, (i) => gate('CX', output[i]!, angles[i]!)),
    ),
  );
}

/** γ_{w,σ,x} with w the vector of the loaded angles, where spin and kind are given by wires. */
function rotatedMajorana(
  tables: TripletTables,
  wires: ProductWires,
  spin: SpinTreatment,
  enabled: number | null,
  angles: readonly (readonly number[])[],
  spinWire: number,
  kindWire: number,
): Operation {
  const { system, rotate } = wires;
  const spins = spin === 'index' ? ([0, 1] as const) : ([0] as const);
  const modes = Array.from({ length: tables.orbitals }, (_, p) => spins.map((s) => 2 * p + s)).flat();
  // (X+Y)/√2 = T X T† lies midway between the two kinds; a controlled X on every mode exchanges them, and a Z on
  // every other mode mends the sign that the Jordan–Wigner strings pick up from it.
  const exchangeKinds = sequence(
    repeat(modes.length, (i) => gate('CX', kindWire, system[modes[i]!]!)),
    repeat(modes.length, (i) => (i % 2 === 1 ? gate('CZ', kindWire, system[modes[i]!]!) : nothing)),
  );
  const toKind = sequence(
    adjoint(exchangeKinds),
    repeat(modes.length, (i) => gate('T', system[modes[i]!]!)),
  );
  const rotation = span(
    'orbital rotation',
    'select.rotations',
    repeat(spins.length, (i) => majoranaRotation(system.slice(spins[i]!), angles, rotate)),
  );
  const centre =
    spin === 'index'
      ? centreBySpin(system, spinWire, enabled)
      : enabled === null
        ? gate('X', system[0]!)
        : gate('CX', enabled, system[0]!);
  return within(sequence(toKind, adjoint(rotation)), centre);
}

/** γ_{0,σ,0}: X on the first wire for ↑, Z X on the first two for ↓; one AND where it can be switched off. */
function centreBySpin(system: readonly number[], spinWire: number, enabled: number | null): Operation {
  const [up, down] = [system[0]!, system[1]!];
  const onDown = (wire: number) => sequence(gate('CX', wire, down), gate('CZ', wire, up));
  if (enabled === null) {
    return sequence(gate('X', up), gate('CX', spinWire, up), onDown(spinWire));
  }
  return scratch(1, ([both]) =>
    within(
      span('spin and switch', 'select.other', gate('AND', enabled, spinWire, both!)),
      sequence(gate('CX', enabled, up), gate('CX', both!, up), onDown(both!)),
    ),
  );
}
