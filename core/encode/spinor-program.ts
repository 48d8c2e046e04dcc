import {
  hermitianInto,
  planeInto,
  type SpinorFactors,
  type SquareFactors,
  sectorLayout,
  type TripleFactors,
} from '../factor';
import { planeOf, type TripletOperator, toSpinOrbitals } from '../hamiltonian';
import { type ComplexMatrix, hermitianEigen, symmetricEigen } from '../linalg';
import type { OneBody } from './one-body';
import { partnerRows, type SpinorVectors, singleRows } from './spinor-eigen';
import { faceLambda, type SpinorItems, type SpinorSquareItem, type SpinorTripleItem } from './spinor-items';
import { faceValues, sharedRows, tripleInto } from './spinor-norms';

/**
 * What the vectors of an item are:
 * - `real`: u real over the orbitals, w = u ⊗ ↑;
 * - `axial`: l complex over the orbitals, w = l ⊗ χ, χ the spin along the item's axis;
 * - `full`: w complex over all 2N modes.
 */
export const SPINOR_KINDS = ['real', 'axial', 'full'] as const;
export type SpinorKind = (typeof SPINOR_KINDS)[number];

/** A row stands for weight · sign · op, with op as {@link SpinorProgram} says. */
export interface SpinorRow {
  /** N numbers each (`real`, `axial`) or 2N in the order 2p + σ (`full`); a unit vector. `im` is 0 where real. */
  readonly re: Float64Array;
  readonly im: Float64Array;
  /** On each face of the item; ≥ 0, in the units of the item's factor. */
  readonly faces: readonly { readonly weight: number; readonly sign: 1 | -1 }[];
}

/**
 * A square, sign·λ·(M/Λ)² in the linear combination up to its identity part, M = Σ rows, Λ the sum of their weights.
 * A paired item stands for two such squares with λ/2 each and opposite sign; in the second all spins are reversed
 * along the axis. Two faces share the row vectors with other weights.
 */
export interface SpinorItem {
  readonly kind: SpinorKind;
  /** 1…3 = x, y, z; 3 unless axial. */
  readonly axis: 1 | 2 | 3;
  readonly paired: boolean;
  readonly faces: readonly {
    readonly sign: 1 | -1;
    /** The time-reversed partner of a row counts with the opposite sign. */
    readonly odd: boolean;
    /** Hartree; of both squares together where paired. */
    readonly lambda: number;
  }[];
  readonly rows: readonly SpinorRow[];
}

/**
 * H − constant = one-body rows + Σ items. With n_w the occupation of Σ_P w_P a†_P and w̄ = iσ_y w* its time-reversed
 * partner, the op of a row is ½[(2n_w − 1) ± (2n_w̄ − 1)] where `partners`, + unless the face is odd; else 2n_w − 1.
 */
export interface SpinorProgram {
  readonly orbitals: number;
  readonly constant: number;
  readonly partners: boolean;
  /**
   * Mode P stands for e^{iφ_P} times the spinor P of the integrals: files give Kramers pairs with any phases. null: all
   * are 0.
   */
  readonly phases: Float64Array | null;
  /** As in {@link SpinorSizes}. */
  readonly spared: number;
  /** Not squared: each stands for the sum of its rows, in hartree, λ being that of the weights. */
  readonly oneBody: readonly SpinorItem[];
  readonly items: readonly SpinorItem[];
}

/** Sizes of the items of a spinor encoding, the one-body items last. */
export interface SpinorSizes {
  readonly orbitals: number;
  readonly partners: boolean;
  readonly oneBodyItems: number;
  /** Bits that the angles of axial rows may lack, since these rows weigh so little; see {@link sparedBits}. */
  readonly spared: number;
  readonly rows: Uint32Array;
  /** Place in {@link SPINOR_KINDS}. */
  readonly kinds: Uint8Array;
  /** 1 where the item has two faces. */
  readonly twoFaced: Uint8Array;
  /** Whether any item is a pair of squares. */
  readonly hasPaired: boolean;
}

const REAL = 0;
const AXIAL = 1;
const FULL = 2;

/** Parts of λ₂ and λ₁ in axial rows. */
export interface AxialParts {
  readonly squares: number;
  readonly oneBody: number;
}

/** The error of axial rows stays below this part of that of the others. */
const SPARED = 1 / 4;

/**
 * Bits that angles of axial rows may lack: rounding moves a square by 8δλ and a one-body row by 2δλ, and a bit less
 * doubles δ.
 */
export function sparedBits(lambda: { oneBody: number; twoBody: number }, axial: AxialParts): number {
  const weigh = (squares: number, oneBody: number) =>
    8 * squares * lambda.twoBody + 2 * oneBody * lambda.oneBody;
  const own = weigh(axial.squares, axial.oneBody);
  const others = weigh(1 - axial.squares, 1 - axial.oneBody);
  return own > 0 && others > 0 ? Math.max(0, Math.floor(Math.log2((SPARED * others) / own))) : 0;
}

