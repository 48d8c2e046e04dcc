/** Number of bits set in a 32-bit integer. */
export function countBits(x: number): number {
  let v = x - ((x >>> 1) & 0x55555555);
  v = (v & 0x33333333) + ((v >>> 2) & 0x33333333);
  return (((v + (v >>> 4)) & 0x0f0f0f0f) * 0x01010101) >>> 24;
}

/** Binomial coefficient as a double; exact below 2⁵³. */
export function binomial(n: number, k: number): number {
  if (k < 0 || k > n) return 0;
  let value = 1;
  for (let i = 1; i <= Math.min(k, n - k); i++) value = (value * (n - i + 1)) / i;
  return Math.round(value);
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
  const low = new Float64Array(2 ** lowBits);
  for (let bits = 0; bits < low.length; bits++) low[bits] = colexRank(bits, 0, 0);
  // High half: its rank depends on how many modes of the low half are filled below it.
  const high = new Float64Array((lowBits + 1) * 2 ** highBits);
  for (let below = 0; below <= lowBits; below++) {
    for (let bits = 0; bits < 2 ** highBits; bits++) {
      high[below * 2 ** highBits + bits] = colexRank(bits, lowBits, below);
    }
  }
  const mask = 2 ** lowBits - 1;
  const width = 2 ** highBits;
  const rank =
    highBits === 0
      ? (s: number): number => low[s & mask]!
      : (s: number): number => low[s & mask]! + high[countBits(s & mask) * width + (s >>> lowBits)]!;
  return { modes, electrons, dim, states, rank };
}

function colexRank(bits: number, shift: number, below: number): number {
  let rank = 0;
  let count = below;
  for (let p = 0; bits >> p !== 0; p++) if ((bits >> p) & 1) rank += binomial(p + shift, ++count);
  return rank;
}

/** Next larger number with as many bits set, by arithmetic that stays exact above 2³¹. */
function nextState(state: number): number {
  const lowest = (state & -state) >>> 0;
  const ripple = state + lowest;
  const shifted = Math.floor((state ^ (ripple >>> 0)) >>> 0) / lowest;
  return (ripple | (Math.floor(shifted) >>> 2)) >>> 0;
}
