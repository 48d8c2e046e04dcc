import { logicalAnd } from '../formulas';
import type { Subroutine } from '../recipe';
import { gate, type Piece, type Register, scope } from './scope';

/** What surrounds every block encoding in a walk step. */
export interface WalkFrame {
  /** 2N: qubits of the system register. */
  readonly systemQubits: number;
  /** Bits of the phase-estimation register, ⌈log₂(steps + 1)⌉. */
  readonly phaseBits: number;
  /** β of the phase-gradient register; 0 where nothing is rotated. */
  readonly gradientBits: number;
}

/**
 * One walk step: the pieces of the block encoding and its reflection inside the registers that live through the
 * whole run, plus two Toffoli for forward/backward control and the step counter (Babbush et al. 2018; Lee et al. 2021).
 */
export function walkStep(name: string, frame: WalkFrame, pieces: readonly Piece[]): Subroutine {
  const registers: Register[] = [
    { name: 'system', qubits: frame.systemQubits },
    { name: 'phase register', qubits: frame.phaseBits },
    { name: 'step counter ladder', qubits: Math.max(frame.phaseBits - 1, 0) },
    { name: 'phase gradient', qubits: frame.gradientBits },
  ];
  const control = gate('phase-register control', 'control', {
    ...logicalAnd(2),
    scratch: 0,
    source: 'Babbush et al., Phys. Rev. X 8, 041015 (2018); Lee et al., PRX Quantum 2, 030305 (2021)',
  });
  const step = scope(name, registers, [...pieces, control])(0);
  if (step === null) throw new Error('a walk step has registers and control, so it cannot vanish');
  return step;
}
