import {
  fromStoredForm,
  type SpatialHamiltonian,
  type TwoElectronTensor,
  zeroOperator,
} from '../../../core/hamiltonian';
import {
  numAntisymmetricPairs,
  numSymmetricPairs,
  pairsTriangleLength,
} from '../../../core/integrals/integral-set';
import { symmetricEigen } from '../../../core/linalg';

/** Small deterministic generator (mulberry32, public domain), uniform in −1…1. */
export function uniform(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 31 - 1;
  };
}

export function randomArray(length: number, random: () => number): Float64Array {
  return Float64Array.from({ length }, random);
}

/** Random n×n orthogonal matrix, row-major: eigenvectors of a random symmetric one. */
export function randomOrthogonal(n: number, random: () => number): Float64Array {
  const symmetric = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q <= p; q++) {
      symmetric[p * n + q] = random();
      symmetric[q * n + p] = symmetric[p * n + q]!;
    }
  }
  return symmetricEigen(symmetric, n).vectors;
}

export interface RandomKinds {
  readonly charge: boolean;
  readonly spinOrbit: 'none' | 'independent' | 'multiple';
  readonly spinSpin: boolean;
}

export const ALL_KINDS: RandomKinds = { charge: true, spinOrbit: 'independent', spinSpin: true };

export function randomTensor(
  n: number,
  random: () => number,
  kinds: RandomKinds = ALL_KINDS,
): TwoElectronTensor {
  const size = 3 * numAntisymmetricPairs(n) * numSymmetricPairs(n);
  const triangle = pairsTriangleLength(n);
  return {
    charge: kinds.charge ? randomArray(triangle, random) : null,
    spinOrbit:
      kinds.spinOrbit === 'none'
        ? null
        : {
            same: randomArray(size, random),
            other: kinds.spinOrbit === 'multiple' ? { timesSame: 2 } : randomArray(size, random),
          },
    spinSpin: kinds.spinSpin ? randomArray(6 * triangle, random) : null,
  };
}

/** Every array random within its symmetry; no physical content. */
export function randomHamiltonian(
  n: number,
  seed: number,
  kinds: RandomKinds = ALL_KINDS,
  electrons = n,
): SpatialHamiltonian {
  const random = uniform(seed);
  const h = zeroOperator('even', n);
  for (let mu = 0; mu < 4; mu++) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        const value = random();
        h.planes[(mu * n + p) * n + q] = mu > 0 && p === q ? 0 : value;
        if (p !== q) h.planes[(mu * n + q) * n + p] = mu === 0 ? value : -value;
      }
    }
  }
  return fromStoredForm({
    orbitals: n,
    electrons,
    terms: ['sf'],
    constant: random(),
    h,
    g: randomTensor(n, random, kinds),
  });
}

export function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) return Number.POSITIVE_INFINITY;
  let largest = 0;
  for (let i = 0; i < a.length; i++) {
    const difference = Math.abs(a[i]! - b[i]!);
    if (!(difference <= largest)) largest = difference;
  }
  return largest;
}
