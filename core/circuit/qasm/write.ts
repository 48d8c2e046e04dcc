import { type GateKind, type GateSink, Machine } from '../gates/machine';
import type { Census } from './census';
import { takeIdentifier } from './identifiers';

/** Characters that are gathered before they are handed on. */
const CHUNK = 1 << 16;

export interface QasmText {
  /** Lines that go on top as comments. */
  readonly comments: readonly string[];
  /** Takes the text piece by piece, in order. */
  readonly write: (chunk: string) => void;
  /** Told now and then how many lines have been written. */
  readonly onLines?: (lines: number) => void;
}

/**
 * Writes a circuit as an OpenQASM 3.0 program (A. Cross et al., ACM Trans. Quantum Comput. 3, 12 (2022)) while it is
 * emitted; nothing is stored. The same circuit gives the same text.
 *
 * Named registers become arrays of qubits of that name, all other wires elements of one array, which is reset at the
 * start: a program finds its qubits in no particular state. An AND is a `ccx` into a qubit that is |0⟩; taking it
 * back is an X measurement with a conditioned `cz`. Outcomes of other measurements have a bit each.
 *
 * @param census - of the same circuit
 * @returns the number of lines
 */
export function writeQasm(
  circuit: (machine: Machine) => void,
  census: Census,
  { comments, write, onLines }: QasmText,
): number {
  const sink = new QasmSink(census, write, onLines);
  sink.begin(comments);
  circuit(new Machine(sink));
  sink.end();
  return sink.lines;
}

/** Gates whose name in `stdgates.inc` is ours in small letters. */
const STANDARD: Readonly<Partial<Record<GateKind, string>>> = {
  X: 'x',
  Z: 'z',
  H: 'h',
  S: 's',
  SDG: 'sdg',
  T: 't',
  TDG: 'tdg',
  CX: 'cx',
  CZ: 'cz',
  SWAP: 'swap',
  CCX: 'ccx',
  CCZ: 'ctrl(2) @ z',
  AND: 'ccx',
};

class QasmSink implements GateSink {
  readonly #census: Census;
  readonly #write: (chunk: string) => void;
  readonly #onLines: ((lines: number) => void) | undefined;
  readonly #qubits: string[] = [];
  readonly #used = new Set<string>();
  readonly #outcomes: string;
  readonly #andOutcome: string;
  readonly #spans: string[] = [];
  #text = '';
  lines = 0;

  constructor(
    census: Census,
    write: (chunk: string) => void,
    onLines: ((lines: number) => void) | undefined,
  ) {
    this.#census = census;
    this.#write = write;
    this.#onLines = onLines;
    this.#outcomes = takeIdentifier('outcome', this.#used);
    this.#andOutcome = takeIdentifier('and_outcome', this.#used);
  }

  begin(comments: readonly string[]): void {
    const { registers, wires, bits } = this.#census;
    this.#line('OPENQASM 3.0;');
    this.#line('include "stdgates.inc";');
    for (const comment of comments) this.#comment(comment);
    for (const { name, wires: own } of registers) this.#declare(takeIdentifier(name, this.#used), own);
    const rest = Array.from({ length: wires }, (_, wire) => wire).filter(
      (w) => this.#qubits[w] === undefined,
    );
    if (rest.length > 0) {
      const name = takeIdentifier('work', this.#used);
      this.#declare(name, rest);
      this.#line(`reset ${name};`);
    }
    if (bits > 0) this.#line(`bit[${bits}] ${this.#outcomes};`);
    this.#line(`bit ${this.#andOutcome};`);
  }

  end(): void {
    this.#flush();
  }

  gate(kind: GateKind, a: number, b: number, c: number, condition: number): void {
    const on = condition < 0 ? '' : `if (${this.#outcomes}[${condition}]) `;
    if (kind === 'UNAND') {
      if (condition >= 0) throw new Error('taking an AND back is never conditioned');
      const target = this.#qubit(c);
      this.#measure(target, this.#andOutcome);
      this.#line(`if (${this.#andOutcome}) cz ${this.#qubit(a)}, ${this.#qubit(b)};`);
      return;
    }
    let operands = this.#qubit(a);
    if (b >= 0) operands += `, ${this.#qubit(b)}`;
    if (c >= 0) operands += `, ${this.#qubit(c)}`;
    this.#line(`${on}${STANDARD[kind]!} ${operands};`);
  }

  rotateZ(wire: number, angle: number): void {
    this.#line(`rz(${angle}) ${this.#qubit(wire)};`);
  }

  measureX(wire: number, bit: number): void {
    this.#measure(this.#qubit(wire), `${this.#outcomes}[${bit}]`);
  }

  allocate(): void {}

  release(): void {}

  enter(name: string): void {
    this.#spans.push(name);
    this.#comment(`begin: ${name}`);
  }

  leave(): void {
    this.#comment(`end: ${this.#spans.pop()}`);
  }

  #declare(name: string, wires: readonly number[]): void {
    this.#line(`qubit[${wires.length}] ${name};`);
    for (const [i, wire] of wires.entries()) this.#qubits[wire] = `${name}[${i}]`;
  }

  /** In the X basis, and back to |0⟩. */
  #measure(qubit: string, bit: string): void {
    this.#line(`h ${qubit};`);
    this.#line(`${bit} = measure ${qubit};`);
    this.#line(`reset ${qubit};`);
  }

  #qubit(wire: number): string {
    const name = this.#qubits[wire];
    if (name === undefined) throw new Error(`wire ${wire} was not there at the census`);
    return name;
  }

  #comment(text: string): void {
    for (const line of text.split('\n')) this.#line(`// ${line}`);
  }

  #line(text: string): void {
    this.#text += `${text}\n`;
    this.lines++;
    if (this.#text.length >= CHUNK) {
      this.#flush();
      this.#onLines?.(this.lines);
    }
  }

  #flush(): void {
    if (this.#text.length > 0) this.#write(this.#text);
    this.#text = '';
  }
}
