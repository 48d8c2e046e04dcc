import type { Residual } from '../factor';
import type { TripletOperator } from '../hamiltonian';
import { fromProductForm, type SpatialHamiltonian, type TwoElectronTensor } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { sumLambda } from './assemble';
import type { Encoding, EncodingShape } from './encoding';
import { kindsOf, sparseProgram } from './sparse-program';
import { numRows, type Section, sparseSections, visitRows } from './sparse-sections';
import type { VariantName } from './variant';

/** Weights up to this are noise of the integrals, hartree. */
const NOISE = 1e-15;
/** Coefficients between two checkpoints. */
const BLOCK = 1 << 20;

/**
 * Sparse encoding: the product form term by term over pairs of Hermitian elements,
 *
 *     H = c₀ + Σ κ^μ_pq B^μ_pq + ½ Σ g^μν_pqrs B^μ_pq B^ν_rs,    B = T with its identity part removed,
 *     κ^μ_pq = k^μ_pq + Σ_r g^{μ0}_pqrr,    c₀ = E₀ + tr κ⁰ − ½ Σ g^00_pprr,
 *
 * each B being a sum of Majorana products of one-norm 1 a term T_pq. Coefficients are dropped from the lightest up
 * while their sum stays ≤ `threshold`.
 *
 * This is a first version: products of Majorana operators that coincide (for instance the identity in B_pp², or the
 * exchange partners of equal spin) are not combined before the norm is taken. Combining them lowers λ.
 */
export async function encodeSparse(
  h: SpatialHamiltonian,
  variant: VariantName,
  threshold: number,
  ctx: JobContext,
): Promise<Encoding> {
  const kappa = sparseOneBody(h);
  const sections = sparseSections(h, kappa);
  const cutoff = threshold > 0 ? await findCutoff(sections, threshold, ctx) : NOISE;
  const tally = await count(sections, cutoff, ctx);
  const { n } = kappa;
  let trace = 0;
  for (let p = 0; p < n; p++) trace += kappa.planes[p * n + p]!;
  const constant = h.constant - 0.5 * diagonalSum(h) + trace;
  const { 'one-body.charge': charge, 'one-body.spin': spin, ...twoBody } = tally.lambda;
  const timesSame = sharedRatio(h);
  const shape: EncodingShape = {
    kind: 'sparse',
    orbitals: n,
    factors: 0,
    rows: tally.oneBody + tally.twoBody,
    pairRows: 0,
    oneBodyRows: tally.oneBody,
    oneBodyPairRows: 0,
    maxRowsPerFactor: 0,
    spinDependent: tally.spin > 0,
    terms: {
      orbitals: n,
      coefficients: tally.oneBody + tally.twoBody,
      spin: tally.spin > 0,
      ...tally.features,
      otherShare: Math.abs(timesSame) / (1 + Math.abs(timesSame)),
    },
  };
  return {
    variant,
    shape,
    lambda: sumLambda({ charge: charge ?? 0, spin: spin ?? 0 }, twoBody),
    constant,
    residual: tally.residual,
    rebuild: () => rebuild(h, kappa, sections, cutoff, constant),
    sparseProgram: () => sparseProgram(n, constant, sections, cutoff, timesSame),
  };
}

/** Spin–other-orbit over spin–same-orbit where one array holds both, else 0. */
function sharedRatio({ g }: SpatialHamiltonian): number {
  const other = g.spinOrbit?.other;
  return other === undefined || other instanceof Float64Array ? 0 : other.timesSame;
}

/** κ^μ = k^μ + Σ_r g^{μ0}_pqrr. */
function sparseOneBody(h: SpatialHamiltonian): TripletOperator {
  const n = h.orbitals;
  const planes = Float64Array.from(h.k.planes);
  addContraction(planes, n, h.g, 1);
  return { sector: 'even', n, planes };
}

