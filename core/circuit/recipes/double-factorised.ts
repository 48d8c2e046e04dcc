import { addition, bitsFor, controlledSwap, phaseGradientRotation } from '../formulas';
import type { Subroutine } from '../recipe';
import { gate, type LookupPolicy, lookup, scope, unlookup } from './scope';
import { type ProductOf, rowAddressBits, type Squares, squaresEncoding } from './squares';
import { walkStep } from './walk';

export interface DoubleFactorised {
  /** N spatial orbitals. */
  readonly orbitals: number;
  /** L: factors. */
  readonly factors: number;
  /** Σ of the ranks of all factors. */
  readonly rows: number;
  readonly keepBits: number;
  readonly rotationBits: number;
  readonly phaseBits: number;
}

/**
 * Walk step of spin-free double factorisation: von Burg et al., Phys. Rev. Research 3, 033055 (2021), in the
 * composition of Lee et al., PRX Quantum 2, 030305 (2021).
 */
export function doubleFactorisedStep(sizes: DoubleFactorised, policy: LookupPolicy): Subroutine {
  const { orbitals: n, rotationBits: beta } = sizes;
  const squares: Squares = {
    factors: sizes.factors,
    rows: sizes.rows,
    oneBodyRows: n,
    rowBits: bitsFor(n),
    keepBits: sizes.keepBits,
    innerExtraBits: 2,
    dataExtraBits: 0,
    plusQubits: [{ name: 'spin', qubits: 1 }],
  };
  const addressBits = rowAddressBits(squares);
  const product: ProductOf = ({ rows }) =>
    scope(
      'occupation of a rotated orbital',
      [{ name: 'angles', qubits: n * beta }],
      [
        gate('row address for angles', 'select.other', addition(addressBits), 2),
        lookup('angle look-up', 'select.lookup', { rows, bits: n * beta, main: true }, policy),
        gate('spin swaps', 'select.swaps', controlledSwap(n), 2),
        gate('orbital rotations', 'select.rotations', phaseGradientRotation(beta), 4 * n),
        unlookup('angle erasure', 'select.lookup', { rows, bits: n * beta }, policy),
      ],
    );
  const frame = { systemQubits: 2 * n, phaseBits: sizes.phaseBits, gradientBits: beta };
  return walkStep('walk step, double factorised', frame, squaresEncoding(squares, policy, product));
}
