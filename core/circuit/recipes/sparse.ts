import { bitsFor, controlledSwap, majoranaExchange, reflection, unaryIteration } from '../formulas';
import type { Subroutine } from '../recipe';
import { aliasRegisters, prepare, unprepare } from './prepare';
import { gate, type LookupPolicy, type Piece, type Register, scope } from './scope';
import { walkStep } from './walk';

export interface SparseSizes {
  /** N spatial orbitals. */
  readonly orbitals: number;
  /** d: stored coefficients, one of each set that a symmetry makes equal. */
  readonly coefficients: number;
  /** Coefficients carry spin components: each index pair has spin-flip, Majorana-kind and sign-mask bits. */
  readonly spinDependent: boolean;
  readonly keepBits: number;
  readonly phaseBits: number;
}

/** Bits of a term beside its orbitals: sign, and whether it is a one-body term. */
const TERM_FLAGS = 2;
/** Bits of one index pair that say which of its components: spin flip, Majorana kind, sign mask. */
const COMPONENT_BITS = 3;

/**
 * Walk step of the term-by-term encoding: Berry et al., Quantum 3, 208 (2019) in the composition of Lee et al.,
 * PRX Quantum 2, 030305 (2021). Alias sampling yields p, q, r, s and the flags of a term; plus qubits restore the
 * permutational symmetry by controlled swaps; SELECT is one ranged unary iteration per Majorana operator.
 */
export function sparseStep(sizes: SparseSizes, policy: LookupPolicy): Subroutine {
  const { orbitals: n, spinDependent, keepBits } = sizes;
  const orbitalBits = bitsFor(n);
  const component = spinDependent ? COMPONENT_BITS : 0;
  const wordBits = 4 * orbitalBits + 2 * component + TERM_FLAGS;
  const table = { rows: sizes.coefficients, indexBits: wordBits, keepBits, ownBits: wordBits, extraBits: 0 };
  const plus: Register[] = [
    { name: 'symmetry qubits', qubits: 3 },
    { name: 'spins', qubits: 2 },
    { name: 'Majorana kinds', qubits: spinDependent ? 2 : 0 },
  ];
  const plusQubits = plus.reduce((sum, register) => sum + register.qubits, 0);
  const symmetry: Piece[] = [
    gate('swap within a pair', 'prepare', controlledSwap(orbitalBits), 2),
    gate('swap of the pairs', 'prepare', controlledSwap(2 * orbitalBits + component)),
  ];
  const pieces = [
    scope(
      'block encoding',
      [...aliasRegisters('term', table), ...plus],
      [
        prepare('term', table, policy, true),
        ...symmetry,
        scope(
          'SELECT',
          [],
          [
            gate('first pair', 'select.other', unaryIteration(2 * n, { controlled: false, ranged: true }), 2),
            gate(
              'second pair, off for one-body terms',
              'select.other',
              unaryIteration(2 * n, { ranged: true }),
              2,
            ),
            // Two layers around each of four operators, over both spins.
            gate('Majorana kinds', 'select.other', majoranaExchange(2 * n), spinDependent ? 8 : 0),
          ],
        ),
        ...symmetry,
        unprepare('term', table, policy),
        // Index, comparison register, plus qubits and the rotation qubit of the equal superposition.
        gate(
          'reflection',
          'reflections',
          reflection(bitsFor(sizes.coefficients) + keepBits + plusQubits + 1),
        ),
      ],
    ),
  ];
  const frame = { systemQubits: 2 * n, phaseBits: sizes.phaseBits, gradientBits: 0 };
  return walkStep('walk step, term by term', frame, pieces);
}
