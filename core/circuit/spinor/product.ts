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
import { givens, givensChain, modePhase, tiltLayer } from '../primitives/givens';
import { type Blocks, contentAfterSwaps, erase, lookUp, type Table } from '../primitives/look-up';
import { type Rotate, swapLayer } from '../primitives/majorana';
import type { ProductUse } from '../squares/form';
import { type AngleGroup, groupAngles, groupBits, type ItemFlag, type SpinorLayout } from './layout';
import { groupBit, rowBit, type SpinorTables } from './tables';

/** Wires that a product acts on or is steered by. */
export interface ProductWires {
  readonly system: readonly number[];
  /** Rotations by a loaded number: of the chain on half steps, of spins on whole ones, of phases on coarser ones. */
  readonly half: Rotate;
  readonly whole: Rotate;
  readonly phase: Rotate;
  /** Which of two partners; null where rows stand for themselves. */
  readonly partner: number | null;
  readonly face: number | null;
}

export interface ProductBlocks {
  readonly rows: Blocks;
  /** Of the tables that are not merged into the main one; erased with it. */
  readonly groups: Readonly<Record<AngleGroup, number>>;
}

/** Whether a use of the rows turns the spins of orbitals. */
export const turnsSpins = ({ spinUses }: SpinorLayout, second: boolean): boolean =>
  spinUses === 'both' || (spinUses === 'first' && !second);

/**
 * SELECT of one row: ±(2n_w − 1), its own adjoint. With U a†_{0↑} U† = Σ_P w_P a†_P it is U Z U† on the first wire;
 * only the Z is ever switched, everything else cancels by itself.
 *
 * @param reversed - wire that is 1 in the second square of a pair, or null
 */
export function product(
  tables: SpinorTables,
  wires: ProductWires,
  blocks: ProductBlocks,
  use: ProductUse,
  reversed: number | null,
): Operation {
  const { layout } = tables;
  const enabled = use.second ? use.isTwofold : null;
  const flagged = (flag: ItemFlag) => use.flags[layout.flags.indexOf(flag)]!;
  const groups = [...layout.tables.keys()].filter(
    (group) => group === 'phases' || turnsSpins(layout, use.second),
  );
  const run = (machine: Machine) => {
    const main = machine.allocateRegister(layout.rowWidth * blocks.rows.read);
    const added = groups.map((group) =>
      machine.allocateRegister(layout.tables.get(group)!.width * blocks.groups[group]),
    );
    const load = mainTable(tables);
    named(machine, 'angle look-up', () => lookUp(use.address, main, load, blocks.rows, enabled).run(machine));
    for (const [i, group] of groups.entries()) {
      const control = flagged(use.second ? `${group} of a square` : group);
      const read = { read: blocks.groups[group], erase: 1 };
      named(machine, `${group} look-up`, () =>
        lookUp(use.address, added[i]!, groupTable(tables, group), read, control).run(machine),
      );
    }
    const angles = splitAngles(layout, main, new Map(groups.map((group, i) => [group, added[i]!])));
    withPhases(layout, flagged, angles, (own) =>
      centreInFrame(layout, wires, use, own, reversed, flagged, enabled),
    ).run(machine);
    // All registers at once: an erasure costs the same whatever it erases.
    const contents = [
      { size: main.length, content: contentAfterSwaps(load, blocks.rows.read) },
      ...groups.map((group, i) => ({
        size: added[i]!.length,
        // Nothing at rows outside the group, at which its look-up was switched off: a block never leaves an item.
        content: contentAfterSwaps(groupTable(tables, group), blocks.groups[group]),
      })),
    ];
    named(machine, 'angle erasure', () =>
      erase(
        machine,
        use.address,
        [...main, ...added.flat()],
        load.addresses,
        (address, position) => {
          let rest = position;
          for (const { size, content } of contents) {
            if (rest < size) return content(address, rest);
            rest -= size;
          }
          return false;
        },
        blocks.rows.erase,
        enabled,
      ),
    );
    for (const register of added.reverse()) machine.releaseRegister(register);
    machine.releaseRegister(main);
  };
  return { run, runAdjoint: run };
}

function named(machine: Machine, name: string, use: () => void): void {
  machine.enter(name, 'select.lookup');
  use();
  machine.leave();
}

function mainTable(tables: SpinorTables): Table {
  const { rowAddresses, rowWidth } = tables.layout;
  return {
    addresses: rowAddresses,
    width: rowWidth,
    bit: (address, bit) => rowBit(tables, address, bit),
  };
}

function groupTable(tables: SpinorTables, group: AngleGroup): Table {
  return {
    ...tables.layout.tables.get(group)!,
    bit: (address, bit) => groupBit(tables, group, address, bit),
  };
}

/** Registers of one row's angles and flags. */
interface Angles {
  readonly chain: readonly (readonly number[])[];
  /** What of shared phases stands behind each angle of the chain. */
  readonly behind: readonly (readonly number[])[];
  readonly phases: readonly (readonly number[])[];
  /** θ, δ of each orbital in turn. */
  readonly spins: readonly (readonly number[])[];
  readonly sign: number;
  readonly signChange: number;
}

