/** Wires of the outer index: they only steer. */
interface OuterWires {
  readonly item: readonly number[];
  readonly face: number | null;
  readonly square: number | null;
  readonly outerUniform: readonly number[];
}

/** Tables of an encoding by squares, as far as its outer index goes. */
interface OuterTables {
  readonly itemBits: number;
  readonly outer: { readonly probabilities: Float64Array };
}

/** Outer index states of an encoding by squares: item, face, and square of a pair. */
export interface SquaresBranches {
  readonly probabilities: readonly number[];
  /** Wires that are 1 in a branch. */
  steering(wires: OuterWires, branch: number): number[];
  /** `ancillas` without the wires of the outer index. */
  projected(wires: OuterWires, ancillas: readonly number[]): number[];
}

/** @param items - numFaces and whether it is a pair of squares, item by item */
export function squaresBranches(
  { itemBits, outer }: OuterTables,
  items: readonly { readonly numFaces: number; readonly paired: boolean }[],
): SquaresBranches {
  const branches = items.flatMap(({ numFaces, paired }, t) =>
    Array.from({ length: numFaces }, (_, face) =>
      (paired ? [0, 1] : [0]).map((square) => ({
        t,
        face,
        square,
        probability: outer.probabilities[face * 2 ** itemBits + t]! / (paired ? 2 : 1),
      })),
    ).flat(),
  );
  return {
    probabilities: branches.map(({ probability }) => probability),
    steering(wires, branch) {
      const { t, face, square } = branches[branch]!;
      return [
        ...wires.item.filter((_, i) => (t >> i) & 1),
        ...(face === 1 ? [wires.face!] : []),
        ...(square === 1 ? [wires.square!] : []),
      ];
    },
    projected(wires, ancillas) {
      const fixed = new Set([...wires.item, wires.face, wires.square, ...wires.outerUniform]);
      return ancillas.filter((wire) => !fixed.has(wire));
    },
  };
}
