import { type SpatialHamiltonian, type SpinorHamiltonian, spinorFromProductForm } from '../../hamiltonian';
import { InputError } from '../../job';
import type { SparseProgram } from './program';

/** Largest number of orbitals whose full tensor is written out: (2N)⁴ complex numbers, 41 MB. */
const MOST_ORBITALS = 20;

/** E = Σ of (phase) a†_a a_b, and a constant: Σ_x (−1)^{rx} iγ_{Px}γ_{Q,x⊕r} = 2E. */
interface PairOperator {
  readonly constant: number;
  readonly elements: readonly {
    readonly a: number;
    readonly b: number;
    readonly re: number;
    readonly im: number;
  }[];
}

function pairOperator(P: number, Q: number, r: number): PairOperator {
  if (P === Q) return { constant: -1, elements: [{ a: P, b: P, re: 2, im: 0 }] };
  const [re, im] = r === 1 ? [1, 0] : [0, 1];
  return {
    constant: 0,
    elements: [
      { a: P, b: Q, re, im },
      { a: Q, b: P, re, im: -im },
    ],
  };
}

/**
 * The Hamiltonian of rows that are strings, over 2N spin orbitals.
 *
 * @throws InputError `too-large-to-rebuild`.
 */
export function rebuildStrings(h: SpatialHamiltonian, program: SparseProgram): SpinorHamiltonian {
  const n = h.orbitals;
  if (n > MOST_ORBITALS) {
    throw new InputError({
      code: 'too-large-to-rebuild',
      where: 'rebuilt Hamiltonian',
      found: `joined Majorana products of several spin components, ${n} orbitals`,
      expected: `at most ${MOST_ORBITALS} orbitals`,
      mend: 'Use an orbital window, or grouping "-".',
    });
  }
  const m = 2 * n;
  const k = { re: new Float64Array(m * m), im: new Float64Array(m * m) };
  const g = { re: new Float64Array(m ** 4), im: new Float64Array(m ** 4) };
  const addOneBody = ({ elements }: PairOperator, scale: number) => {
    for (const { a, b, re, im } of elements) {
      k.re[a * m + b]! += scale * re;
      k.im[a * m + b]! += scale * im;
    }
  };
  const addTwoBody = (first: PairOperator, second: PairOperator, scale: number) => {
    for (const x of first.elements) {
      for (const y of second.elements) {
        const at = (x.a * m + x.b) * m * m + y.a * m + y.b;
        g.re[at]! += scale * (x.re * y.re - x.im * y.im);
        g.im[at]! += scale * (x.re * y.im + x.im * y.re);
      }
    }
  };
  let { constant } = program;
  for (const [i, weight] of program.weights.entries()) {
    const kind = program.kinds[program.kindOf[i]!]!;
    const [p, q, r, s] = program.orbitalsOf.subarray(4 * i, 4 * i + 4) as unknown as [
      number,
      number,
      number,
      number,
    ];
    const signed = program.negative[i] ? -weight : weight;
    for (const sigma of [0, 1]) {
      if (kind.form === 'pairs') {
        if (kind.nu !== null) throw new RangeError('pairs of free spins beside strings with spin');
        const flips = kind.mu === 1 || kind.mu === 2 ? 1 : 0;
        const r1 = (kind.antisymmetric ? 0 : 1) ^ (kind.mu === 2 ? 1 : 0);
        const sign = (flips ^ r1 ^ 1) & sigma ? -1 : 1;
        const pair = pairOperator(2 * p + sigma, 2 * q + (sigma ^ flips), r1);
        addOneBody(pair, (sign * signed) / 2);
        constant += (pair.constant * sign * signed) / 2;
        continue;
      }
      const [s1, s2, t, r1, r2] = [0, 1, 2, 3, 4].map((bit) => (kind.flags >>> bit) & 1) as [
        number,
        number,
        number,
        number,
        number,
      ];
      const sign = (s1 ^ s2 ^ r1 ^ r2) & sigma ? -1 : 1;
      const first = pairOperator(2 * p + sigma, 2 * q + (sigma ^ s1), r1);
      const second = pairOperator(2 * r + (sigma ^ t), 2 * s + (sigma ^ t ^ s2), r2);
      // ½ (E E' + E' E): the two commute.
      const scale = (sign * signed) / 2;
      addTwoBody(first, second, scale);
      addTwoBody(second, first, scale);
      addOneBody(first, scale * second.constant);
      addOneBody(second, scale * first.constant);
      constant += scale * first.constant * second.constant;
    }
  }
  return spinorFromProductForm({ spinors: m, electrons: h.electrons, constant, k, g });
}
