import type { GateKind, GateSink } from '../../../../core/circuit/gates/machine';
import { parse, type Tree } from './parse';

/** Operands of the gates of `stdgates.inc` that this player knows, controls included. */
const GATES: Readonly<Record<string, { readonly operands: number; readonly kind: GateKind }>> = {
  x: { operands: 1, kind: 'X' },
  z: { operands: 1, kind: 'Z' },
  h: { operands: 1, kind: 'H' },
  s: { operands: 1, kind: 'S' },
  sdg: { operands: 1, kind: 'SDG' },
  t: { operands: 1, kind: 'T' },
  tdg: { operands: 1, kind: 'TDG' },
  cx: { operands: 2, kind: 'CX' },
  cz: { operands: 2, kind: 'CZ' },
  swap: { operands: 2, kind: 'SWAP' },
  ccx: { operands: 3, kind: 'CCX' },
};

/** Adding a control to a gate. */
const CONTROLLED: Readonly<Record<string, string>> = { x: 'cx', cx: 'ccx', z: 'cz' };

/** What a program declared and did. */
export interface Played {
  /** Wires of each register of qubits, in the order of declaration. */
  readonly qubits: ReadonlyMap<string, readonly number[]>;
  readonly gates: ReadonlyMap<string, number>;
}

/**
 * Carries an OpenQASM 3 program out on a simulator: straight-line programs of standard gates, `ctrl @`, measurements,
 * resets and conditions on one bit. Qubits get wires in the order of their declaration; what the program left
 * undeclared, out of range or used twice is an error.
 *
 * @param onQubits - told of each register as it is declared, so that a start state can be put in
 */
export function play(
  text: string,
  sink: GateSink,
  onQubits: (name: string, wires: readonly number[]) => void = () => {},
): Played {
  const player = new Player(sink, onQubits);
  for (const tree of parse(text)) player.item(tree, -1);
  return player;
}

class Player implements Played {
  readonly qubits = new Map<string, number[]>();
  readonly gates = new Map<string, number>();
  readonly #bits = new Map<string, number[]>();
  readonly #sink: GateSink;
  readonly #onQubits: (name: string, wires: readonly number[]) => void;
  #nextWire = 0;
  #nextBit = 0;
  #hasGates = false;

  constructor(sink: GateSink, onQubits: (name: string, wires: readonly number[]) => void) {
    this.#sink = sink;
    this.#onQubits = onQubits;
  }

