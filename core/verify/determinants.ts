/** Number of bits set in a 32-bit integer. */
export function countBits(x: number): number {
  let v = x - ((x >>> 1) & 0x55555555);
  v = (v & 0x33333333) + ((v >>> 2) & 0x33333333);
  return (((v + (v >>> 4)) & 0x0f0f0f0f) * 0x01010101) >>> 24;
}

/** Pascal's triangle up to row 64; every entry used here is exact in a double. */
const PASCAL: readonly Float64Array[] = (() => {
  const rows = [Float64Array.of(1)];
  for (let n = 1; n <= 64; n++) {
    const row = new Float64Array(n + 1).fill(1);
    for (let k = 1; k < n; k++) row[k] = rows[n - 1]![k - 1]! + rows[n - 1]![k]!;
    rows.push(row);
  }
  return rows;
})();

/** Binomial coefficient of n ≤ 64; exact below 2⁵³. */
export function binomial(n: number, k: number): number {
  if (n > 64) throw new RangeError(`binomial of ${n} asked for; at most 64`);
  return k < 0 || k > n ? 0 : PASCAL[n]![k]!;
}

/** Determinants of η electrons in M ≤ 32 modes. Bit P of a state is the occupation of mode P. */
export interface SectorBasis {
  readonly modes: number;
  readonly electrons: number;
  readonly dim: number;
  /** Ascending as unsigned numbers. */
  readonly states: Uint32Array;
  /** Position of a state of this sector in `states`. */
  rank(state: number): number;
}

/**
 * All determinants of a sector in ascending order, which is the colexicographic order: the rank of a state with
 * modes P_0 < P_1 < … is Σ_i C(P_i, i+1). It is read off two tables, one for each half of the bit string.
 */
export function sectorBasis(modes: number, electrons: number): SectorBasis {
  if (modes > 32) throw new RangeError(`determinants over ${modes} modes asked for; at most 32`);
  const dim = binomial(modes, electrons);
  const states = new Uint32Array(dim);
  let state = electrons === 32 ? 0xffffffff : (1 << electrons) - 1;
  for (let i = 0; i < dim; i++) {
    states[i] = state;
    if (i + 1 < dim) state = nextState(state >>> 0);
  }
  const lowBits = Math.min(modes, 16);
  const highBits = modes - lowBits;
  const low = rankTable(lowBits, 0, 0);
  // High half: its rank depends on how many modes of the low half are filled below it.
  const high = new Float64Array((lowBits + 1) * 2 ** highBits);
  for (let below = 0; below <= Math.min(lowBits, electrons); below++) {
    high.set(rankTable(highBits, lowBits, below), below * 2 ** highBits);
  }
  const mask = 2 ** lowBits - 1;
  const width = 2 ** highBits;
  const rank =
    highBits === 0
      ? (s: number): number => low[s & mask]!
      : (s: number): number => low[s & mask]! + high[countBits(s & mask) * width + (s >>> lowBits)]!;
  return { modes, electrons, dim, states, rank };
}

/** Colexicographic rank of every bit string, its modes counted from `shift` with `below` others before them. */
function rankTable(bits: number, shift: number, below: number): Float64Array {
  const table = new Float64Array(2 ** bits);
  for (let top = 0; top < bits; top++) {
    const half = 1 << top;
    for (let rest = 0; rest < half; rest++) {
      table[half + rest] = table[rest]! + binomial(top + shift, below + countBits(rest) + 1);
    }
  }
  return table;
}

/** Next larger number with as many bits set, by arithmetic that stays exact above 2³¹. */
function nextState(state: number): number {
  const lowest = (state & -state) >>> 0;
  const ripple = state + lowest;
  const shifted = Math.floor((state ^ (ripple >>> 0)) >>> 0) / lowest;
  return (ripple | (Math.floor(shifted) >>> 2)) >>> 0;
}