function splitAngles(
  layout: SpinorLayout,
  main: readonly number[],
  added: ReadonlyMap<AngleGroup, readonly number[]>,
): Angles {
  const { angleBits, wordBits, orbitals, chainWidth, merged, rowWidth, hasFaces } = layout;
  const split = (register: readonly number[], count: number, width: number) =>
    Array.from({ length: count }, (_, i) => register.slice(i * width, (i + 1) * width));
  const found = new Map(added);
  let at = chainWidth;
  for (const group of merged) {
    if (group === 'shared phases') continue;
    const width = groupAngles(group, orbitals) * groupBits(group, layout);
    found.set(group, main.slice(at, at + width));
    at += width;
  }
  const of = (group: AngleGroup) => {
    const register = found.get(group);
    return register ? split(register, groupAngles(group, orbitals), groupBits(group, layout)) : [];
  };
  const words = split(main, orbitals - 1, wordBits);
  const flags = main.slice(at, rowWidth);
  return {
    chain: words.map((word) => word.slice(0, angleBits)),
    behind: words.map((word) => word.slice(angleBits)),
    phases: of('phases'),
    spins: of('spins'),
    sign: flags[0]!,
    signChange: hasFaces ? flags[1]! : -1,
  };
}

/**
 * Takes shared phases out of the chain's low bits where the item has any, one AND a bit, and puts the angles of the
 * chain into the middle of their coarse steps.
 */
function withPhases(
  { sharedBits, angleBits, phaseBits }: SpinorLayout,
  flagged: (flag: ItemFlag) => number,
  angles: Angles,
  body: (angles: Angles) => Operation,
): Operation {
  if (sharedBits === 0) return body(angles);
  const { chain, behind } = angles;
  const has = flagged('phases');
  return scratch(chain.length * sharedBits, (lent) => {
    const own = chain.map((_, p) => lent.slice(p * sharedBits, (p + 1) * sharedBits));
    const takeOut = repeat(chain.length, (p) =>
      sequence(
        repeat(sharedBits, (i) =>
          sequence(gate('AND', has, chain[p]![i]!, own[p]![i]!), gate('CX', own[p]![i]!, chain[p]![i]!)),
        ),
        gate('CX', has, chain[p]![angleBits - phaseBits - 1]!),
      ),
    );
    return within(
      span('phases out of the chain', 'select.other', takeOut),
      body({ ...angles, phases: own.map((low, p) => [...low, ...behind[p]!]) }),
    );
  });
}

/** U Z U† and its signs. */
function centreInFrame(
  layout: SpinorLayout,
  wires: ProductWires,
  use: ProductUse,
  angles: Angles,
  reversed: number | null,
  flagged: (flag: ItemFlag) => number,
  enabled: number | null,
): Operation {
  const { system, half, whole, phase, partner, face } = wires;
  const spins = turnsSpins(layout, use.second) ? angles.spins : [];
  const orbitalSpins = repeat(spins.length / 2, (p) => {
    const [up, down] = [system[2 * p]!, system[2 * p + 1]!];
    return sequence(
      givens(up, null, down, spins[2 * p]!, whole),
      modePhase(down, spins[2 * p + 1]!, whole, partner),
    );
  });
  const tilted = layout.hasAxes ? flagged('tilted') : null;
  const reversals = [partner, reversed].filter((wire) => wire !== null);
  const frame = (swap: number | null) =>
    sequence(
      span('orbital rotation', 'select.rotations', givensChain(system, angles.chain, half)),
      span(
        'phases of the orbitals',
        'select.rotations',
        repeat(angles.phases.length, (p) => modePhase(system[2 * p]!, angles.phases[p]!, phase, partner)),
      ),
      span('spins of the orbitals', 'select.rotations', orbitalSpins),
      tilted === null
        ? nothing
        : span('spin axis', 'select.other', tiltLayer(tilted, flagged('along y'), system)),
      swap === null ? nothing : otherSpin(system, reversals, swap),
    );
  const centre = enabled === null ? gate('Z', system[0]!) : gate('CZ', enabled, system[0]!);
  const inFrame = (swap: number | null) => within(adjoint(frame(swap)), centre);
  const odd = partner !== null && layout.flags.includes('odd');
  const signs = sequence(
    gate('Z', angles.sign),
    face === null ? nothing : gate('CZ', face, angles.signChange),
    odd ? gate('CZ', partner, flagged('odd')) : nothing,
    odd && face !== null ? gate('CZ', partner, face) : nothing,
  );
  return sequence(partner === null ? inFrame(null) : bySpin(partner, tilted, reversed, inFrame), signs);
}

/**
 * Lends `inFrame` the wire that says whether ↑ and ↓ change places: the spin is reversed for the partner, and once
 * more in the second square of a pair. Along a tilted axis it is a Z on ↓ that reverses the spin, and no swap.
 */
function bySpin(
  partner: number,
  tilted: number | null,
  reversed: number | null,
  inFrame: (swap: number) => Operation,
): Operation {
  if (tilted === null) return inFrame(partner);
  const reverse = reversed === null ? nothing : gate('CX', reversed, partner);
  return scratch(1, ([swap]) =>
    within(
      span(
        'whether spins are swapped',
        'select.other',
        sequence(reverse, gate('X', tilted), gate('AND', partner, tilted, swap!), gate('X', tilted), reverse),
      ),
      inFrame(swap!),
    ),
  );
}

/** iσ_y, up to a phase, for each reversal: Z on every ↓, then ↑ and ↓ change places. */
function otherSpin(system: readonly number[], reversals: readonly number[], swap: number): Operation {
  return sequence(
    ...reversals.map((wire) => repeat(system.length / 2, (p) => gate('CZ', wire, system[2 * p + 1]!))),
    span('swap of the spins', 'select.swaps', swapLayer(swap, system)),
  );
}
