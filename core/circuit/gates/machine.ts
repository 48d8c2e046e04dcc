import type { StepPart } from '../recipe';

/**
 * The gate set. `AND` writes a·b into a wire that is |0⟩; `UNAND` takes it back by measuring the wire in the X
 * basis, with a CZ on a, b where the outcome is 1 (Gidney, Quantum 2, 74 (2018)), so it costs no Toffoli.
 * One AND, CCX or CCZ counts as one Toffoli.
 */
export const GATE_KINDS = [
  'X',
  'Z',
  'H',
  'S',
  'SDG',
  'T',
  'TDG',
  'CX',
  'CZ',
  'SWAP',
  'CCX',
  'CCZ',
  'AND',
  'UNAND',
] as const;
export type GateKind = (typeof GATE_KINDS)[number];

/** Where gates go: a counter, a simulator, a text. Wires and classical bits are small integers. */
export interface GateSink {
  /**
   * True where the sink has no use for the CNOTs and conditioned phases that write and erase table contents: the
   * bulk of a large circuit, without a single Toffoli.
   */
  readonly skipsClifford?: boolean;
  /** About how many gates a sink with `skipsClifford` was spared: half the bits of the table contents. */
  skip?(gates: number): void;
  /** Names wires just allocated; for texts and diagrams. */
  nameRegister?(name: string, wires: readonly number[]): void;
  /** `condition` is the classical bit the gate depends on, or −1. Unused wires are −1. */
  gate(kind: GateKind, a: number, b: number, c: number, condition: number): void;
  /** exp(−i·angle/2·Z) on a wire; radians. */
  rotateZ(wire: number, angle: number): void;
  /** Measures in the X basis into classical bit `bit`; the wire is |0⟩ afterwards. */
  measureX(wire: number, bit: number): void;
  /** Measures several wires into consecutive bits from `firstBit`; sinks without it get them one by one. */
  measureRegisterX?(wires: readonly number[], firstBit: number): void;
  allocate(wire: number): void;
  /** The wire must be |0⟩: a simulator checks it. */
  release(wire: number): void;
  enter(name: string, part: StepPart | undefined): void;
  leave(): void;
}

/**
 * Hands out wires and classical bits and passes gates on. Wires are reused after release, so that the highest
 * number ever live is the qubit count of the circuit.
 */
export class Machine {
  readonly #sink: GateSink;
  readonly #free: number[] = [];
  #next = 0;
  #live = 0;
  #peak = 0;
  #bits = 0;

  constructor(sink: GateSink) {
    this.#sink = sink;
  }

  /** Most wires that were live at once. */
  get peak(): number {
    return this.#peak;
  }

  /** See {@link GateSink.skipsClifford}. */
  get skipsClifford(): boolean {
    return this.#sink.skipsClifford === true;
  }

  /** Says what {@link GateSink.skipsClifford} left out. */
  skip(gates: number): void {
    this.#sink.skip?.(gates);
  }

  get live(): number {
    return this.#live;
  }

  allocate(): number {
    const wire = this.#free.pop() ?? this.#next++;
    this.#live++;
    if (this.#live > this.#peak) this.#peak = this.#live;
    this.#sink.allocate(wire);
    return wire;
  }

  /** @param name - for registers that live through a whole circuit, so that texts can call them by it. */
  allocateRegister(size: number, name?: string): number[] {
    const wires = Array.from({ length: size }, () => this.allocate());
    if (name !== undefined && size > 0) this.#sink.nameRegister?.(name, wires);
    return wires;
  }

  release(wire: number): void {
    this.#sink.release(wire);
    this.#free.push(wire);
    this.#live--;
  }

  releaseRegister(wires: readonly number[]): void {
    for (let i = wires.length - 1; i >= 0; i--) this.release(wires[i]!);
  }

  gate(kind: GateKind, a: number, b = -1, c = -1, condition = -1): void {
    this.#sink.gate(kind, a, b, c, condition);
  }

  rotateZ(wire: number, angle: number): void {
    this.#sink.rotateZ(wire, angle);
  }

  /** @returns the classical bit with the outcome. */
  measureX(wire: number): number {
    const bit = this.#bits++;
    this.#sink.measureX(wire, bit);
    return bit;
  }

  /** @returns the classical bits with the outcomes, one a wire. */
  measureRegisterX(wires: readonly number[]): number[] {
    const first = this.#bits;
    this.#bits += wires.length;
    if (this.#sink.measureRegisterX) this.#sink.measureRegisterX(wires, first);
    else for (const [i, wire] of wires.entries()) this.#sink.measureX(wire, first + i);
    return wires.map((_, i) => first + i);
  }

  enter(name: string, part?: StepPart): void {
    this.#sink.enter(name, part);
  }

  leave(): void {
    this.#sink.leave();
  }
}
