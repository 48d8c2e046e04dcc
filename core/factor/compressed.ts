import { MUS, planeOf, type SpatialHamiltonian } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { concatenated } from '../linalg';
import { ZERO_WEIGHT } from './eigenvectors';
import { planeInto, sectorLayout, traceOfPairs } from './elements';
import type { FactorBlock, Factorisation, SquareFactors, TripleFactors } from './factors';
import { type MixingOptions, mixSquares, mixTriples } from './mixing/mix';
import type { MixingStore } from './mixing/state';
import type { TriplePoint } from './mixing/triples';
import { lcuNorms } from './one-norms';
import { selectFactors } from './select';
import { pairSpectra } from './spectra';
import { normalised, squareFactors } from './squares';

export interface CompressionOptions {
  /** Mixes the charge part alone and leaves the spin-dependent ones as they are. @defaultValue false */
  readonly chargeOnly?: boolean;
  /**
   * Number of factors of the block with the charge plane: where it has fewer, empty ones are added for the mixing to fill.
   * Where it has more, truncation has to drop them before. @defaultValue as many as there are
   */
  readonly factors?: number | null;
  /** Most steps at each smoothing width. */
  readonly steps?: number;
  readonly store?: MixingStore | null;
}

/** Part of all λ below which a step is not worth taking: effort goes where λ is. */
const WORTHWHILE = 2e-10;

/**
 * The factorisation with the factors of every part mixed for the least λ, and their optimised shifts: the tensor stays
 * what it was to rounding, and so do the residual and the folded mean field.
 */
export async function compressFactors(
  h: SpatialHamiltonian,
  given: Factorisation,
  options: CompressionOptions,
  ctx: JobContext,
): Promise<Factorisation> {
  const kappa = unshiftedKappa(h, given);
  const all = given.blocks.reduce((sum, block) => sum + lcuNorms(block).reduce((a, b) => a + b, 0), 0);
  const blocks: FactorBlock[] = [];
  for (const [index, block] of given.blocks.entries()) {
    const setting: PartSetting = {
      kappa,
      excess: h.electrons - h.orbitals,
      settled: WORTHWHILE * all,
      index,
    };
    const isMixed = !options.chargeOnly || (block.kind === 'squares' && hasCharge(block));
    if (block.kind === 'squares' && isMixed) blocks.push(await mixedSquares(block, setting, options, ctx));
    else if (block.kind === 'triples' && isMixed)
      blocks.push(await mixedTriples(block, setting, options, ctx));
    else blocks.push(block);
  }
  return { ...given, blocks };
}

interface PartSetting {
  /** 4·n·n: κ without any shift. */
  readonly kappa: Float64Array;
  readonly excess: number;
  /** Hartree. */
  readonly settled: number;
  /** Of the block. */
  readonly index: number;
}

const hasCharge = (block: SquareFactors) => block.sector === 'even' && block.planes[0] === 0;

function mixingOptions(
  { settled }: PartSetting,
  { steps, store }: CompressionOptions,
  factors: number | null,
): MixingOptions {
  return {
    settled,
    ...(steps === undefined ? {} : { steps }),
    ...(store ? { store } : {}),
    ...(factors === null ? {} : { factors }),
  };
}

async function mixedSquares(
  block: SquareFactors,
  setting: PartSetting,
  options: CompressionOptions,
  ctx: JobContext,
): Promise<SquareFactors> {
  const { n, count, dim, weights, sector, planes, part } = block;
  if (count === 0) return block;
  const columns = Float64Array.from(
    block.vectors,
    (x, i) => x * Math.sqrt(Math.abs(weights[Math.floor(i / dim)]!)),
  );
  const signs = Int8Array.from(weights, (w) => (w < 0 ? -1 : 1));
  const { point } = await mixSquares(
    {
      layout: sectorLayout(sector, planes, n),
      kappa: hasCharge(block) ? planes.map((mu) => planeAt(setting.kappa, mu, n)) : [],
      excess: setting.excess,
    },
    columns,
    signs,
    part,
    mixingOptions(setting, options, hasCharge(block) ? (options.factors ?? null) : null),
    ctx,
  );
  const unit = normalised(point.columns, point.count, dim);
  const signed = { vectors: unit.vectors, weights: unit.weights.map((w, t) => w * point.signs[t]!) };
  const made = await squareFactors(part, sector, planes, n, signed, ctx);
  // The weights leave the vectors, so they leave the shifts too.
  const shifts = point.shifts.map((c, t) => (unit.weights[t]! > 0 ? c / Math.sqrt(unit.weights[t]!) : 0));
  return withoutEmpty(hasCharge(block) ? { ...made, shifts } : made, unit.weights);
}