/** Adds scale · Σ_r g^{μ0}_pqrr to the four planes. */
function addContraction(planes: Float64Array, n: number, g: TwoElectronTensor, scale: number): void {
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  if (g.charge) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        const pq = symmetricPair(p, q);
        for (let r = 0; r < n; r++) {
          planes[p * n + q]! += scale * g.charge[symmetricPair(pq, symmetricPair(r, r))]!;
        }
      }
    }
  }
  if (!g.spinOrbit) return;
  for (let k = 0; k < 3; k++) {
    const plane = (k + 1) * n * n;
    for (let p = 1, row = k * nanti * npair; p < n; p++) {
      for (let q = 0; q < p; q++, row += npair) {
        let sum = 0;
        for (let r = 0; r < n; r++) sum += g.spinOrbit.same[row + symmetricPair(r, r)]!;
        planes[plane + p * n + q]! += scale * sum;
        planes[plane + q * n + p]! -= scale * sum;
      }
    }
  }
}

/** Σ_pr g^00_pprr. */
function diagonalSum(h: SpatialHamiltonian): number {
  const { charge } = h.g;
  let sum = 0;
  if (!charge) return sum;
  for (let p = 0; p < h.orbitals; p++) {
    for (let r = 0; r < h.orbitals; r++) {
      sum += charge[symmetricPair(symmetricPair(p, p), symmetricPair(r, r))]!;
    }
  }
  return sum;
}

/** Visits all coefficients in blocks, with checkpoints between. */
async function visitAll(
  sections: readonly Section[],
  ctx: JobContext,
  visitor: (section: Section) => (weight: number, index: number) => void,
): Promise<void> {
  for (const section of sections) {
    const visit = visitor(section);
    const rows = numRows(section);
    const step = Math.max(1, Math.floor((BLOCK * rows) / section.values.length));
    for (let from = 0; from < rows; from += step) {
      visitRows(section, from, Math.min(rows, from + step), visit);
      await ctx.checkpoint();
    }
  }
}

/**
 * The weight W such that all coefficients of weight ≤ W together weigh at most `budget`, and those of the next weight
 * up would not fit. Equal weights go together, so that symmetry is kept. Two passes over the data and a histogram
 * instead of a sort: there may be 10⁷ coefficients.
 */
async function findCutoff(sections: readonly Section[], budget: number, ctx: JobContext): Promise<number> {
  // Exponent and the first 8 bits of the mantissa: the order of positive doubles is that of their bits.
  const float = new Float64Array(1);
  const bits = new Uint32Array(float.buffer);
  const sums = new Float64Array(1 << 19);
  const binOf = (weight: number): number => {
    float[0] = weight;
    return bits[1]! >>> 12;
  };
  await visitAll(sections, ctx, () => (weight) => {
    sums[binOf(weight)]! += weight;
  });
  let sum = 0;
  let crossing = 0;
  while (crossing < sums.length && sum + sums[crossing]! <= budget) sum += sums[crossing++]!;
  const inside: number[] = [];
  await visitAll(sections, ctx, () => (weight) => {
    if (binOf(weight) === crossing) inside.push(weight);
  });
  const sorted = Float64Array.from(inside).sort();
  float[0] = 0;
  bits[1] = crossing << 12;
  // The lower end of the crossing bin: everything strictly below is dropped.
  let cutoff = Math.max(NOISE, previousDouble(float[0]!));
  for (let i = 0; i < sorted.length; ) {
    let end = i;
    let level = 0;
    for (; end < sorted.length && sorted[end] === sorted[i]; end++) level += sorted[end]!;
    if (sum + level > budget) break;
    sum += level;
    cutoff = Math.max(NOISE, sorted[i]!);
    i = end;
  }
  return cutoff;
}

function previousDouble(x: number): number {
  return x > 0 ? x * (1 - 2 ** -53) : 0;
}

