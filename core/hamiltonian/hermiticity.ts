import type { SpinHamiltonian, SpinorHamiltonian } from './hamiltonian';
import { hermiticityDefect } from './operators';

/**
 * Largest violation of what every Hamiltonian must fulfil, hartree: one-body parts Hermitian, and over spinors
 * g_PQRS = g*_QPSR and g_PQRS = g_RSPQ. Packed spatial arrays cannot violate the latter.
 */
export function hamiltonianDefect(hamiltonian: SpinHamiltonian): number {
  if (hamiltonian.kind === 'spinor') return spinorDefect(hamiltonian);
  return Math.max(hermiticityDefect(hamiltonian.h), hermiticityDefect(hamiltonian.k));
}

function spinorDefect({ spinors: m, h, k, g }: SpinorHamiltonian): number {
  let defect = 0;
  const compare = (x: number, y: number) => {
    const difference = Math.abs(x - y);
    if (!(difference <= defect)) defect = difference;
  };
  for (let pq = 0; pq < m * m; pq++) {
    const qp = (pq % m) * m + Math.floor(pq / m);
    for (const { re, im } of [h, k]) {
      compare(re[pq]!, re[qp]!);
      compare(im[pq]!, -im[qp]!);
    }
    for (let rs = 0; rs < m * m; rs++) {
      const sr = (rs % m) * m + Math.floor(rs / m);
      const at = pq * m * m + rs;
      const conjugate = qp * m * m + sr;
      const exchanged = rs * m * m + pq;
      compare(g.re[at]!, g.re[conjugate]!);
      compare(g.im[at]!, -g.im[conjugate]!);
      compare(g.re[at]!, g.re[exchanged]!);
      compare(g.im[at]!, g.im[exchanged]!);
    }
  }
  return defect;
}
