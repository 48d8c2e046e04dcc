import type { SpinHamiltonian } from '../../../core/hamiltonian';
import { type ComplexMatrix, hermitianEigenvalues } from '../../../core/linalg';
import { fockMatrix, spinorFockMatrix } from '../../../core/verify';

/** H on the whole Fock space, from the definition. */
export function matrixOf(h: SpinHamiltonian): ComplexMatrix {
  return h.kind === 'spatial' ? fockMatrix(h, 'product') : spinorFockMatrix(h, 'product');
}

export function difference(a: ComplexMatrix, b: ComplexMatrix): ComplexMatrix {
  return { n: a.n, re: a.re.map((x, i) => x - b.re[i]!), im: a.im.map((x, i) => x - b.im[i]!) };
}

/** Largest |eigenvalue| of a Hermitian matrix. */
export function operatorNorm(a: ComplexMatrix): number {
  const values = hermitianEigenvalues(a);
  return Math.max(Math.abs(values[0]!), Math.abs(values.at(-1)!));
}

/** The block of the states with `electrons` particles. */
export function restrict(a: ComplexMatrix, electrons: number): ComplexMatrix {
  const states: number[] = [];
  for (let s = 0; s < a.n; s++) {
    let bits = 0;
    for (let x = s; x !== 0; x &= x - 1) bits++;
    if (bits === electrons) states.push(s);
  }
  const n = states.length;
  const out = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  states.forEach((row, i) => {
    states.forEach((column, j) => {
      out.re[i * n + j] = a.re[row * a.n + column]!;
      out.im[i * n + j] = a.im[row * a.n + column]!;
    });
  });
  return out;
}
