import type { Finding } from '../../job';
import { type IntegralSet, numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integral-set';
import { TERMS, type Term } from '../terms';
import { maxAbs, type PartSums, sumParts, tensorComponent, type Unchecked } from './sums';

/** Sizes of one term: over all coefficients h^μ_pq and g^μν_pqrs of the stored form, hartree. */
export interface TermSizes {
  readonly name: Term;
  /** Largest |coefficient|. */
  readonly maxAbs: number;
  /** Σ |h^μ_pq| + ½ Σ |g^μν_pqrs| over all index values. */
  readonly oneNorm: number;
  readonly constant: number;
  readonly parts: readonly { readonly id: string; readonly role: string; readonly origin: string }[];
}

/** What `inspect` prints. */
export interface Description {
  readonly kind: IntegralSet['kind'];
  readonly title: string;
  /** Spatial orbitals; half the number of spinors. */
  readonly orbitals: number;
  readonly electrons: number;
  readonly ms2: number | null;
  readonly occupations: readonly number[] | null;
  /** Sum over all terms, hartree. */
  readonly constant: number;
  readonly terms: readonly TermSizes[];
  readonly meanFieldCoversActive: boolean;
  readonly findings: readonly Finding[];
  readonly files: readonly { readonly path: string; readonly bytes: number }[];
}

/** Summary of a set as plain data. */
export function describe(set: IntegralSet): Description {
  const { kind, electrons, findings, provenance } = set;
  const common = { kind, title: provenance.title, electrons, findings, files: provenance.files };
  if (set.kind === 'spinor') {
    return {
      ...common,
      orbitals: set.spinors / 2,
      ms2: null,
      occupations: null,
      constant: set.constant,
      terms: [spinorSizes(set)],
      meanFieldCoversActive: false,
    };
  }
  return {
    ...common,
    orbitals: set.orbitals,
    ms2: set.ms2,
    occupations: [...set.occupations],
    constant: Object.values(set.constants).reduce((a, b) => a + b, 0),
    terms: TERMS.filter((term) => holds(set, term)).map((term) => termSizes(set, term)),
    meanFieldCoversActive: set.meanFieldCoversActive,
  };
}

const holds = (set: Unchecked, term: Term): boolean =>
  set.constants[term] !== undefined ||
  [...set.oneElectron, ...set.twoElectron].some((part) => part.term === term);

function termSizes(set: Unchecked, term: Term): TermSizes {
  const isTerm = (part: { term: Term }) => part.term === term;
  const sums = sumParts(set, isTerm);
  const spinOrbit = spinOrbitSizes(sums, set.orbitals);
  let oneNorm = sumAbs(sums.charge) + sumAbs(sums.spin) + spinOrbit.oneNorm;
  if (sums.chargeCharge !== null) oneNorm += 0.5 * sumAbsTriangle(sums.chargeCharge, set.orbitals);
  if (sums.spinSpin !== null) {
    for (let kl = 0; kl < 6; kl++) {
      const triangle = tensorComponent(sums.spinSpin, set.orbitals, kl);
      // xy, xz and yz stand for their transposes too.
      oneNorm += (kl === 0 || kl === 3 || kl === 5 ? 0.5 : 1) * sumAbsTriangle(triangle, set.orbitals);
    }
  }
  const arrays = [sums.charge, sums.spin, sums.chargeCharge, sums.spinSpin];
  return {
    name: term,
    maxAbs: Math.max(spinOrbit.maxAbs, ...arrays.map(maxAbs)),
    oneNorm,
    constant: set.constants[term] ?? 0,
    parts: [...set.oneElectron, ...set.twoElectron]
      .filter(isTerm)
      .filter(({ id }, index, all) => all.findIndex((other) => other.id === id) === index)
      .map(({ id, role, origin }) => ({ id, role, origin })),
  };
}

function sumAbs(values: Float64Array | null): number {
  let sum = 0;
  for (let i = 0; i < (values?.length ?? 0); i++) sum += Math.abs(values![i]!);
  return sum;
}

/** Σ |A_pqrs| over all n⁴ index values. */
function sumAbsTriangle(values: Float64Array, n: number): number {
  const pairs = numSymmetricPairs(n);
  const weight = new Float64Array(pairs);
  for (let p = 0; p < n; p++) for (let q = 0; q <= p; q++) weight[symmetricPair(p, q)] = p === q ? 1 : 2;
  let sum = 0;
  for (let P = 0, position = 0; P < pairs; P++) {
    for (let Q = 0; Q <= P; Q++, position++) {
      sum += weight[P]! * weight[Q]! * (P === Q ? 1 : 2) * Math.abs(values[position]!);
    }
  }
  return sum;
}

/**
 * g^{k0}_pqrs = i(S_pq,rs + O_rs,pq). Under p↔q and r↔s the two change sign differently, so the four orders of an
 * element are ±(S + O) and ±(S − O), whose absolute values add up to 4 max(|S|, |O|).
 */
function spinOrbitSizes({ same, other }: PartSums, n: number): { maxAbs: number; oneNorm: number } {
  if (same === null && other === null) return { maxAbs: 0, oneNorm: 0 };
  const [anti, sym] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const [values, factor] =
    other === null ? [null, 0] : other instanceof Float64Array ? [other, 1] : [same, other.timesSame];
  let max = 0;
  let sum = 0;
  for (let k = 0; k < 3; k++) {
    const start = k * anti * sym;
    for (let p = 0, pq = 0; p < n; p++) {
      for (let q = 0; q <= p; q++, pq++) {
        for (let r = 0, rs = 0; r < n; r++) {
          for (let s = 0; s <= r; s++, rs++) {
            const isPair = p > q;
            const isOther = r > s;
            const S = same === null || !isPair ? 0 : Math.abs(same[start + (pq - p) * sym + rs]!);
            const O =
              values === null || !isOther ? 0 : Math.abs(factor * values[start + (rs - r) * sym + pq]!);
            if (S + O > max) max = S + O;
            sum += isPair && isOther ? 4 * Math.max(S, O) : 2 * (S + O);
          }
        }
      }
    }
  }
  return { maxAbs: max, oneNorm: sum };
}

function spinorSizes(set: Extract<IntegralSet, { kind: 'spinor' }>): TermSizes {
  const size = (plane: { re: Float64Array; im: Float64Array }) => {
    let [max, sum] = [0, 0];
    for (let i = 0; i < plane.re.length; i++) {
      const value = Math.hypot(plane.re[i]!, plane.im[i]!);
      if (value > max) max = value;
      sum += value;
    }
    return { max, sum };
  };
  const [h, g] = [size(set.h), size(set.g)];
  const [file] = set.provenance.files;
  return {
    name: 'sf',
    maxAbs: Math.max(h.max, g.max),
    oneNorm: h.sum + 0.5 * g.sum,
    constant: set.constant,
    parts: [{ id: 'spinor', role: 'spinor', origin: file?.path ?? '' }],
  };
}
