import { bitsFor, free, type PrimitiveCost, powerOfTwo } from './cost';

/** b_r: bits of the rotation that makes the amplitude amplification exact enough. Published choice. */
export const AMPLIFICATION_BITS = 7;

const SOURCE = 'Lee et al., PRX Quantum 2, 030305 (2021)';

/** Equal superposition of a fixed number of states `L = 2^e · odd`, by one round of amplitude amplification. */
export function uniformSuperposition(states: number, rotationBits = AMPLIFICATION_BITS): PrimitiveCost {
  const n = bitsFor(states);
  const e = powerOfTwo(states);
  const inputs = { L: states, e, b_r: rotationBits };
  if (n === e) return free('0: a power of two needs Hadamard gates only', inputs, SOURCE);
  return {
    toffoli: 3 * n - 3 * e + 2 * rotationBits - 9,
    t: 0,
    scratch: n - e,
    formula: '3⌈log₂L⌉ − 3e + 2b_r − 9',
    inputs,
    source: SOURCE,
  };
}

/** Equal superposition of a number of states that is itself held in a register of `n` bits. */
export function variableSuperposition(n: number, rotationBits = AMPLIFICATION_BITS): PrimitiveCost {
  const inputs = { n, b_r: rotationBits };
  if (n === 0) return free('0: one state', inputs, SOURCE);
  return {
    toffoli: 7 * n + 2 * rotationBits - 6,
    t: 0,
    scratch: n,
    formula: '7n + 2b_r − 6',
    inputs,
    source: `${SOURCE}, appendix on double factorisation`,
  };
}

/** Equal superposition of pairs μ ≤ ν ≤ M with the one-body items beside them. @param n - ⌈log₂(M+1)⌉. */
export function triangleSuperposition(n: number, rotationBits = AMPLIFICATION_BITS): PrimitiveCost {
  return {
    toffoli: 10 * n + 2 * rotationBits - 9,
    t: 0,
    scratch: n,
    formula: '10n + 2b_r − 9',
    inputs: { n, b_r: rotationBits },
    source: `${SOURCE}, hypercontraction`,
  };
}

/** Number of a pair, q(q + 1)/2 + p, in a register of its own, from two registers of `n` bits. */
export function pairNumber(n: number): PrimitiveCost {
  return {
    toffoli: n * n + n - 1,
    t: 0,
    scratch: 0,
    formula: 'n² + n − 1',
    inputs: { n },
    source: `${SOURCE}, contiguous register`,
  };
}

/**
 * b_r with the least expected cost of a walk step: a wider rotation costs 4 Toffoli a bit and step, a narrower one
 * fails more often. Derived: one round of amplification succeeds with sin²(3 arcsin(√(L/2^n) cos θ)), where the
 * exact θ has √(L/2^n) cos θ = ½ and b_r bits round θ/2π.
 */
export function cheapestAmplificationBits(states: number, stepToffoli: number): number {
  const amplitude = Math.sqrt(states / 2 ** bitsFor(states));
  const exact = Math.acos(1 / (2 * amplitude)) / (2 * Math.PI);
  let best = AMPLIFICATION_BITS;
  let least = Number.POSITIVE_INFINITY;
  for (let bits = 3; bits <= 20; bits++) {
    const angle = (2 * Math.PI * Math.round(exact * 2 ** bits)) / 2 ** bits;
    const success = Math.sin(3 * Math.asin(amplitude * Math.cos(angle))) ** 2;
    const expected = stepToffoli / success + 4 * bits;
    if (expected < least) {
      least = expected;
      best = bits;
    }
  }
  return best;
}
