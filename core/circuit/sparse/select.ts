import type { TermKind } from '../../encode';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import type { SparseLayout } from './layout';
import { exchange, withPairs } from './pairs';
import { ofKind, selectedMajorana } from './selected-majorana';
import { type Pair, splitWord, type Word } from './word';

/** Qubits in |+⟩: PREPARE does nothing but a Hadamard to them. */
export interface PlusWires {
  /** Which of the two pairs acts first; null where no two pairs share an operator, so that they commute. */
  readonly order: number | null;
  /** Spin σ and kind x of the pair that acts last, and of the one that acts first. One spin where all are fixed. */
  readonly spins: readonly number[];
  readonly kinds: readonly [number, number];
  /** Which way two components are placed; null where no coefficient asks. */
  readonly placing: number | null;
}

/**
 * SELECT: on a coefficient's word it applies ±(iγγ)(iγγ), or ±iγγ where there is one pair only, and moves the |+⟩
 * qubits such that it is its own inverse. With V the product for order 0, order 1 has the pairs exchanged, which is
 * V†; the order qubit is flipped, and spins and kinds of the two pairs change places. So a state goes from (0, z) to
 * (1, z') under V and from (1, z') back to (0, z) under V†. On |+⟩ the flips do nothing: ½(V + V†) is left.
 *
 * @param other - wire that is 1 where a shared coefficient acts as spin–other-orbit, or null.
 * @param otherSign - its sign then.
 */
export function select(
  layout: SparseLayout,
  system: readonly number[],
  wordWires: readonly number[],
  plus: PlusWires,
  other: number | null,
  otherSign: 1 | -1,
): Operation {
  const word = splitWord(layout, wordWires);
  const { order, kinds } = plus;
  const act = ([sigma, tau]: readonly [number, number]) =>
    withPairs(layout, word, plus.placing, other, otherSign, (first, second) =>
      exchangePairs(
        order,
        first,
        second,
        sequence(
          rowOperator(layout, system, second, tau, kinds[1]),
          rowOperator(layout, system, first, sigma, kinds[0]),
        ),
      ),
    );
  if (order === null) return sequence(gate('Z', word.sign), withFixedSpin(layout, word, plus.spins[0]!, act));
  const spins = [plus.spins[0]!, plus.spins[1]!] as const;
  return sequence(
    gate('Z', word.sign),
    layout.spins === 'mixed'
      ? withChosenSpin(word, spins, act)
      : sequence(act(spins), gate('SWAP', ...spins)),
    gate('X', order),
    gate('SWAP', ...kinds),
  );
}

/**
 * All rows have fixed spins: the second pair's is σ, or the opposite one. The two pairs have no operator in common, so
 * their product is Hermitian and nothing else need move. The sign of strings under a flip of all spins is that of time
 * reversal.
 */
function withFixedSpin(
  { strings }: SparseLayout,
  { spins, string }: Word,
  sigma: number,
  act: (spins: readonly [number, number]) => Operation,
): Operation {
  const opposite = spins[0]!;
  return sequence(
    within(gate('CX', sigma, opposite), act([sigma, opposite])),
    strings ? repeat(string.length, (i) => gate('CZ', sigma, string[i]!)) : nothing,
  );
}

/**
 * The second pair has the spin τ of its own or, in rows of fixed spins, σ or the opposite one. The two spins change
 * places while that holds: what was σ, σ ⊕ t before is so afterwards, with the pairs exchanged.
 */
function withChosenSpin(
  { spins: [fixed, opposite] }: Word,
  [sigma, tau]: readonly [number, number],
  act: (spins: readonly [number, number]) => Operation,
): Operation {
  return scratch(1, ([lent]) => {
    const choose = span(
      'spin of the second pair',
      'select.other',
      sequence(
        within(
          sequence(gate('CX', sigma, opposite!), gate('CX', tau, opposite!)),
          gate('AND', fixed!, opposite!, lent!),
        ),
        gate('CX', lent!, tau),
      ),
    );
    return within(choose, sequence(act([sigma, tau]), gate('SWAP', sigma, tau)));
  });
}

const wiresOf = ({ first, second, none, signature }: Pair) => [...first, ...second, ...none, ...signature];

/** Toffoli, and lent wires, of exchanging the pairs where the order qubit is 1. */
export function pairExchangeToffoli({ orbitalBits, noneBit, spin, spins }: SparseLayout): number {
  if (spins === 'fixed') return 0;
  return 2 * orbitalBits + (noneBit ? 1 : 0) + (spin ? 3 : 0);
}

function exchangePairs(order: number | null, first: Pair, second: Pair, body: Operation): Operation {
  if (order === null) return body;
  const a = wiresOf(first);
  const b = wiresOf(second);
  return scratch(a.length, (lent) =>
    within(
      span(
        'order of the pairs',
        'select.other',
        repeat(a.length, (i) => exchange(order, a[i]!, b[i]!, lent[i]!)),
      ),
      body,
    ),
  );
}

/** Toffoli, and lent wires, of exchanging the two orbitals of a pair in the spin-free form; two pairs. */
export function orbitalExchangeToffoli({ orbitalBits, spin }: SparseLayout): number {
  return spin ? 0 : orbitalBits;
}

/**
 * ±iγ_{p,σ,x} γ_{q,σ⊕s,x⊕r} up to a sign that the word holds, or 1 where there is no operator.
 *
 * Without spin r = 1 always, and −iγ_{p,σ,1} γ_{q,σ,0} = iγ_{q,σ,0} γ_{p,σ,1}: exchanging the orbitals where x is 1
 * leaves the kinds fixed, which saves all T gates.
 */
function rowOperator(
  layout: SparseLayout,
  system: readonly number[],
  pair: Pair,
  sigma: number,
  x: number,
): Operation {
  const { first, second, none } = pair;
  const named = (operation: Operation) => span('selected Majorana operator', 'select.other', operation);
  if (!layout.spin) {
    return scratch(first.length, (lent) =>
      within(
        span(
          'orbitals of a pair',
          'select.other',
          repeat(first.length, (i) => exchange(x, first[i]!, second[i]!, lent[i]!)),
        ),
        sequence(
          named(selectedMajorana(system, [sigma, ...second, ...none], 1)),
          named(selectedMajorana(system, [sigma, ...first, ...none], 0)),
        ),
      ),
    );
  }
  const [s, r, m] = pair.signature as [number, number, number | undefined];
  // Where there is no operator r is 1 all the same, and the factor i of a pair is missing once.
  const atNone = (flag: number) => sequence(gate('S', flag), gate('CZ', flag, x));
  return sequence(
    within(
      sequence(gate('CX', sigma, s), gate('CX', x, r)),
      named(ofKind(r, system, selectedMajorana(system, [s, ...second, ...none], 0))),
    ),
    named(ofKind(x, system, selectedMajorana(system, [sigma, ...first, ...none], 0, atNone))),
    gate('CZ', x, r),
    m === undefined ? nothing : gate('CZ', sigma, m),
  );
}

/** Whether the stored sign bit of a coefficient is set: its own sign, and the constants of its Majorana products. */
export function signBit(spin: boolean, kind: TermKind, negative: boolean): boolean {
  // (iγγ)(iγγ) = −γγγγ, and one pair gets its i where the other is missing; without spin −iγγ is applied twice or once.
  if (kind.form === 'strings') return negative !== spin;
  const isOneBody = kind.nu === null;
  let bit = negative !== (spin ? !isOneBody : isOneBody);
  if (!kind.antisymmetric) bit = bit !== ((kind.mu === 2) !== (kind.nu === 2));
  return bit;
}
