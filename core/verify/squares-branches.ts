import { drawing, type WeightTables } from '../circuit';

/** Wires of the outer index: they only steer. */
interface OuterWires {
  readonly item: readonly number[];
  readonly face: number | null;
  readonly square: number | null;
  readonly outerUniform: readonly number[];
}

/** Outer index states of an encoding by squares: item, face, and square of a pair; or product. */
export interface SquaresBranches {
  readonly probabilities: readonly number[];
  /** Whether the wire of the square steers: where there are products, they change it. */
  readonly squareSteers: boolean;
  /** Wires that are 1 in a branch. */
  steering(wires: OuterWires, branch: number): number[];
  /** `ancillas` without the wires that steer. */
  projected(wires: OuterWires, ancillas: readonly number[]): number[];
}

/** @param items - numFaces and whether it is a pair of squares, item by item */
export function squaresBranches(
  { firstEntry, nextFace, outer, places }: Pick<WeightTables, 'firstEntry' | 'nextFace' | 'outer' | 'places'>,
  items: readonly { readonly numFaces: number; readonly paired: boolean }[],
): SquaresBranches {
  const squareSteers = places === null;
  const branches = items.flatMap(({ numFaces, paired }, t) =>
    Array.from({ length: numFaces }, (_, face) => {
      const entry = firstEntry[t]! + face * nextFace;
      const squares = paired && squareSteers ? [0, 1] : [0];
      return squares.map((square) => ({
        entry,
        square,
        probability: outer.probabilities[entry]! / squares.length,
      }));
    }).flat(),
  );
  for (let entry = places?.firstProduct ?? 0; entry < (places?.entries ?? 0); entry++) {
    branches.push({ entry, square: 0, probability: outer.probabilities[entry]! });
  }
  return {
    probabilities: branches.map(({ probability }) => probability),
    squareSteers,
    steering(wires, branch) {
      const { entry, square } = branches[branch]!;
      // Where entries have places, alias sampling brings their data: by an index and a uniform number that draw them.
      const drawn = places ? drawing(outer, entry)! : { index: entry, uniform: 0 };
      const index = [...wires.item, ...(wires.face === null ? [] : [wires.face])];
      return [
        ...index.filter((_, i) => (drawn.index >> i) & 1),
        ...wires.outerUniform.filter((_, i) => Math.floor(drawn.uniform / 2 ** i) % 2 === 1),
        ...(square === 1 ? [wires.square!] : []),
      ];
    },
    projected(wires, ancillas) {
      const square = squareSteers ? wires.square : null;
      const fixed = new Set([...wires.item, wires.face, square, ...wires.outerUniform]);
      return ancillas.filter((wire) => !fixed.has(wire));
    },
  };
}
