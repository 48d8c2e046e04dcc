import { type GateSink, Machine } from '../gates/machine';

/** What has to be known of a circuit before its text can begin. */
export interface Census {
  /** Named registers in the order in which they were allocated; a wire belongs to the first that names it. */
  readonly registers: readonly { readonly name: string; readonly wires: readonly number[] }[];
  /** Number of wires ever used: they are 0 … wires − 1. */
  readonly wires: number;
  /** Classical bits with outcomes of X measurements. */
  readonly bits: number;
  /** Gates, rotations and measurements; table contents as half of their bits. */
  readonly expectedGates: number;
}

/** Runs a circuit without its table contents, which makes up most of it, and notes what its text has to declare. */
export function takeCensus(circuit: (machine: Machine) => void): Census {
  const sink = new CensusSink();
  circuit(new Machine(sink));
  return { registers: sink.registers, wires: sink.wires, bits: sink.bits, expectedGates: sink.gates };
}

class CensusSink implements GateSink {
  readonly skipsClifford = true;
  readonly registers: { name: string; wires: readonly number[] }[] = [];
  readonly #named = new Set<number>();
  wires = 0;
  bits = 0;
  gates = 0;

  gate(): void {
    this.gates++;
  }

  rotateZ(): void {
    this.gates++;
  }

  skip(gates: number): void {
    this.gates += gates;
  }

  measureX(_wire: number, bit: number): void {
    this.gates++;
    this.bits = Math.max(this.bits, bit + 1);
  }

  nameRegister(name: string, wires: readonly number[]): void {
    const own = wires.filter((wire) => !this.#named.has(wire));
    for (const wire of own) this.#named.add(wire);
    if (own.length > 0) this.registers.push({ name, wires: own });
  }

  allocate(wire: number): void {
    this.wires = Math.max(this.wires, wire + 1);
  }

  release(): void {}

  enter(): void {}

  leave(): void {}
}
