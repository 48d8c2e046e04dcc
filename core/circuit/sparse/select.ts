import type { TermKind } from '../../encode';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import { SPIN_BITS, type SparseLayout } from './layout';
import { ofKind, selectedMajorana } from './selected-majorana';

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

/** Parts of a coefficient's word. */
interface Word {
  readonly p: readonly number[];
  readonly q: readonly number[];
  readonly r: readonly number[];
  readonly s: readonly number[];
  /** One wire or none. */
  readonly none: readonly number[];
  readonly sign: number;
  /** Of `spins` bits: [fixed, opposite], [opposite] or nothing. */
  readonly spins: readonly number[];
  /** s₁, r₁, s₂, r₂ of strings. */
  readonly string: readonly number[];
  readonly antisymmetric: number;
  readonly component: readonly number[];
  readonly second: readonly number[];
}

export function splitWord(layout: SparseLayout, wires: readonly number[]): Word {
  const rest = [...wires];
  const take = (size: number) => rest.splice(0, size);
  const { orbitalBits: n, strings } = layout;
  const spin = layout.spin && !strings;
  return {
    p: take(n),
    q: take(n),
    r: take(n),
    s: take(n),
    none: take(layout.noneBit ? 1 : 0),
    sign: take(1)[0]!,
    spins: take(SPIN_BITS[layout.spins]),
    string: take(strings ? 4 : 0),
    antisymmetric: take(spin ? 1 : 0)[0] ?? -1,
    component: take(spin ? 2 : 0),
    second: take(spin && layout.storesSecond ? 2 : 0),
  };
}

