import {
  bitsFor,
  comparison,
  controlledSwap,
  pairNumber,
  reflection,
  unaryIteration,
  variableSuperposition,
} from '../formulas';
import type { Subroutine } from '../recipe';
import { aliasRegisters, prepare, unprepare } from './prepare';
import { gate, type LookupPolicy, lookup, type Piece, type Register, scope, unlookup } from './scope';
import { walkStep } from './walk';

export interface SingleFactorised {
  /** N spatial orbitals. */
  readonly orbitals: number;
  /** L: factors. */
  readonly factors: number;
  readonly keepBits: number;
  readonly phaseBits: number;
}

/**
 * Walk step of spin-free single factorisation: Berry et al., Quantum 3, 208 (2019), in the composition of Lee et
 * al., PRX Quantum 2, 030305 (2021). Each factor's N(N+1)/2 pairs are sampled by their own alias tables, twice
 * for the square; the one-body part is factor L + 1 with its second use off.
 */
export function singleFactorisedStep(sizes: SingleFactorised, policy: LookupPolicy): Subroutine {
  const { orbitals: n, factors, keepBits } = sizes;
  const pairs = (n * (n + 1)) / 2;
  const orbitalBits = bitsFor(n);
  const itemBits = bitsFor(factors + 1);
  const outer = { rows: factors + 1, indexBits: itemBits, keepBits, ownBits: 0, extraBits: 0 };
  const innerWord = 2 * orbitalBits + keepBits + 2;
  const innerRegisters: Register[] = [
    { name: 'inner index p, q', qubits: 2 * orbitalBits },
    { name: 'inner pair number', qubits: bitsFor(pairs) },
    { name: 'inner rotation qubit', qubits: 1 },
    { name: 'inner alternate pair and keep value', qubits: innerWord },
    { name: 'inner comparison register', qubits: keepBits },
    { name: 'inner flag', qubits: 1 },
    { name: 'spin and symmetry qubits', qubits: 2 },
  ];
  const innerGates = (suffix: string): Piece[] => [
    gate(`inner equal superposition${suffix}`, 'prepare', variableSuperposition(orbitalBits)),
    gate(`inner pair number${suffix}`, 'prepare', pairNumber(orbitalBits)),
    gate(`inner comparison${suffix}`, 'prepare', comparison(keepBits)),
    gate(`inner index swap${suffix}`, 'prepare', controlledSwap(2 * orbitalBits)),
    gate(`swap within the pair${suffix}`, 'prepare', controlledSwap(orbitalBits)),
  ];
  const use = (second: boolean): Piece => {
    const rows = (second ? factors : factors + 1) * pairs;
    return scope(
      `SELECT, ${second ? 'second' : 'first'} use`,
      [],
      [
        ...innerGates(''),
        lookup('inner alias look-up', 'prepare', { rows, bits: innerWord, main: true }, policy),
        gate('Majorana pair', 'select.other', unaryIteration(2 * n, { controlled: second, ranged: true }), 2),
        ...innerGates(', undone'),
        unlookup('inner alias erasure', 'prepare', { rows, bits: innerWord }, policy),
      ],
    );
  };
  // Index, comparison register, plus qubits, rotation qubit and two flags.
  const innerReflected = 2 * orbitalBits + keepBits + 2 + 3;
  const pieces = [
    scope('block encoding', aliasRegisters('outer', outer), [
      prepare('outer', outer, policy),
      scope('square', innerRegisters, [
        use(false),
        gate('inner reflection', 'reflections', reflection(innerReflected)),
        use(true),
      ]),
      unprepare('outer', outer, policy),
      gate('outer reflection', 'reflections', reflection(itemBits + innerReflected)),
    ]),
  ];
  const frame = { systemQubits: 2 * n, phaseBits: sizes.phaseBits, gradientBits: 0 };
  return walkStep('walk step, single factorised', frame, pieces);
}
