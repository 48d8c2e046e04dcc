import type { EncodingShape } from '../../encode';
import {
  addition,
  bitsFor,
  controlledFermionicSwaps,
  logicalAnd,
  majoranaExchange,
  phaseGradientRotation,
} from '../formulas';
import type { Subroutine } from '../recipe';
import { gate, type LookupPolicy, lookup, type Piece, type Register, scope, unlookup } from './scope';
import { type ProductOf, rowAddressBits, type Squares, squaresEncoding } from './squares';
import { walkStep } from './walk';

/** Bits beside the angles in a row: spin flip s, Majorana kind r, sign mask m, sign. */
const ROW_FLAGS = 4;

export interface FactorisedBits {
  readonly keepBits: number;
  readonly rotationBits: number;
  readonly phaseBits: number;
}

/**
 * Walk step of the triplet form. Every row, S or A, of every component is one product of two rotated Majorana
 * operators `±i γ_{uσx} γ_{v,σ⊕s,x⊕r}` with σ and x in the plus state.
 *
 * @param spin - `swap-layers`: one spin register is rotated and controlled fermionic swaps bring the spin there;
 * `index`: both are rotated by the same uncontrolled angles and σ chooses at the central Majorana operator.
 */
export function tripletStep(
  shape: EncodingShape,
  spin: 'index' | 'swap-layers',
  bits: FactorisedBits,
  policy: LookupPolicy,
): Subroutine {
  const { orbitals: n, spinDependent } = shape;
  const pairRows = shape.pairRows + shape.oneBodyPairRows;
  const sizes = { rows: shape.rows, oneBodyRows: shape.oneBodyRows };
  const squares: Squares = {
    ...sizes,
    factors: shape.factors,
    rowBits: bitsFor(shape.maxRowsPerFactor),
    keepBits: bits.keepBits,
    innerExtraBits: 0,
    // The one-body flag; where A rows have a table of their own, the shift from row to A-row address too.
    dataExtraBits: 1 + (pairRows > 0 ? rowAddressBits(sizes) : 0),
    plusQubits: spinDependent
      ? [
          { name: 'spin', qubits: 1 },
          { name: 'Majorana kind', qubits: 1 },
        ]
      : [{ name: 'spin', qubits: 1 }],
  };
  const product = tripletProduct(shape, spin, bits.rotationBits, policy);
  const frame = { systemQubits: 2 * n, phaseBits: bits.phaseBits, gradientBits: bits.rotationBits };
  return walkStep(`walk step, triplet factors, ${spin}`, frame, squaresEncoding(squares, policy, product));
}

function tripletProduct(
  shape: EncodingShape,
  spin: 'index' | 'swap-layers',
  beta: number,
  policy: LookupPolicy,
): ProductOf {
  const { orbitals: n, spinDependent } = shape;
  const addressBits = rowAddressBits(shape);
  const angleBits = (n - 1) * beta;
  const tracks = spin === 'index' ? 2 : 1;
  // Outer layers carry σ and σ⊕s; the one between the two operators carries s, which is zero without spin terms.
  const layers = spin === 'index' ? 0 : spinDependent ? 3 : 2;
  const half = (which: string): Piece[] => [
    gate(`rotations of ${which}`, 'select.rotations', phaseGradientRotation(beta), 2 * (n - 1) * tracks),
    gate(`Majorana kind of ${which}`, 'select.other', majoranaExchange(n * tracks), spinDependent ? 2 : 0),
  ];
  const registers: Register[] = [
    { name: 'angles', qubits: angleBits + ROW_FLAGS },
    { name: 'combined spin and kind', qubits: spinDependent ? 2 : 0 },
  ];
  return ({ rows, second }) => {
    const pairs = shape.pairRows + (second ? 0 : shape.oneBodyPairRows);
    const pairLookup = [
      gate('A-row flag', 'select.other', logicalAnd(1)),
      gate('A-row address', 'select.other', addition(addressBits), 2),
      lookup(
        'second angle look-up',
        'select.lookup',
        { rows: pairs, bits: angleBits, main: true, onto: true },
        policy,
      ),
    ];
    return scope('product of two rotated Majorana operators', registers, [
      gate('row address for angles', 'select.other', addition(addressBits), 2),
      lookup('angle look-up', 'select.lookup', { rows, bits: angleBits + ROW_FLAGS, main: true }, policy),
      ...half('the right operator'),
      ...(pairs > 1 ? pairLookup : []),
      ...half('the left operator'),
      gate('spin swap layers', 'select.swaps', controlledFermionicSwaps(n), layers),
      // The one-body item must switch the two central operators of the second use off; with σ in the index each
      // of them has a control already.
      gate('one-body switch', 'select.other', logicalAnd(second && spin === 'index' ? 2 : 0)),
      unlookup('angle erasure', 'select.lookup', { rows, bits: angleBits + ROW_FLAGS }, policy),
    ]);
  };
}
