import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import type { SparseLayout } from './layout';
import type { Pair, Word } from './word';

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
export function withPairs(
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
export function exchange(control: number, a: number, b: number, lent: number): Operation {
  return sequence(
    within(gate('CX', a, b), gate('AND', control, b, lent)),
    gate('CX', lent, a),
    gate('CX', lent, b),
  );
}
