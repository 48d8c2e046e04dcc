import {
  AMPLIFICATION_BITS,
  addition,
  bitsFor,
  comparison,
  controlledSwap,
  reflection,
  variableSuperposition,
} from '../formulas';
import { aliasRegisters, prepare, unprepare } from './prepare';
import { gate, type LookupPolicy, lookup, type Piece, type Register, scope, unlookup } from './scope';

/**
 * Sizes of a block encoding by squares of one-body operators: `H = one-body + Σ_t w_t (L^t)²`, each L^t a list of
 * rows. The one-body part is one more item on the same hardware, its second use switched off.
 */
export interface Squares {
  /** T: factors beside the one-body item. */
  readonly factors: number;
  /** R: rows of all factors. */
  readonly rows: number;
  /** R₁: rows of the one-body item. */
  readonly oneBodyRows: number;
  /** Bits that number the rows within one factor. */
  readonly rowBits: number;
  /** ℵ. */
  readonly keepBits: number;
  /** Bits of a row that ride in the inner alias table, e.g. a sign. */
  readonly innerExtraBits: number;
  /** Bits of an item beside row offset, row count, superposition angle and sign. */
  readonly dataExtraBits: number;
  /** Qubits in the plus state beside the inner index (spin, Majorana kind): part of the inner register. */
  readonly plusQubits: readonly Register[];
}

/** What is applied between PREPARE and PREPARE† of the inner index, for the rows of one use. */
export type ProductOf = (rows: { readonly rows: number; readonly second: boolean }) => Piece;

/** PREPARE† · SELECT · PREPARE · reflection of {@link Squares}. */
export function squaresEncoding(sizes: Squares, policy: LookupPolicy, product: ProductOf): Piece[] {
  const { factors, rows, oneBodyRows, rowBits, keepBits } = sizes;
  const items = factors + 1;
  const itemBits = bitsFor(items);
  const outer = { rows: items, indexBits: itemBits, keepBits, ownBits: 0, extraBits: 0 };
  const addressBits = rowAddressBits(sizes);
  const dataBits = rowBits + addressBits + AMPLIFICATION_BITS + 1 + sizes.dataExtraBits;
  const innerWord = rowBits + keepBits + sizes.innerExtraBits;
  const plus = sizes.plusQubits.reduce((sum, register) => sum + register.qubits, 0);

  const use = (second: boolean) => {
    const used = second ? rows : rows + oneBodyRows;
    const label = second ? 'second use' : 'first use';
    const innerGates = (suffix: string): Piece[] => [
      gate(`inner equal superposition${suffix}`, 'prepare', variableSuperposition(rowBits)),
      gate(`row address${suffix}`, 'prepare', addition(addressBits)),
      gate(`inner comparison${suffix}`, 'prepare', comparison(keepBits)),
      gate(`inner index swap${suffix}`, 'prepare', controlledSwap(rowBits)),
    ];
    return scope(
      `SELECT, ${label}`,
      [],
      [
        scope(
          'inner PREPARE',
          [],
          [
            ...innerGates(''),
            lookup('inner alias look-up', 'prepare', { rows: used, bits: innerWord }, policy),
          ],
        ),
        product({ rows: used, second }),
        scope(
          'inner PREPARE†',
          [],
          [
            ...innerGates(', undone'),
            unlookup('inner alias erasure', 'prepare', { rows: used, bits: innerWord }, policy),
          ],
        ),
      ],
    );
  };

  const innerRegisters: Register[] = [
    { name: 'inner index', qubits: rowBits },
    { name: 'inner rotation qubit', qubits: 1 },
    { name: 'inner alternate index and keep value', qubits: innerWord },
    { name: 'inner comparison register', qubits: keepBits },
    { name: 'inner flag', qubits: 1 },
    ...sizes.plusQubits,
  ];
  // Index, comparison register and plus qubits, the rotation qubit, and the flags it is controlled on (a factor, not
  // the one-body item; the superposition succeeded).
  const innerReflected = rowBits + keepBits + plus + 3;

  return [
    scope('block encoding', aliasRegisters('outer', outer), [
      prepare('outer', outer, policy),
      scope(
        'factor data',
        [{ name: 'factor data', qubits: dataBits }],
        [
          lookup('factor data look-up', 'prepare', { rows: items, bits: dataBits }, policy),
          scope('square', innerRegisters, [
            use(false),
            gate('inner reflection', 'reflections', reflection(innerReflected)),
            use(true),
          ]),
          unlookup('factor data erasure', 'prepare', { rows: items, bits: dataBits }, policy),
        ],
      ),
      unprepare('outer', outer, policy),
      gate('outer reflection', 'reflections', reflection(itemBits + innerReflected)),
    ]),
  ];
}

/** Bits of an address into the rows of all items together. */
export function rowAddressBits({ rows, oneBodyRows }: Pick<Squares, 'rows' | 'oneBodyRows'>): number {
  return bitsFor(rows + oneBodyRows);
}
