import type { SpatialHamiltonian, SpinorHamiltonian, TwoElectronTensor } from './hamiltonian';
import { MUS, type Mu, toSpinOrbitals } from './operators';
import { PAULI_ENTRIES } from './pauli';
import { tensorElement } from './tensor-element';

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
  for (const left of PAULI_ENTRIES[mu]!) {
    for (const right of PAULI_ENTRIES[nu]!) {
      const cr = left.re * right.re - left.im * right.im;
      const ci = left.re * right.im + left.im * right.re;
      const pq = (2 * p + left.row) * m + 2 * q + left.column;
      const i = (pq * m + 2 * r + right.row) * m + 2 * s + right.column;
      re[i]! += cr * x - ci * y;
      im[i]! += cr * y + ci * x;
    }
  }
}
