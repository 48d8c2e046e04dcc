/** What two-electron arrays a Hamiltonian has. */
export interface HeldParts {
  readonly charge: boolean;
  /** null: none; 'independent': two arrays; a number: other = that times same. */
  readonly spinOrbit: null | 'independent' | number;
  readonly spinSpin: boolean;
}

/** One of the arrays, and which positions of the quartet its two pairs are at. */
export interface Slot {
  readonly array: 'charge' | 'same' | 'other' | 'spin-spin';
  /** k of spin–orbit, 0 … 2; component 0 … 5 of spin–spin. */
  readonly component: number;
  /** Positions in the descending quartet, lower position first; the antisymmetric pair for spin–orbit. */
  readonly left: readonly [number, number];
  readonly right: readonly [number, number];
}

export interface LinearForm {
  readonly slots: readonly number[];
  readonly factors: readonly number[];
  /** 0 coulomb, 1 same-orbit, 2 other-orbit, 3 spin–spin. */
  readonly parts: readonly number[];
}

/** A Majorana operator: position in the quartet, spin, kind. */
export interface Majorana {
  readonly at: number;
  readonly spin: number;
  readonly kind: number;
}

export type Four = readonly [Majorana, Majorana, Majorana, Majorana];

/** xx, xy, xz, yy, yz, zz. */
const SPIN_SPIN = [
  [0, 1, 2],
  [1, 3, 4],
  [2, 4, 5],
] as const;

/** Linear forms over slots, each of which is listed once. */
export class SlotTable {
  readonly slots: Slot[] = [];
  readonly #known = new Map<string, number>();

  constructor(
    private readonly first: readonly number[],
    private readonly held: HeldParts,
  ) {}

  /** Of (iγ_aγ_b)(iγ_cγ_d) in H, all four distinct. */
  coefficient([a, b, c, d]: Four): LinearForm {
    const sums = new Map<string, { slot: number; part: number; factor: number }>();
    const add = (factor: number, part: number, slot: Slot) => {
      if (factor === 0) return;
      const index = this.#indexOf(slot);
      const key = `${index} ${part}`;
      const entry = sums.get(key) ?? { slot: index, part, factor: 0 };
      entry.factor += factor;
      sums.set(key, entry);
    };
    this.#pairing(a, b, c, d, 1, add);
    this.#pairing(a, c, b, d, -1, add);
    this.#pairing(a, d, b, c, 1, add);
    const entries = [...sums.values()].filter(({ factor }) => factor !== 0);
    return {
      slots: entries.map(({ slot }) => slot),
      factors: entries.map(({ factor }) => factor),
      parts: entries.map(({ part }) => part),
    };
  }

  /** Adds sign · what the pairs ab and cd give, in both orders. */
  #pairing(
    a: Majorana,
    b: Majorana,
    c: Majorana,
    d: Majorana,
    sign: number,
    add: (factor: number, part: number, slot: Slot) => void,
  ): void {
    const { charge, spinOrbit, spinSpin } = this.held;
    const [ab, cd] = [pairOf(a, b), pairOf(c, d)];
    if (charge) {
      const [left, right] = ab[0] < cd[0] || (ab[0] === cd[0] && ab[1] <= cd[1]) ? [ab, cd] : [cd, ab];
      add(sign * symmetric(0, a, b) * symmetric(0, c, d), 0, { array: 'charge', component: 0, left, right });
    }
    if (spinSpin) {
      for (let k = 0; k < 3; k++) {
        for (let l = 0; l < 3; l++) {
          const factor = sign * symmetric(k + 1, a, b) * symmetric(l + 1, c, d);
          const [left, right] = ab[0] < cd[0] || (ab[0] === cd[0] && ab[1] <= cd[1]) ? [ab, cd] : [cd, ab];
          add(factor, 3, { array: 'spin-spin', component: SPIN_SPIN[k]![l]!, left, right });
        }
      }
    }
    if (spinOrbit === null) return;
    for (const [p, q, r, s, left, right] of [
      [a, b, c, d, ab, cd],
      [c, d, a, b, cd, ab],
    ] as const) {
      // pq is the antisymmetric pair, rs the symmetric one.
      if (p.at === q.at) continue;
      for (let k = 0; k < 3; k++) {
        add(sign * antisymmetric(k + 1, p, q) * symmetric(0, r, s), 1, {
          array: 'same',
          component: k,
          left,
          right,
        });
        const times = spinOrbit === 'independent' ? 1 : spinOrbit;
        add(times * sign * antisymmetric(0, p, q) * symmetric(k + 1, r, s), 2, {
          array: spinOrbit === 'independent' ? 'other' : 'same',
          component: k,
          left,
          right,
        });
      }
    }
  }

  #indexOf(slot: Slot): number {
    const place = (at: number) => this.first[at]!;
    const key = [slot.array, slot.component, ...slot.left.map(place), ...slot.right.map(place)].join();
    let index = this.#known.get(key);
    if (index === undefined) {
      index = this.slots.length;
      this.slots.push(slot);
      this.#known.set(key, index);
    }
    return index;
  }
}

const pairOf = (a: Majorana, b: Majorana): [number, number] => (a.at <= b.at ? [a.at, b.at] : [b.at, a.at]);

/*
 * Coefficient of iγ_aγ_b in the element of a pair whose value is 1: ½ Im(i^{y−x} K_ab) for a one-body operator
 * Σ K_ab a†_a a_b, a and b of kinds x and y.
 */

/** K = σ^μ for a symmetric pair of orbitals. */
function symmetric(mu: number, a: Majorana, b: Majorana): number {
  const isFlip = a.spin !== b.spin;
  const differ = (b.kind - a.kind) / 2;
  if (mu === 0) return isFlip ? 0 : differ;
  if (mu === 1) return isFlip ? differ : 0;
  if (mu === 2) return isFlip && a.kind === b.kind ? (a.spin - b.spin) / 2 : 0;
  return isFlip ? 0 : differ * (1 - 2 * a.spin);
}

/** K = iA σ^μ, A = 1 where the orbital of a is the larger one, −1 where that of b is. */
function antisymmetric(mu: number, a: Majorana, b: Majorana): number {
  const isFlip = a.spin !== b.spin;
  const order = a.at < b.at ? 1 : -1;
  const equal = a.kind === b.kind ? order / 2 : 0;
  if (mu === 0) return isFlip ? 0 : equal;
  if (mu === 1) return isFlip ? equal : 0;
  if (mu === 2) return isFlip ? (order * (b.kind - a.kind) * (b.spin - a.spin)) / 2 : 0;
  return isFlip ? 0 : equal * (1 - 2 * a.spin);
}
