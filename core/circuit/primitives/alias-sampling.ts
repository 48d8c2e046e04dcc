import { gate, type Operation, repeat, sequence } from '../gates/operation';
import { carryStep } from './arithmetic';
import { type Blocks, controlledSwap, erasureToffoli } from './look-up';
import { readTable, readToffoli } from './reading';
import { hadamards } from './reflection';

/**
 * Alias table over 2^n buckets of 2^ℵ units each: bucket i keeps `keep[i]` units for itself and gives the rest to
 * `alternate[i]`. The encoded probability of i is units(i)/2^{n+ℵ}, which `probabilities` lists.
 */
export interface AliasTable {
  readonly indexBits: number;
  readonly keepBits: number;
  /** 0 … 2^ℵ − 1. A bucket that keeps all is its own alternate. */
  readonly keep: Uint32Array;
  readonly alternate: Uint32Array;
  readonly probabilities: Float64Array;
}

/**
 * Rounds weights to multiples of 2^{−(n+ℵ)} of their sum (largest remainders first, so the total is exact) and
 * pairs buckets with too little with buckets with too much (A. J. Walker 1977; M. D. Vose 1991; as a circuit
 * R. Babbush et al., Phys. Rev. X 8, 041015 (2018), Sec. III D).
 *
 * @param weights - at most 2^n non-negative numbers, one or more positive; missing ones are 0.
 */
export function aliasTable(weights: ArrayLike<number>, indexBits: number, keepBits: number): AliasTable {
  return { indexBits, keepBits, ...aliasBuckets(weights, 2 ** indexBits, keepBits) };
}

/** The same over any number of buckets; the probability of i is units(i)/(size·2^ℵ). */
export function aliasBuckets(
  weights: ArrayLike<number>,
  size: number,
  keepBits: number,
): Pick<AliasTable, 'keep' | 'alternate' | 'probabilities'> {
  if (weights.length > size) throw new RangeError(`${weights.length} weights exceed ${size} buckets`);
  const units = largestRemainders(weights, size, size * 2 ** keepBits);
  const bucket = 2 ** keepBits;
  const keep = new Uint32Array(size);
  const alternate = new Uint32Array(size);
  const rest = Float64Array.from(units);
  const small: number[] = [];
  const large: number[] = [];
  for (let i = 0; i < size; i++) (rest[i]! < bucket ? small : large).push(i);
  while (small.length > 0) {
    const i = small.pop()!;
    const donor = large[large.length - 1];
    if (donor === undefined) throw new Error('alias table: the units do not add up');
    keep[i] = rest[i]!;
    alternate[i] = donor;
    rest[donor]! -= bucket - rest[i]!;
    if (rest[donor]! < bucket) {
      large.pop();
      small.push(donor);
    }
  }
  for (const i of large) alternate[i] = i;
  const probabilities = Float64Array.from(units, (u) => u / (size * bucket));
  return { keep, alternate, probabilities };
}

function largestRemainders(weights: ArrayLike<number>, size: number, total: number): Float64Array {
  let sum = 0;
  for (let i = 0; i < weights.length; i++) {
    const w = weights[i]!;
    if (!(w >= 0)) throw new RangeError(`weight ${i} is ${w}; weights must not be negative`);
    sum += w;
  }
  if (!(sum > 0)) throw new RangeError('all weights are zero: there is nothing to prepare');
  const units = new Float64Array(size);
  const remainders: { i: number; fraction: number }[] = [];
  let left = total;
  for (let i = 0; i < weights.length; i++) {
    const exact = (weights[i]! / sum) * total;
    units[i] = Math.floor(exact);
    left -= units[i]!;
    if (weights[i]! > 0) remainders.push({ i, fraction: exact - units[i]! });
  }
  remainders.sort((a, b) => b.fraction - a.fraction || a.i - b.i);
  for (let k = 0; k < left; k++) units[remainders[k % remainders.length]!.i]! += 1;
  return units;
}

/** Wires of coherent alias sampling besides the index. */
export interface AliasWires {
  /** ℵ wires: the uniform number the keep value is compared with; part of the state a reflection looks at. */
  readonly uniform: readonly number[];
  /** Output wires of the look-up of n + ℵ bits. */
  readonly output: readonly number[];
  /** ℵ carries of the comparison, kept so that taking it back is free. */
  readonly carries: readonly number[];
  /** Wires that the look-up may borrow. */
  readonly idle: readonly number[];
}

