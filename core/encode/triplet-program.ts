import { planeInto, type SquareFactors, sectorLayout, type TripleFactors } from '../factor';
import { isSymmetricPlane, type Mu, planeOf } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import { antisymmetricPairs, symmetricEigen } from '../linalg';
import { type BlockItems, ROW_ZERO, type SquareItem, type TripleItem } from './items';
import { KAPPA_ROUNDING, type OneBody } from './one-body';
import type { RowFace, TripletItem, TripletProgram, TripletRow } from './program';

/** The rows of every item of a triplet encoding, with their vectors. Rows that carry no weight are left out. */
export function tripletProgram(
  constant: number,
  blocks: readonly BlockItems[],
  oneBody: OneBody,
): TripletProgram {
  const orbitals = oneBody.kappa.n;
  const contracted = blocks.find((entry) => entry.kind === 'hypercontracted');
  return {
    orbitals,
    constant,
    oneBody: oneBodyRows(oneBody),
    items: blocks.flatMap((entry) => {
      if (entry.kind === 'hypercontracted') return [];
      return entry.kind === 'squares'
        ? entry.items.map((item, t) => squareItem(entry.block, item, t))
        : entry.items.map((item, t) => tripleItem(entry.block, item, t));
    }),
    ...(contracted ? { products: contracted.products } : {}),
  };
}

/** Canonical pairs a(u vᵀ − v uᵀ) of i·plane: weight 2a, sign +. */
function pairRows(plane: Float64Array, n: number, mu: Mu, zero: number): TripletRow[] {
  const pairs = antisymmetricPairs(plane, n);
  return Array.from({ length: pairs.count }, (_, j): TripletRow => {
    const face: RowFace = { mu, weight: 2 * pairs.a[j]!, sign: 1 };
    return {
      kind: 'A',
      u: pairs.u.slice(j * n, (j + 1) * n),
      v: pairs.v.slice(j * n, (j + 1) * n),
      faces: [face],
    };
  }).filter((row) => row.faces[0]!.weight > 2 * zero);
}

/** Eigenpairs (ε − shift, u) of a symmetric plane: weight |ε − shift|. */
function eigenRows(plane: Float64Array, n: number, mu: Mu, shift: number, zero: number): TripletRow[] {
  const eigen = symmetricEigen(plane, n);
  return Array.from({ length: n }, (_, i): TripletRow => {
    const value = eigen.values[i]! - shift;
    const u = eigen.vectors.slice(i * n, (i + 1) * n);
    return { kind: 'S', u, v: u, faces: [{ mu, weight: Math.abs(value), sign: value < 0 ? -1 : 1 }] };
  }).filter((row) => row.faces[0]!.weight > zero);
}

function oneBodyRows({ kappa, chargeValues, spinNorms }: OneBody): TripletRow[] {
  const { n } = kappa;
  let largest = 0;
  for (const x of chargeValues) largest = Math.max(largest, Math.abs(x));
  for (const x of spinNorms) largest = Math.max(largest, x);
  const zero = KAPPA_ROUNDING * largest;
  return [
    // κ⁰ has its shift taken out already.
    ...eigenRows(planeOf(kappa, 0), n, 0, 0, zero),
    ...([1, 2, 3] as const).flatMap((k) => pairRows(planeOf(kappa, k), n, k, zero)),
  ];
}

function squareItem(block: SquareFactors, item: SquareItem, t: number): TripletItem {
  const { n, sector, planes, dim, weights } = block;
  const layout = sectorLayout(sector, planes, n);
  const from = t * layout.spectrumWidth;
  let largest = 0;
  for (const x of block.spectra.subarray(from, from + layout.spectrumWidth)) {
    largest = Math.max(largest, Math.abs(x));
  }
  const zero = ROW_ZERO * largest;
  const plane = new Float64Array(n * n);
  const rows = layout.slots.flatMap((slot) => {
    planeInto(plane, 0, block.vectors, t * dim + slot.offset, n, slot.symmetric);
    if (!isSymmetricPlane(sector, slot.mu)) return pairRows(plane, n, slot.mu, zero);
    return eigenRows(plane, n, slot.mu, slot.mu === 0 ? item.shift : 0, zero);
  });
  const w = weights[t]!;
  return {
    sign: w < 0 ? -1 : 1,
    paired: false,
    lambda: [0.25 * Math.abs(w) * item.norm * item.norm],
    rows,
  };
}

/** One half of a triple: which of X and Y carries σ^k, and the weights that make cX and Y/c equally heavy. */
interface Half {
  readonly scale: number;
  readonly muX: Mu;
  readonly muY: Mu;
  readonly shift: number;
  readonly normY: number;
}

/** ½s·scale{X, Y} = ¼s·scale[(cX + Y/c)² − (cX − Y/c)²], c² = Λ_Y/Λ_X, both halves over the same vectors. */
function tripleItem(block: TripleFactors, item: TripleItem, t: number): TripletItem {
  const { n } = block;
  const k = block.component[t]! as Mu;
  const halves = (
    [
      { scale: block.sameScale, muX: k, muY: 0, shift: item.shift, normY: item.normSame },
      { scale: block.otherScale, muX: 0, muY: k, shift: 0, normY: item.normOther },
    ] satisfies Half[]
  ).filter(({ scale }) => scale !== 0);
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, block.antisymmetric, t * numAntisymmetricPairs(n), n, false);
  const pairs = antisymmetricPairs(plane, n);
  planeInto(plane, 0, block.symmetric, t * numSymmetricPairs(n), n, true);
  const eigen = symmetricEigen(plane, n);
  const balances = halves.map(({ normY }) => Math.sqrt(normY / item.normX));
  const rows: TripletRow[] = [];
  for (let j = 0; j < pairs.count; j++) {
    if (pairs.a[j]! <= ROW_ZERO * pairs.a[0]!) continue;
    rows.push({
      kind: 'A',
      u: pairs.u.slice(j * n, (j + 1) * n),
      v: pairs.v.slice(j * n, (j + 1) * n),
      faces: halves.map(({ muX, scale }, h) => ({
        mu: muX,
        weight: 2 * pairs.a[j]! * balances[h]!,
        sign: scale < 0 ? -1 : 1,
      })),
    });
  }
  const largest = Math.max(Math.abs(eigen.values[0]!), Math.abs(eigen.values[n - 1]!));
  for (let i = 0; i < n; i++) {
    const values = halves.map(({ shift }) => eigen.values[i]! - shift);
    if (values.every((x) => Math.abs(x) <= ROW_ZERO * largest)) continue;
    const u = eigen.vectors.slice(i * n, (i + 1) * n);
    rows.push({
      kind: 'S',
      u,
      v: u,
      faces: halves.map(({ muY }, h) => ({
        mu: muY,
        weight: balances[h]! > 0 ? Math.abs(values[h]!) / balances[h]! : 0,
        sign: values[h]! < 0 ? -1 : 1,
      })),
    });
  }
  const s = block.strengths[t]! * item.normX;
  return {
    sign: 1,
    paired: true,
    lambda: halves.map(({ scale, normY }) => Math.abs(scale) * s * normY),
    rows,
  };
}