/** One of the two row operators, as wires. */
interface Pair {
  readonly first: readonly number[];
  readonly second: readonly number[];
  /** Shared highest bit of both addresses: no operator. */
  readonly none: readonly number[];
  /** s, r and, but for strings, m: see core/circuit/triplet/rows.ts. Empty in the spin-free form. */
  readonly signature: readonly number[];
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

/** Toffoli and lent wires of turning the word into two pairs. */
export function pairsToffoli(layout: SparseLayout): number {
  const { spin, share, exchanged, strings } = layout;
  if (!spin || strings) return 0;
  const control = share && exchanged ? 2 : share || exchanged ? 1 : 0;
  return noneFlagToffoli(layout) + control + (control > 0 ? 2 : 0) + 1 + (layout.hasSecond ? 1 : 0);
}

export function pairsWires(layout: SparseLayout): number {
  const { spin, share, exchanged, noneBit } = layout;
  const firstNone = noneBit ? 1 : 0;
  if (!spin || layout.strings) return firstNone;
  const control = share && exchanged ? 2 : share || exchanged ? 1 : 0;
  const components = layout.storesSecond ? 0 : 2;
  return firstNone + noneFlagToffoli(layout) + control + (control > 0 ? 2 : 0) + components + 2;
}

/** That there is no second pair matters where a component could be moved there: n bits compared with N. */
function noneFlagToffoli({ share, noneBit, orbitalBits }: SparseLayout): number {
  return share === null || noneBit ? 0 : orbitalBits - 1;
}

/**
 * Places the components and finds s, m, r of both pairs while `body` runs. s and m name the component (x: 1 0,
 * y: 1 1, z: 0 1), r = 1 ⊕ [antisymmetric] ⊕ s·m.
 */
function withPairs(
  layout: SparseLayout,
  word: Word,
  placing: number | null,
  other: number | null,
  otherSign: 1 | -1,
  body: (first: Pair, second: Pair) => Operation,
): Operation {
  return scratch(pairsWires(layout), (lent) => {
    const free = [...lent];
    const take = (size: number) => free.splice(0, size);
    const noFirst = take(word.none.length);
    const pairs = (signatures: readonly (readonly number[])[]) =>
      body(
        { first: word.p, second: word.q, none: noFirst, signature: signatures[0]! },
        { first: word.r, second: word.s, none: word.none, signature: signatures[1]! },
      );
    if (!layout.spin) return pairs([[], []]);
    if (layout.strings) return pairs([word.string.slice(0, 2), word.string.slice(2)]);

    const first = word.component;
    const second = layout.storesSecond ? word.second : take(2);
    const noneLadder = take(noneFlagToffoli(layout));
    const none = layout.noneBit ? word.none[0]! : (noneLadder[noneLadder.length - 1] ?? -1);
    const control = placingControl(word.antisymmetric, placing, other, none, take);
    const moved = control === null ? [] : take(2);
    const [rFirst, rSecond] = take(2) as [number, number];

    const place = sequence(
      other === null || layout.noneBit ? nothing : equalsConstant(word.r, layout.orbitals, noneLadder),
      control === null ? nothing : control.compute,
      repeat(moved.length, (i) => exchange(control!.wire, first[i]!, second[i]!, moved[i]!)),
    );
    // An S row of y has a sign of its own. In a symmetric pair's word it is stored; where I is antisymmetric, J may
    // have got its y just now.
    const yFirst = gate('AND', first[0]!, first[1]!, rFirst);
    const ySecond = layout.hasSecond ? gate('AND', second[0]!, second[1]!, rSecond) : nothing;
    const kinds = sequence(
      yFirst,
      ySecond,
      gate('X', rFirst),
      gate('CX', word.antisymmetric, rFirst),
      gate('X', rSecond),
    );
    const signOfY = within(gate('X', rSecond), gate('CZ', word.antisymmetric, rSecond));
    const signOfOther =
      control === null || other === null || otherSign > 0
        ? nothing
        : gate('CZ', word.antisymmetric, control.wire);
    return within(
      span('pairs of the coefficient', 'select.other', sequence(place, kinds)),
      sequence(
        signOfY,
        signOfOther,
        pairs([
          [first[0]!, rFirst, first[1]!],
          [second[0]!, rSecond, second[1]!],
        ]),
      ),
    );
  });
}

/**
 * Whether the components change places: in antisymmetric words as `other` says (unless there is no second pair), in
 * symmetric ones as `placing` says. Null where neither can be.
 */
function placingControl(
  antisymmetric: number,
  placing: number | null,
  other: number | null,
  none: number,
  take: (size: number) => number[],
): { readonly compute: Operation; readonly wire: number } | null {
  const unless = (control: number, off: number, target: number) =>
    sequence(gate('X', off), gate('AND', control, off, target), gate('X', off));
  if (other === null) {
    if (placing === null) return null;
    const [wire] = take(1) as [number];
    return { compute: unless(placing, antisymmetric, wire), wire };
  }
  if (placing === null) {
    const [wire] = take(1) as [number];
    return { compute: unless(other, none, wire), wire };
  }
  const [chosen, wire] = take(2) as [number, number];
  // placing ⊕ antisymmetric·(placing ⊕ other)
  const choose = sequence(
    within(gate('CX', placing, other), gate('AND', antisymmetric, other, chosen)),
    gate('CX', placing, chosen),
  );
  return { compute: sequence(choose, unless(chosen, none, wire)), wire };
}

/** Last lent wire ← [number = value]; one wire less than the number has. */
function equalsConstant(number: readonly number[], value: number, lent: readonly number[]): Operation {
  const flips = repeat(number.length, (i) =>
    Math.floor(value / 2 ** i) % 2 === 1 ? nothing : gate('X', number[i]!),
  );
  const ladder = repeat(lent.length, (i) =>
    gate('AND', i === 0 ? number[0]! : lent[i - 1]!, number[i + 1]!, lent[i]!),
  );
  return sequence(flips, ladder, flips);
}

/** a and b change places where control is 1; the lent wire makes taking it back free. */
function exchange(control: number, a: number, b: number, lent: number): Operation {
  return sequence(
    within(gate('CX', a, b), gate('AND', control, b, lent)),
    gate('CX', lent, a),
    gate('CX', lent, b),
  );
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