export interface AliasSource {
  /** Address wires of the table, lowest bit first; the lowest n are the index that is sampled. */
  readonly address: readonly number[];
  readonly addresses: Uint32Array;
  readonly alternate: (address: number) => number;
  readonly keep: (address: number) => number;
}

/**
 * Toffoli of preparing by alias sampling and of taking it back.
 *
 * @param exchanged - bits that change places: the index, or the data of an entry
 * @param width - bits of the table
 */
export function aliasSamplingToffoli(
  tableBlocks: { readonly read: number; readonly erase: number },
  exchanged: number,
  keepBits: number,
  blocks: Blocks,
  width = exchanged + keepBits,
): { prepare: number; unprepare: number } {
  return {
    prepare: readToffoli(tableBlocks.read, width, blocks) + keepBits + exchanged,
    unprepare: erasureToffoli(tableBlocks.erase, blocks.erase) + exchanged,
  };
}

/**
 * Coherent alias sampling: the index, uniform over the buckets it was put into beforehand, is exchanged with its
 * alternate where the uniform number is not below the keep value.
 *
 * @param index - n wires, the lowest of `source.address`, already in uniform superposition.
 */
export function aliasSampling(
  index: readonly number[],
  wires: AliasWires,
  source: AliasSource,
  blocks: Blocks,
): Operation {
  const n = index.length;
  const keepBits = wires.uniform.length;
  const table = {
    addresses: source.addresses,
    width: n + keepBits,
    bit: (address: number, b: number) =>
      b < n ? ((source.alternate(address) >>> b) & 1) === 1 : ((source.keep(address) >>> (b - n)) & 1) === 1,
  };
  return sequence(
    hadamards(wires.uniform),
    readTable(source.address, wires.output, table, blocks, wires.idle),
    keptOrExchanged(wires, wires.output.slice(n, n + keepBits), index, wires.output.slice(0, n)),
  );
}

/** What alias sampling of data reads: of every address its own data, that of its alternate, and the keep value. */
export interface AliasDataSource extends AliasSource {
  /** Bits of the data of an entry. */
  readonly dataBits: number;
  readonly data: (address: number, bit: number) => boolean;
}

/**
 * Alias sampling that leaves the address as it is and brings the data of the entry drawn into the first `dataBits`
 * output wires: where the uniform number is not below the keep value, the data of the alternate.
 *
 * @param wires - the uniform number in the state that steers; 2·dataBits + ℵ output wires for one row.
 */
export function aliasData(wires: AliasWires, source: AliasDataSource, blocks: Blocks): Operation {
  const { dataBits: d, data, alternate, keep } = source;
  const keepBits = wires.uniform.length;
  const table = {
    addresses: source.addresses,
    width: 2 * d + keepBits,
    bit(address: number, b: number) {
      if (b < d) return data(address, b);
      return b < 2 * d ? data(alternate(address), b - d) : ((keep(address) >>> (b - 2 * d)) & 1) === 1;
    },
  };
  const { output } = wires;
  return sequence(
    readTable(source.address, output, table, blocks, wires.idle),
    keptOrExchanged(wires, output.slice(2 * d, 2 * d + keepBits), output.slice(0, d), output.slice(d, 2 * d)),
  );
}

/** Exchanges `own` with `other` where the uniform number is not below the keep value. */
function keptOrExchanged(
  wires: Pick<AliasWires, 'uniform' | 'carries'>,
  keep: readonly number[],
  own: readonly number[],
  other: readonly number[],
): Operation {
  const keepBits = keep.length;
  // uniform < keep is the last carry of keep + (2^ℵ − 1 − uniform).
  const compare = sequence(
    repeat(keepBits, (i) => gate('X', wires.uniform[i]!)),
    repeat(keepBits, (i) =>
      carryStep(wires.uniform[i]!, keep[i]!, i === 0 ? -1 : wires.carries[i - 1]!, wires.carries[i]!),
    ),
  );
  const stays = wires.carries[keepBits - 1]!;
  const exchange = sequence(
    gate('X', stays),
    repeat(own.length, (i) => {
      const swap: Operation = {
        run: (m) => controlledSwap(m, stays, own[i]!, other[i]!),
        runAdjoint: (m) => controlledSwap(m, stays, own[i]!, other[i]!),
      };
      return swap;
    }),
  );
  return sequence(compare, exchange);
}