async function count(sections: readonly Section[], cutoff: number, ctx: JobContext) {
  const lambda: Record<string, number> = {};
  let oneBody = 0;
  let twoBody = 0;
  let spin = 0;
  let bound = 0;
  let square = 0;
  let dropped = 0;
  let total = 0;
  let shared = 0;
  let secondComponent = false;
  let exchanged = false;
  await visitAll(sections, ctx, (section) => {
    for (const [part] of section.shares) lambda[part] ??= 0;
    const { values, shares } = section;
    const [kind] = kindsOf(section);
    return (weight, index) => {
      if (weight <= cutoff) {
        if (weight > NOISE) dropped++;
        bound += weight;
        // Every unique value weighs half of what its copies in g sum to.
        if (!section.oneBody) square += 2 * Math.abs(values[index]!) * weight * copies(shares);
        return;
      }
      if (section.oneBody) oneBody++;
      else twoBody++;
      if (section.spin) spin++;
      total += weight;
      if (kind!.shared) shared += weight;
      if (kind!.nu !== null && kind!.nu !== 0) secondComponent = true;
      if (kind!.exchanged) exchanged = true;
      for (const [part, fraction] of shares) lambda[part]! += fraction * weight;
    };
  });
  const residual: Residual = { frobenius: Math.sqrt(square), oneNormBound: bound, dropped };
  const features = { secondComponent, exchanged, sharedPart: total > 0 ? shared / total : 0 };
  return { lambda, oneBody, twoBody, spin, features, residual };
}

/** Σ value² over value·weight for shares a : b of one value: (a² + b²)/(a + b), a = 1 for the same-orbit part. */
function copies(shares: Section['shares']): number {
  if (shares.length < 2) return 1;
  const [same, other] = [shares[0]![1], shares[1]![1]];
  return (same * same + other * other) / (same * (same + other));
}

/** The Hamiltonian of the kept coefficients. */
function rebuild(
  h: SpatialHamiltonian,
  kappa: TripletOperator,
  sections: readonly Section[],
  cutoff: number,
  constant: number,
) {
  const n = h.orbitals;
  const keep = (name: string): Float64Array | null => {
    const section = sections.find((s) => s.name === name);
    if (!section) return null;
    const out = new Float64Array(section.values.length);
    visitRows(section, 0, numRows(section), (weight, index) => {
      if (weight > cutoff) out[index] = section.values[index]!;
    });
    return out;
  };
  const planes = new Float64Array(4 * n * n);
  for (let mu = 0; mu < 4; mu++) {
    const plane = keep(`κ${mu}`)!;
    const sign = mu === 0 ? 1 : -1;
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        planes[mu * n * n + p * n + q] = plane[p * n + q]!;
        if (q < p) planes[mu * n * n + q * n + p] = sign * plane[p * n + q]!;
      }
    }
  }
  const same = keep('same');
  const other = keep('other');
  const sharedScale =
    h.g.spinOrbit && !(h.g.spinOrbit.other instanceof Float64Array) ? h.g.spinOrbit.other.timesSame : 0;
  const spinOrbit =
    same || other
      ? {
          same: same ?? new Float64Array(other!.length),
          other: other ?? { timesSame: sharedScale },
        }
      : null;
  const components = [0, 1, 2, 3, 4, 5].map((c) => keep(`spin-spin ${c}`));
  let spinSpin: Float64Array | null = null;
  if (components[0]) {
    const { length } = components[0];
    spinSpin = new Float64Array(6 * length);
    for (const [c, values] of components.entries()) spinSpin.set(values!, c * length);
  }
  const g: TwoElectronTensor = { charge: keep('charge'), spinOrbit, spinSpin };
  // Back from B to T: constant = c₀ − tr κ⁰ + ½ Σ g_pprr of the full tensor is E₀; identity parts of what is kept follow.
  let trace = 0;
  for (let p = 0; p < n; p++) trace += planes[p * n + p]!;
  const diagonal = diagonalSum({ ...h, g });
  addContraction(planes, n, g, -1);
  return fromProductForm({
    orbitals: n,
    electrons: h.electrons,
    terms: h.terms,
    constant: constant - trace + 0.5 * diagonal,
    k: { sector: kappa.sector, n, planes },
    g,
  });
}
