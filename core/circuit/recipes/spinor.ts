import type { EncodingShape } from '../../encode';
import { addition, bitsFor, controlledFermionicSwaps, phaseGradientRotation } from '../formulas';
import type { Subroutine } from '../recipe';
import { gate, type LookupPolicy, lookup, scope, unlookup } from './scope';
import { type ProductOf, rowAddressBits, type Squares, squaresEncoding } from './squares';
import type { FactorisedBits } from './triplet';
import { walkStep } from './walk';

/** Bits beside the angles in a row: sign, and the relative sign of the time-reversed partner. */
const ROW_FLAGS = 2;

/**
 * Walk step of the spinor form: each row is an eigenvector over all 2N modes, its occupation `U n₀ U†` reached by
 * Givens rotations with phases: per neighbouring pair of modes two equal angles and a phase. The time-reversed
 * partner shares the row: a plus qubit swaps ↑ and ↓ and changes the sign of the phases (Clifford).
 */
export function spinorStep(shape: EncodingShape, bits: FactorisedBits, policy: LookupPolicy): Subroutine {
  const { orbitals: n } = shape;
  const beta = bits.rotationBits;
  const pairs = 2 * n - 1;
  const word = 2 * pairs * beta + ROW_FLAGS;
  const squares: Squares = {
    factors: shape.factors,
    rows: shape.rows,
    oneBodyRows: shape.oneBodyRows,
    rowBits: bitsFor(shape.maxRowsPerFactor),
    keepBits: bits.keepBits,
    innerExtraBits: 0,
    dataExtraBits: 1,
    plusQubits: [{ name: 'time-reversed partner', qubits: 1 }],
  };
  const addressBits = rowAddressBits(squares);
  const product: ProductOf = ({ rows }) =>
    scope(
      'occupation of a spinor',
      [{ name: 'angles', qubits: word }],
      [
        gate('row address for angles', 'select.other', addition(addressBits), 2),
        lookup('angle look-up', 'select.lookup', { rows, bits: word, main: true }, policy),
        gate('partner swap layers', 'select.swaps', controlledFermionicSwaps(n), 2),
        gate('Givens rotations with phases', 'select.rotations', phaseGradientRotation(beta), 2 * 3 * pairs),
        unlookup('angle erasure', 'select.lookup', { rows, bits: word }, policy),
      ],
    );
  const frame = { systemQubits: 2 * n, phaseBits: bits.phaseBits, gradientBits: beta };
  return walkStep('walk step, spinor factors', frame, squaresEncoding(squares, policy, product));
}
