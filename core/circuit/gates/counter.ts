import type { StepPart } from '../recipe';
import type { GateKind, GateSink } from './machine';

/** Gates of one subroutine, its own and those of the subroutines inside it. */
export interface GateCount {
  readonly name: string;
  readonly part: StepPart | undefined;
  /** How often the subroutine was entered. */
  runs: number;
  toffoli: number;
  t: number;
  /** Rotations by an arbitrary angle, not yet made of T gates. */
  rotations: number;
  measurements: number;
  /** Everything else; conditioned gates count as if the condition held. */
  clifford: number;
  readonly children: GateCount[];
}

const TOFFOLI: ReadonlySet<GateKind> = new Set(['CCX', 'CCZ', 'AND']);
const T_GATE: ReadonlySet<GateKind> = new Set(['T', 'TDG']);

/** Counts gates as they stream by; memory grows with the number of distinct subroutines only. */
export class GateCounter implements GateSink {
  readonly root: GateCount = emptyCount('circuit', undefined);
  readonly skipsClifford: boolean;
  readonly #stack: GateCount[] = [this.root];

  /** @param options - `toffoliOnly`: leave out table contents, which hold Clifford gates only. */
  constructor(options: { readonly toffoliOnly?: boolean } = {}) {
    this.skipsClifford = options.toffoliOnly ?? false;
  }

  gate(kind: GateKind): void {
    const top = this.#stack[this.#stack.length - 1]!;
    if (TOFFOLI.has(kind)) top.toffoli++;
    else if (T_GATE.has(kind)) top.t++;
    else if (kind === 'UNAND') top.measurements++;
    else top.clifford++;
  }

  rotateZ(): void {
    this.#stack[this.#stack.length - 1]!.rotations++;
  }

  measureX(): void {
    this.#stack[this.#stack.length - 1]!.measurements++;
  }

  allocate(): void {}

  release(): void {}

  enter(name: string, part: StepPart | undefined): void {
    const top = this.#stack[this.#stack.length - 1]!;
    let child = top.children.find((c) => c.name === name && c.part === part);
    if (!child) {
      child = emptyCount(name, part);
      top.children.push(child);
    }
    child.runs++;
    this.#stack.push(child);
  }

  leave(): void {
    const child = this.#stack.pop();
    if (!child || this.#stack.length === 0) throw new Error('left a subroutine that was never entered');
  }

  /** Totals over a subtree. */
  static total(count: GateCount): { toffoli: number; t: number; rotations: number; measurements: number } {
    const sum = {
      toffoli: count.toffoli,
      t: count.t,
      rotations: count.rotations,
      measurements: count.measurements,
    };
    for (const child of count.children) {
      const c = GateCounter.total(child);
      sum.toffoli += c.toffoli;
      sum.t += c.t;
      sum.rotations += c.rotations;
      sum.measurements += c.measurements;
    }
    return sum;
  }

  /** Toffoli by step part; a subroutine without a part belongs to that of the one around it. */
  toffoliByPart(): Map<StepPart | undefined, number> {
    const sums = new Map<StepPart | undefined, number>();
    const walk = (count: GateCount, inherited: StepPart | undefined) => {
      const part = count.part ?? inherited;
      sums.set(part, (sums.get(part) ?? 0) + count.toffoli);
      for (const child of count.children) walk(child, part);
    };
    walk(this.root, undefined);
    return sums;
  }
}

function emptyCount(name: string, part: StepPart | undefined): GateCount {
  return { name, part, runs: 0, toffoli: 0, t: 0, rotations: 0, measurements: 0, clifford: 0, children: [] };
}
