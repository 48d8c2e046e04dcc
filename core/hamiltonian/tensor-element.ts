import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integrals/integral-set';
import { otherScale } from './contraction';
import type { TwoElectronTensor } from './hamiltonian';
import type { Mu } from './operators';
import { spinSpinComponent } from './super-matrix';

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