/** How κ is listed: whole, or plane by plane with fewer angles and a larger λ. */
export interface OneBodyRows {
  /** Rows of κ over all 2N modes; null where its planes stand for themselves. */
  readonly whole: number | null;
  /** Rows of its charge and x, y, z planes. */
  readonly planes: readonly [number, number, number, number];
}

interface OneBodyPlane {
  readonly kind: SpinorKind;
  readonly axis: 0 | 1 | 2 | 3;
  readonly rows: number;
}

const oneBodyPlanes = ({ whole, planes }: OneBodyRows): OneBodyPlane[] =>
  whole !== null
    ? [{ kind: 'full', axis: 0, rows: whole }]
    : ([0, 1, 2, 3] as const)
        .map((axis): OneBodyPlane => ({ kind: axis === 0 ? 'real' : 'axial', axis, rows: planes[axis] }))
        .filter(({ rows }) => rows > 0);

/**
 * Sizes of the items in the order of the program: blocks as they come, the one-body items last.
 *
 * @param oneBody - rows of κ as a whole, or of its charge and spin planes one by one
 */
export function spinorSizes(
  orbitals: number,
  blocks: readonly SpinorItems[],
  oneBody: OneBodyRows,
  spared: number,
): SpinorSizes {
  const all = [
    ...blocks.flatMap((entry) =>
      entry.kind === 'triples'
        ? entry.items.map(({ rows, faces }) => ({ rows, kind: AXIAL, faced: faces.length > 1 }))
        : entry.items.map(({ rows, real }) => ({ rows, kind: real ? REAL : FULL, faced: false })),
    ),
    ...oneBodyPlanes(oneBody).map(({ rows, kind }) => ({
      rows,
      kind: SPINOR_KINDS.indexOf(kind),
      faced: false,
    })),
  ];
  return {
    orbitals,
    partners: true,
    oneBodyItems: oneBodyPlanes(oneBody).length,
    spared,
    rows: Uint32Array.from(all, (item) => item.rows),
    kinds: Uint8Array.from(all, (item) => item.kind),
    twoFaced: Uint8Array.from(all, (item) => (item.faced ? 1 : 0)),
    hasPaired: blocks.some((entry) => entry.kind === 'triples' && entry.items.length > 0),
  };
}

/** The rows of every item of a spinor encoding of spatial orbitals, with their vectors. */
export function spinorProgram(
  constant: number,
  blocks: readonly SpinorItems[],
  oneBody: OneBody,
  one: OneBodyRows,
  spared: number,
): SpinorProgram {
  return {
    orbitals: oneBody.kappa.n,
    constant,
    partners: true,
    phases: null,
    spared,
    oneBody: oneBodyPlanes(one).map((plane) => oneBodyItem(oneBody.kappa, plane)),
    items: blocks.flatMap((entry) =>
      entry.kind === 'triples'
        ? entry.items.map((item) => tripleItem(entry.block, item))
        : entry.items.map((item, t) => squareItem(entry.block, t, item)),
    ),
  };
}

function rowsOf({ values, re, im, n }: SpinorVectors): SpinorRow[] {
  return Array.from(values, (value, i) => ({
    re: re.slice(i * n, (i + 1) * n),
    im: im.slice(i * n, (i + 1) * n),
    faces: [{ weight: Math.abs(value), sign: value < 0 ? -1 : 1 }],
  }));
}

/** The `count` heaviest eigenvectors of a real symmetric plane. */
function realVectors(plane: Float64Array, n: number, count: number): SpinorVectors {
  const { values, vectors } = symmetricEigen(plane, n);
  return heaviest(n, values, vectors, new Float64Array(n * n), count);
}

function heaviest(
  n: number,
  values: Float64Array,
  re: Float64Array,
  im: Float64Array,
  count: number,
): SpinorVectors {
  const order = Array.from(values.keys())
    .sort((i, j) => Math.abs(values[j]!) - Math.abs(values[i]!))
    .slice(0, count);
  const gather = (from: Float64Array) =>
    Float64Array.from(order.flatMap((i) => Array.from(from.subarray(i * n, (i + 1) * n))));
  return { n, values: Float64Array.from(order, (i) => values[i]!), re: gather(re), im: gather(im) };
}

function oneBodyItem(kappa: TripletOperator, { kind, axis, rows }: OneBodyPlane): SpinorItem {
  if (kind === 'full') return oneBodyOf(kind, 3, rowsOf(partnerRows(toSpinOrbitals(kappa), false, rows)));
  const { n } = kappa;
  if (axis === 0) return oneBodyOf(kind, 3, rowsOf(realVectors(planeOf(kappa, 0), n, rows)));
  // κ^k = i·plane: eigenvectors along the axis, their partners against it.
  const { values, re, im } = hermitianEigen({ n, re: new Float64Array(n * n), im: planeOf(kappa, axis) });
  return oneBodyOf(kind, axis, rowsOf(heaviest(n, values, re, im, rows)));
}

