import { describe, expect, it } from 'vitest';
import {
  addScaled,
  chargeTrace,
  frobeniusNorm,
  hermiticityDefect,
  operatorFromVector,
  type Sector,
  scaled,
  sectorDimension,
  toSpinOrbitals,
} from '../../../core/hamiltonian';
import { randomArray, uniform } from './random-hamiltonian';

const make = (sector: Sector, seed: number, n = 3) =>
  operatorFromVector(n, sector, [0, 1, 2, 3], randomArray(sectorDimension(n, sector), uniform(seed)));

describe.each(['even', 'odd'] as const)('%s one-body operators', (sector) => {
  it('are Hermitian over the spin orbitals, with trace and norm of their own', () => {
    const operator = make(sector, 3);
    const { n, re, im } = toSpinOrbitals(operator);
    let trace = 0;
    let norm = 0;
    for (let i = 0; i < n; i++) {
      trace += re[i * n + i]!;
      for (let j = 0; j < n; j++) {
        expect(Math.abs(re[i * n + j]! - re[j * n + i]!)).toBe(0);
        expect(Math.abs(im[i * n + j]! + im[j * n + i]!)).toBe(0);
        norm += re[i * n + j]! ** 2 + im[i * n + j]! ** 2;
      }
    }
    expect(2 * chargeTrace(operator)).toBeCloseTo(trace, 14);
    // tr σ^μσ^ν = 2δ, so both norms differ by √2.
    expect(Math.SQRT2 * frobeniusNorm(operator)).toBeCloseTo(Math.sqrt(norm), 13);
    expect(hermiticityDefect(operator)).toBe(0);
  });

  it('behave under time reversal as the name says', () => {
    // Θ = iσ_y K: (ΘMΘ⁻¹)_{pσ,qτ} = ± conj(M) with spins flipped, sign − for σ ≠ τ. Even operators stay, odd turn.
    const { n, re, im } = toSpinOrbitals(make(sector, 8));
    const sign = sector === 'even' ? 1 : -1;
    for (let P = 0; P < n; P++) {
      for (let Q = 0; Q < n; Q++) {
        const flip = (P & 1) === (Q & 1) ? 1 : -1;
        const mirrored = (P ^ 1) * n + (Q ^ 1);
        expect(re[P * n + Q]).toBeCloseTo(sign * flip * re[mirrored]!, 14);
        expect(im[P * n + Q]).toBeCloseTo(-sign * flip * im[mirrored]!, 14);
      }
    }
  });

  it('add and scale like their matrices', () => {
    const [a, b] = [make(sector, 1), make(sector, 2)];
    const sum = toSpinOrbitals(addScaled(a, b, -2.5));
    const [x, y] = [toSpinOrbitals(a), toSpinOrbitals(b)];
    for (let i = 0; i < sum.re.length; i++) {
      expect(sum.re[i]).toBeCloseTo(x.re[i]! - 2.5 * y.re[i]!, 14);
      expect(sum.im[i]).toBeCloseTo(x.im[i]! - 2.5 * y.im[i]!, 14);
    }
    expect(scaled(a, 3).planes[5]).toBe(3 * a.planes[5]!);
  });

  it('show a broken symmetry', () => {
    const operator = make(sector, 4);
    operator.planes[1]! += 1e-5;
    expect(hermiticityDefect(operator)).toBeCloseTo(1e-5, 12);
  });
});

it('operators of different sectors do not add', () => {
  expect(() => addScaled(make('even', 1), make('odd', 1))).toThrow(/cannot add odd operator/);
});