  item(tree: Tree, condition: number): void {
    if (tree.rule === 'scope') {
      for (const child of tree.children.slice(1, -1)) this.item(child, condition);
      return;
    }
    if (tree.rule === 'item' || tree.rule === 'statement') {
      this.item(tree.children[0]!, condition);
      return;
    }
    const parts = tree.children;
    switch (tree.rule) {
      case 'version':
        if (!/^3(\.0)?$/.test(parts[1]!.text)) fail(tree, 'another version');
        return;
      case 'include':
        if (parts[1]!.text !== '"stdgates.inc"') fail(tree, 'an unknown file');
        this.#hasGates = true;
        return;
      case 'qubits': {
        const name = this.#newName(parts.at(-2)!);
        const wires = Array.from({ length: sizeOf(parts) }, () => this.#nextWire++);
        this.qubits.set(name, wires);
        for (const wire of wires) this.#sink.allocate(wire);
        this.#onQubits(name, wires);
        return;
      }
      case 'classical': {
        const [type, named] = parts;
        const scalar = type!.children[0]!;
        if (scalar.children[0]?.text !== 'bit' || parts.length !== 3) fail(tree, 'not a plain bit');
        this.#bits.set(
          this.#newName(named!),
          Array.from({ length: sizeOf(scalar.children) }, () => this.#nextBit++),
        );
        return;
      }
      case 'reset':
        for (const wire of this.#operand(parts[1]!, this.qubits)) {
          if (condition >= 0) fail(tree, 'a conditioned reset');
          this.#sink.gate('H', wire, -1, -1, -1);
          this.#sink.measureX(wire, this.#nextBit++);
        }
        return;
      case 'assignment': {
        if (condition >= 0 || parts[1]!.text !== '=') fail(tree, 'no plain assignment');
        if (parts[2]!.rule !== 'measurement') fail(tree, 'no measurement');
        const [bit] = this.#operand(parts[0]!, this.#bits);
        const [wire] = this.#operand(parts[2]!.children[1]!, this.qubits);
        // In the Z basis: an X measurement after H, which leaves |0⟩, and X where the outcome was 1.
        this.#sink.gate('H', wire!, -1, -1, -1);
        this.#sink.measureX(wire!, bit!);
        this.#sink.gate('X', wire!, -1, -1, bit!);
        return;
      }
      case 'if': {
        if (condition >= 0 || parts.length !== 5) fail(tree, 'a condition in a condition, or an else');
        const [bit, ...more] = this.#bitOf(parts[2]!);
        if (more.length > 0) fail(tree, 'a condition on many bits');
        this.item(parts[4]!, bit!);
        return;
      }
      case 'gate_call':
        this.#gate(tree, condition);
        return;
      default:
        fail(tree, `a ${tree.rule}, which this player does not know`);
    }
  }

  #gate(tree: Tree, condition: number): void {
    if (!this.#hasGates) fail(tree, 'a gate without stdgates.inc');
    const parts = tree.children;
    let controls = 0;
    for (const part of parts.filter(({ rule }) => rule === 'modifier')) {
      if (part.children[0]!.text !== 'ctrl') fail(tree, 'another modifier than ctrl');
      controls += part.children.length > 2 ? Number(part.children[2]!.text) : 1;
    }
    let name = parts.find(({ rule }) => rule === 'NAME')!.text;
    const wires = parts
      .find(({ rule }) => rule === 'operands')!
      .children.filter(({ rule }) => rule === 'operand')
      .map((operand) => this.#one(operand, this.qubits));
    if (new Set(wires).size !== wires.length) fail(tree, 'a qubit twice');
    const parameters = parts.find(({ rule }) => rule === 'parameters');
    this.gates.set(name, (this.gates.get(name) ?? 0) + 1);
    if (name === 'rz') {
      if (condition >= 0 || controls > 0 || wires.length !== 1) fail(tree, 'a controlled rotation');
      this.#sink.rotateZ(wires[0]!, Number(parameters!.children[1]!.text.replace(/ /g, '')));
      return;
    }
    if (parameters) fail(tree, 'parameters');
    const [a, b = -1, c = -1] = wires;
    if (name === 'z' && controls === 2) {
      if (wires.length !== 3) fail(tree, `${wires.length} operands`);
      this.#sink.gate('CCZ', a!, b, c, condition);
      return;
    }
    for (; controls > 0; controls--)
      name = CONTROLLED[name] ?? fail(tree, 'a control this player does not know');
    const gate = GATES[name] ?? fail(tree, 'an unknown gate');
    if (wires.length !== gate.operands) fail(tree, `${wires.length} operands`);
    this.#sink.gate(gate.kind, a!, b, c, condition);
  }

  #newName(token: Tree): string {
    const { text } = token;
    if (this.qubits.has(text) || this.#bits.has(text) || GATES[text] || text === 'rz')
      fail(token, 'a name in use');
    return text;
  }

  #bitOf(expression: Tree): readonly number[] {
    const [, name, index] =
      /^(\w+)(?: \[ (\d+) \])?$/.exec(expression.text) ?? fail(expression, 'no single bit');
    return this.#pick(expression, this.#bits.get(name!), index);
  }

  #one(operand: Tree, from: ReadonlyMap<string, readonly number[]>): number {
    const wires = this.#operand(operand, from);
    return wires.length === 1 ? wires[0]! : fail(operand, 'a whole register');
  }

  #operand(operand: Tree, from: ReadonlyMap<string, readonly number[]>): readonly number[] {
    const [name, index] = operand.children;
    return this.#pick(operand, from.get(name!.text), index?.children[1]?.text);
  }

  #pick(tree: Tree, all: readonly number[] | undefined, index: string | undefined): readonly number[] {
    if (!all) return fail(tree, 'an undeclared name');
    if (index === undefined) return all;
    const found = all[Number(index)];
    return found === undefined ? fail(tree, 'an index out of range') : [found];
  }
}

function sizeOf(parts: readonly Tree[]): number {
  const designator = parts.find(({ rule }) => rule === 'designator');
  return designator ? Number(designator.children[1]!.text) : 1;
}

function fail(tree: Tree, what: string): never {
  throw new SyntaxError(`line ${tree.line}: ${what}: ${tree.text}`);
}