function oneBodyOf(kind: SpinorKind, axis: 1 | 2 | 3, rows: readonly SpinorRow[]): SpinorItem {
  const lambda = rows.reduce((sum, row) => sum + row.faces[0]!.weight, 0);
  return { kind, axis, paired: false, faces: [{ sign: 1, odd: false, lambda }], rows };
}

function squareItem(block: SquareFactors, t: number, item: SpinorSquareItem): SpinorItem {
  const { n, sector, planes, dim, weights } = block;
  const operator: TripletOperator = { sector, n, planes: new Float64Array(4 * n * n) };
  for (const slot of sectorLayout(sector, planes, n).slots) {
    planeInto(operator.planes, slot.mu * n * n, block.vectors, t * dim + slot.offset, n, slot.symmetric);
  }
  for (let p = 0; p < n; p++) operator.planes[p * n + p]! -= item.shift;
  const odd = sector === 'odd';
  const vectors = item.real
    ? realVectors(planeOf(operator, 0), n, item.rows)
    : partnerRows(toSpinOrbitals(operator), odd, item.rows);
  const w = weights[t]!;
  return {
    kind: item.real ? 'real' : 'full',
    axis: 3,
    paired: false,
    faces: [{ sign: w < 0 ? -1 : 1, odd, lambda: 0.25 * Math.abs(w) * item.norm ** 2 }],
    rows: rowsOf(vectors),
  };
}

/**
 * ½s·scale{X, Y} = ¼s·scale[(cX + Y/c)² − (cX − Y/c)²]. Along the axis the first square is h = S/c + icA beside h* (same
 * orbit) or beside −h* (other orbit), against the axis the other way round; the second is, up to a sign, the first
 * with the spin reversed.
 */
function tripleItem(block: TripleFactors, item: SpinorTripleItem): SpinorItem {
  const { n } = block;
  const { triple, balance, faces } = item;
  const h = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  tripleInto(h.re, h.im, 0, n, block.antisymmetric, block.symmetric, triple, balance);
  const eigen = hermitianEigen(h);
  const values = faceValues(eigen.values, balance, (f) => faces[f]!.shift, faces.length);
  const rows = sharedRows(values).map(
    (i): SpinorRow => ({
      re: eigen.re.slice(i * n, (i + 1) * n),
      im: eigen.im.slice(i * n, (i + 1) * n),
      faces: values.map((own) => ({ weight: Math.abs(own[i]!), sign: own[i]! < 0 ? -1 : 1 })),
    }),
  );
  return {
    kind: 'axial',
    axis: block.component[triple]! as 1 | 2 | 3,
    paired: true,
    faces: faces.map((face) => ({
      sign: face.scale < 0 ? -1 : 1,
      odd: face.odd,
      lambda: faceLambda(block.strengths[triple]!, face),
    })),
    rows,
  };
}

/** A factor of a spinor file in the gauge of `phases`: mode P stands for e^{iφ_P} ψ_P. */
export interface SpinorFileFactor {
  readonly block: SpinorFactors;
  readonly t: number;
  readonly shift: number;
  readonly norm: number;
  readonly rows: number;
}

/** The rows of every item of a spinor file. */
export function spinorFileProgram(
  constant: number,
  factors: readonly SpinorFileFactor[],
  kappa: ComplexMatrix,
  oneBodyRows: number,
  phases: Float64Array | null,
): SpinorProgram {
  const m = kappa.n;
  const vectors = (matrix: ComplexMatrix, odd: boolean, count: number) =>
    phases ? partnerRows(turnPhases(matrix, phases), odd, count) : singleRows(matrix, count);
  const one = rowsOf(vectors(kappa, false, oneBodyRows));
  return {
    orbitals: m / 2,
    constant,
    partners: phases !== null,
    phases: phases?.some((x) => x !== 0) ? phases : null,
    spared: 0,
    oneBody: [oneBodyOf('full', 3, one)],
    items: factors.map(({ block, t, shift, norm, rows }) => {
      const matrix = { n: m, re: new Float64Array(m * m), im: new Float64Array(m * m) };
      hermitianInto(matrix.re, matrix.im, 0, block.vectors, t * m * m, m);
      for (let p = 0; p < m; p++) matrix.re[p * m + p]! -= shift;
      const odd = block.part === 'odd';
      const w = block.weights[t]!;
      return {
        kind: 'full',
        axis: 3,
        paired: false,
        faces: [{ sign: w < 0 ? -1 : 1, odd, lambda: 0.25 * Math.abs(w) * norm ** 2 }],
        rows: rowsOf(vectors(matrix, odd, rows)),
      };
    }),
  };
}

/** L'_PQ = L_PQ e^{i(φ_Q − φ_P)}: the operator over modes e^{iφ_P} ψ_P. */
export function turnPhases({ n, ...given }: ComplexMatrix, phases: Float64Array): ComplexMatrix {
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      const angle = phases[q]! - phases[p]!;
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      const i = p * n + q;
      re[i] = c * given.re[i]! - s * given.im[i]!;
      im[i] = c * given.im[i]! + s * given.re[i]!;
    }
  }
  return { n, re, im };
}
