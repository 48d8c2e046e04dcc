import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integrals/integral-set';
import { otherScale } from './contraction';
import type { SpatialHamiltonian, SpinorHamiltonian, TwoElectronTensor } from './hamiltonian';
import { MUS, type Mu, toSpinOrbitals } from './operators';
import { spinSpinComponent } from './super-matrix';

/** σ^μ as four entries ↑↑ ↑↓ ↓↑ ↓↓ of (re, im). */
const PAULI: readonly (readonly (readonly [number, number])[])[] = [
  [
    [1, 0],
    [0, 0],
    [0, 0],
    [1, 0],
  ],
  [
    [0, 0],
    [1, 0],
    [1, 0],
    [0, 0],
  ],
  [
    [0, 0],
    [0, -1],
    [0, 1],
    [0, 0],
  ],
  [
    [1, 0],
    [0, 0],
    [0, 0],
    [-1, 0],
  ],
];

/** w_{pq,rs} at any order of p, q: 0 for p = q, the sign of p − q otherwise. */
function antisymmetricElement(
  w: Float64Array,
  n: number,
  k: number,
  p: number,
  q: number,
  rs: number,
): number {
  if (p === q) return 0;
  const pair = p > q ? (p * (p - 1)) / 2 + q : (q * (q - 1)) / 2 + p;
  const value = w[((k - 1) * numAntisymmetricPairs(n) + pair) * numSymmetricPairs(n) + rs]!;
  return p > q ? value : -value;
}

/**
 * One element g^μν_pqrs as [re, im], hartree, straight from the definitions in hamiltonian.ts. Meant for small
 * systems and for checks; kernels work on the packed arrays.
 */
export function tensorElement(
  g: TwoElectronTensor,
  n: number,
  mu: Mu,
  nu: Mu,
  p: number,
  q: number,
  r: number,
  s: number,
): readonly [number, number] {
  const pq = symmetricPair(p, q);
  const rs = symmetricPair(r, s);
  if (mu === 0 && nu === 0) return [g.charge?.[symmetricPair(pq, rs)] ?? 0, 0];
  if (mu !== 0 && nu !== 0) {
    if (!g.spinSpin) return [0, 0];
    const offset = (spinSpinComponent(mu, nu) * g.spinSpin.length) / 6;
    return [g.spinSpin[offset + symmetricPair(pq, rs)]!, 0];
  }
  if (!g.spinOrbit) return [0, 0];
  if (mu === 0) return tensorElement(g, n, nu, 0, r, s, p, q);
  const { same, other } = g.spinOrbit;
  const scale = otherScale(g.spinOrbit);
  const partner = antisymmetricElement(scale === null ? (other as Float64Array) : same, n, mu, r, s, pq);
  return [0, antisymmetricElement(same, n, mu, p, q, rs) + (scale ?? 1) * partner];
}

/**
 * The same operator over its M = 2N spin orbitals (orbital-major, 2p + σ), full complex storage of M⁴ numbers.
 * For small systems, exact diagonalisation and checks.
 *
 * @throws RangeError above 20 orbitals: the full tensor would take over 40 MB.
 */
export function spinorForm(hamiltonian: SpatialHamiltonian): SpinorHamiltonian {
  const { orbitals: n, electrons, constant, g } = hamiltonian;
  if (n > 20) throw new RangeError(`full spin-orbital tensor asked for ${n} orbitals; at most 20`);
  const m = 2 * n;
  const re = new Float64Array(m ** 4);
  const im = new Float64Array(m ** 4);
  for (const mu of MUS) {
    for (const nu of MUS) {
      if (!mayCouple(g, mu, nu)) continue;
      for (let p = 0; p < n; p++) {
        for (let q = 0; q < n; q++) {
          for (let r = 0; r < n; r++) {
            for (let s = 0; s < n; s++) {
              const [x, y] = tensorElement(g, n, mu, nu, p, q, r, s);
              if (x !== 0 || y !== 0) scatter(re, im, m, mu, nu, p, q, r, s, x, y);
            }
          }
        }
      }
    }
  }
  return {
    kind: 'spinor',
    spinors: m,
    electrons,
    constant,
    h: toSpinOrbitals(hamiltonian.h),
    k: toSpinOrbitals(hamiltonian.k),
    g: { re, im },
  };
}

function mayCouple(g: TwoElectronTensor, mu: Mu, nu: Mu): boolean {
  if (mu === 0 && nu === 0) return g.charge !== null;
  return mu !== 0 && nu !== 0 ? g.spinSpin !== null : g.spinOrbit !== null;
}

/** Adds (x + iy) σ^μ ⊗ σ^ν to the spin block of (pq|rs). */
function scatter(
  re: Float64Array,
  im: Float64Array,
  m: number,
  mu: Mu,
  nu: Mu,
  p: number,
  q: number,
  r: number,
  s: number,
  x: number,
  y: number,
): void {
  for (let a = 0; a < 4; a++) {
    const [ar, ai] = PAULI[mu]![a]!;
    if (ar === 0 && ai === 0) continue;
    for (let b = 0; b < 4; b++) {
      const [br, bi] = PAULI[nu]![b]!;
      if (br === 0 && bi === 0) continue;
      const cr = ar * br - ai * bi;
      const ci = ar * bi + ai * br;
      const left = (2 * p + (a >> 1)) * m + 2 * q + (a & 1);
      const i = (left * m + 2 * r + (b >> 1)) * m + 2 * s + (b & 1);
      re[i]! += cr * x - ci * y;
      im[i]! += cr * y + ci * x;
    }
  }
}
