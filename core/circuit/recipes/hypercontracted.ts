import {
  bitsFor,
  comparison,
  controlledSwap,
  pairNumber,
  phaseGradientRotation,
  reflection,
  triangleSuperposition,
} from '../formulas';
import type { Subroutine } from '../recipe';
import { gate, type LookupPolicy, lookup, type Piece, type Register, scope, unlookup } from './scope';
import { walkStep } from './walk';

export interface Hypercontracted {
  /** N spatial orbitals. */
  readonly orbitals: number;
  /** M: rank of the tensor hypercontraction. */
  readonly rank: number;
  readonly keepBits: number;
  readonly rotationBits: number;
  readonly phaseBits: number;
}

/**
 * Walk step of spin-free tensor hypercontraction, Lee et al., PRX Quantum 2, 030305 (2021): pairs μ ≤ ν of M
 * vectors and N one-body items; each of the two vectors rotates the orbitals and undoes it.
 */
export function hypercontractedStep(sizes: Hypercontracted, policy: LookupPolicy): Subroutine {
  const { orbitals: n, rank, keepBits, rotationBits: beta } = sizes;
  const entries = (rank * (rank + 1)) / 2 + n;
  const rankBits = bitsFor(rank + 1);
  const word = 2 * rankBits + 2 + keepBits;
  const registers: Register[] = [
    { name: 'index μ, ν', qubits: 2 * rankBits },
    { name: 'pair number', qubits: bitsFor(entries) },
    { name: 'rotation qubit', qubits: 1 },
    { name: 'alternate pair, signs and keep value', qubits: word },
    { name: 'comparison register', qubits: keepBits },
    { name: 'flags', qubits: 3 },
    { name: 'spin and symmetry qubits', qubits: 3 },
  ];
  const prepareGates = (suffix: string): Piece[] => [
    gate(`superposition of pairs${suffix}`, 'prepare', triangleSuperposition(rankBits)),
    gate(`pair number${suffix}`, 'prepare', pairNumber(rankBits)),
    gate(`comparison${suffix}`, 'prepare', comparison(keepBits)),
    gate(`index swap${suffix}`, 'prepare', controlledSwap(2 * rankBits)),
    gate(`swap of μ and ν${suffix}`, 'prepare', controlledSwap(rankBits)),
  ];
  const vector = (name: string, rows: number): Piece =>
    scope(
      `occupation of vector ${name}`,
      [{ name: 'angles', qubits: n * beta }],
      [
        lookup('angle look-up', 'select.lookup', { rows, bits: n * beta }, policy),
        gate('spin swaps', 'select.swaps', controlledSwap(n), 2),
        gate('orbital rotations', 'select.rotations', phaseGradientRotation(beta), 4 * n),
        unlookup('angle erasure', 'select.lookup', { rows, bits: n * beta }, policy),
      ],
    );
  const pieces = [
    scope('block encoding', registers, [
      ...prepareGates(''),
      lookup('coefficient look-up', 'prepare', { rows: entries, bits: word, main: true }, policy),
      vector('μ', rank + n),
      vector('ν', rank),
      ...prepareGates(', undone'),
      unlookup('coefficient erasure', 'prepare', { rows: entries, bits: word }, policy),
      // Indices, comparison register, two spins, the symmetry qubit and the rotation qubit.
      gate('reflection', 'reflections', reflection(2 * rankBits + keepBits + 4)),
    ]),
  ];
  const frame = { systemQubits: 2 * n, phaseBits: sizes.phaseBits, gradientBits: beta };
  return walkStep('walk step, hypercontracted', frame, pieces);
}
