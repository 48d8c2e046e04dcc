import { type Blocks, countBlocks, erasureToffoli, erasureWires } from '../primitives/look-up';
import { readToffoli, readWires } from '../primitives/reading';
import { reflectionToffoli } from '../primitives/reflection';
import type { StepPart, Subroutine } from '../recipe';

export const LOW = 'G. H. Low, V. Kliuchnikov, L. Schaeffer, arXiv:1812.00954 (2018)';
export const BERRY = 'D. W. Berry et al., Quantum 3, 208 (2019)';
export const BABBUSH = 'R. Babbush et al., Phys. Rev. X 8, 041015 (2018)';
export const COPIES =
  '"Halving the cost of QROM", arXiv:2605.20334 (2026), count derived; equal to the emitted circuit';
export const GIDNEY = 'C. Gidney, Quantum 2, 74 (2018)';
export const DERIVED = 'derived; equal to the emitted circuit, see DEVELOPERS';

interface Leaf {
  readonly name: string;
  readonly part: StepPart;
  readonly times?: number;
  readonly toffoli?: number;
  readonly t?: number;
  readonly formula: string;
  readonly inputs: Readonly<Record<string, number>>;
  readonly source: string;
  /** Wires lent while it runs. */
  readonly scratch?: number;
}

export const leaf = ({ scratch, ...rest }: Leaf): Subroutine => ({
  ...rest,
  ...(scratch ? { registers: [{ name: `scratch of ${rest.name}`, qubits: scratch }] } : {}),
});

/** A table as a recipe sees it. */
export interface TableSizes {
  readonly addresses: Uint32Array;
  readonly width: number;
}

/** A look-up; its output wires belong to the node around it. */
export function loadLeaf(
  name: string,
  part: StepPart,
  { addresses, width }: TableSizes,
  how: Blocks,
  controlled = false,
): Subroutine {
  const blocks = countBlocks(addresses, how.read);
  const { formula, inputs, source } = readingText(width, how, controlled);
  return leaf({
    name,
    part,
    toffoli: readToffoli(blocks, width, how, controlled),
    formula,
    inputs: { rows: addresses.length, B: blocks, ...inputs },
    source,
    scratch: readWires(addresses, how, controlled),
  });
}

/** What a look-up costs in symbols, with B blocks. */
export function readingText(width: number, { read: k, slice }: Blocks, controlled = false) {
  const iteration = controlled ? 'B − 1' : 'B − 2';
  return slice === undefined
    ? { formula: `${iteration} + b(k − 1)`, inputs: { b: width, k }, source: `${LOW}; ${BERRY}` }
    : {
        formula: `(⌈b/c⌉ + 1)(${iteration}) + (b + c)(k − 1) + (k − 1 − log₂k), c bits at a time through borrowed wires`,
        inputs: { b: width, k, c: slice },
        source: COPIES,
      };
}

export function eraseLeaf(
  name: string,
  part: StepPart,
  addresses: Uint32Array,
  k: number,
  controlled = false,
): Subroutine {
  const blocks = countBlocks(addresses, k);
  return leaf({
    name,
    part,
    toffoli: erasureToffoli(blocks, k, controlled),
    formula: controlled ? 'B − 1 + (k − 1 − log₂k)' : 'B − 2 + (k − 1 − log₂k)',
    inputs: { rows: addresses.length, B: blocks, k },
    source: BERRY,
    scratch: erasureWires(addresses, k, controlled),
  });
}

/** Counts of blocks that a table is read and erased in. */
export const blockCounts = (addresses: Uint32Array, { read, erase }: Blocks) => ({
  read: countBlocks(addresses, read),
  erase: countBlocks(addresses, erase),
});

/** What phase estimation adds to a walk step. */
export interface PhaseEstimationPart {
  readonly registers: readonly { readonly name: string; readonly qubits: number }[];
  /** Toffoli a step: controls of the last reflection. */
  readonly controls: number;
}

/** The walk's reflection about the zero state of `reflected` wires, and what its controls cost. */
export function reflectionLeaves(reflected: number, phase: PhaseEstimationPart): Subroutine[] {
  return [
    leaf({
      name: 'reflection of the walk',
      part: 'reflections',
      toffoli: reflectionToffoli(reflected),
      formula: 'n − 2',
      inputs: { n: reflected },
      source: 'common practice, no source',
      scratch: Math.max(0, reflected + phase.controls - 2),
    }),
    leaf({
      name: 'control by the phase register',
      part: 'control',
      toffoli: phase.controls,
      formula: 'one AND for each control of the reflection',
      inputs: { controls: phase.controls },
      source: BABBUSH,
    }),
  ];
}