async function mixedTriples(
  block: TripleFactors,
  setting: PartSetting,
  options: CompressionOptions,
  ctx: JobContext,
): Promise<TripleFactors> {
  const { n, count, sameScale, otherScale, component } = block;
  if (count === 0) return block;
  const [nanti, npair] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const found: { readonly k: 1 | 2 | 3; readonly point: TriplePoint }[] = [];
  for (const k of [1, 2, 3] as const) {
    const own = [...component.keys()].filter((t) => component[t] === k);
    if (own.length === 0) continue;
    const part = selectFactors(block, own);
    const root = part.strengths.map(Math.sqrt);
    const start = {
      count: part.count,
      antisymmetric: part.antisymmetric.map((x, i) => x * root[Math.floor(i / nanti)]!),
      symmetric: part.symmetric.map((x, i) => x * root[Math.floor(i / npair)]!),
      shifts: new Float64Array(part.count),
    };
    const { point } = await mixTriples(
      { n, sameScale, otherScale, kappa: planeAt(setting.kappa, k, n), excess: setting.excess },
      start,
      `spin-orbit ${setting.index}${'xyz'[k - 1]}`,
      mixingOptions(setting, options, null),
      ctx,
    );
    found.push({ k, point });
  }
  return triplesOf(block, found, ctx);
}

/** Unit vectors again, their norms in the strengths. */
async function triplesOf(
  block: TripleFactors,
  found: readonly { readonly k: 1 | 2 | 3; readonly point: TriplePoint }[],
  ctx: JobContext,
): Promise<TripleFactors> {
  const { n } = block;
  const [nanti, npair] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const count = found.reduce((sum, { point }) => sum + point.count, 0);
  const a = normalised(concatenated(found.map(({ point }) => point.antisymmetric)), count, nanti);
  const s = normalised(concatenated(found.map(({ point }) => point.symmetric)), count, npair);
  const shifts = concatenated(found.map(({ point }) => point.shifts)).map((c, t) =>
    s.weights[t]! > 0 ? c / Math.sqrt(s.weights[t]!) : 0,
  );
  const strengths = a.weights.map((w, t) => Math.sqrt(w * s.weights[t]!));
  return withoutEmpty(
    {
      ...block,
      count,
      component: Uint8Array.from(found.flatMap(({ k, point }) => new Array<number>(point.count).fill(k))),
      strengths,
      antisymmetric: a.vectors,
      symmetric: s.vectors,
      antisymmetricNorms: await pairSpectra(n, false, a.vectors, count, ctx),
      symmetricValues: await pairSpectra(n, true, s.vectors, count, ctx),
      shifts,
    },
    strengths,
  );
}

/** Factors that the mixing left empty take no row and no place. */
function withoutEmpty<Block extends FactorBlock>(block: Block, sizes: Float64Array): Block {
  const kept = [...sizes.keys()].filter((t) => sizes[t]! > ZERO_WEIGHT);
  return kept.length === block.count ? block : selectFactors(block, kept);
}

const planeAt = (planes: Float64Array, mu: number, n: number) =>
  planes.subarray(mu * n * n, (mu + 1) * n * n);

/** κ^μ = k^μ + folded mean field + Σ w τ L^{t,μ} + Σ same·s τ a, 4·n·n: what no mixing changes. */
function unshiftedKappa(h: SpatialHamiltonian, given: Factorisation): Float64Array {
  const n = h.orbitals;
  const planes = Float64Array.from(MUS.flatMap((mu) => [...planeOf(h.k, mu)]));
  const folded = given.foldedMeanField;
  if (folded && 'planes' in folded) for (let i = 0; i < planes.length; i++) planes[i]! += folded.planes[i]!;
  const work = new Float64Array(n * n);
  const add = (mu: number, scale: number) => {
    for (let i = 0, at = mu * n * n; i < n * n; i++) planes[at + i]! += scale * work[i]!;
  };
  for (const block of given.blocks) {
    if (block.kind === 'triples') {
      for (let t = 0; t < block.count; t++) {
        const trace = traceOfPairs(block.symmetric, t * numSymmetricPairs(n), n);
        planeInto(work, 0, block.antisymmetric, t * numAntisymmetricPairs(n), n, false);
        add(block.component[t]!, block.sameScale * block.strengths[t]! * trace);
      }
    } else if (block.kind === 'squares' && hasCharge(block)) {
      const { slots } = sectorLayout(block.sector, block.planes, n);
      for (let t = 0; t < block.count; t++) {
        const trace = traceOfPairs(block.vectors, t * block.dim, n);
        for (const slot of slots) {
          planeInto(work, 0, block.vectors, t * block.dim + slot.offset, n, slot.symmetric);
          add(slot.mu, block.weights[t]! * trace);
        }
      }
    }
  }
  return planes;
}
