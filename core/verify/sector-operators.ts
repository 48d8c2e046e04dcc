import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';
import { oneBodyFockMatrix } from './fock';

/* Dense operators on the determinants of a sector: slow and obvious, for circuits to be held against. */

export function zeroMatrix(n: number): ComplexMatrix {
  return { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
}

/** Σ_PQ M_PQ a†_P a_Q on the sector, by way of the whole Fock space; M over at most 8 modes. */
export function oneBodyOnSector(matrix: ComplexMatrix, { dim, states }: SectorBasis): ComplexMatrix {
  const full = oneBodyFockMatrix(matrix);
  const out = zeroMatrix(dim);
  for (let i = 0; i < dim; i++) {
    for (let j = 0; j < dim; j++) {
      out.re[i * dim + j] = full.re[states[i]! * full.n + states[j]!]!;
      out.im[i * dim + j] = full.im[states[i]! * full.n + states[j]!]!;
    }
  }
  return out;
}

export function addScaled(target: ComplexMatrix, a: ComplexMatrix, scale: number): void {
  for (let i = 0; i < a.re.length; i++) {
    target.re[i]! += scale * a.re[i]!;
    target.im[i]! += scale * a.im[i]!;
  }
}

/** target += (re + i·im)·1. */
export function addIdentity(target: ComplexMatrix, re: number, im = 0): void {
  for (let i = 0; i < target.n; i++) {
    target.re[i * target.n + i]! += re;
    target.im[i * target.n + i]! += im;
  }
}

/** target += scale·ab. */
export function addProduct(target: ComplexMatrix, a: ComplexMatrix, b: ComplexMatrix, scale: number): void {
  const { n } = target;
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const [re, im] = [scale * a.re[i * n + k]!, scale * a.im[i * n + k]!];
      if (re === 0 && im === 0) continue;
      for (let j = 0; j < n; j++) {
        target.re[i * n + j]! += re * b.re[k * n + j]! - im * b.im[k * n + j]!;
        target.im[i * n + j]! += re * b.im[k * n + j]! + im * b.re[k * n + j]!;
      }
    }
  }
}

export function dagger({ n, re, im }: ComplexMatrix): ComplexMatrix {
  const out = zeroMatrix(n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      out.re[j * n + i] = re[i * n + j]!;
      out.im[j * n + i] = -im[i * n + j]!;
    }
  }
  return out;
}
