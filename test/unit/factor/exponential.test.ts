import { describe, expect, it } from 'vitest';
import { exponential } from '../../../core/factor/mixing/exponential';
import { multiply } from '../../../core/linalg';
import { uniform } from '../hamiltonian/random-hamiltonian';

describe('exponential of a matrix', () => {
  it.each([0.01, 0.4, 3, 40])('is the rotation or boost of a 2×2 generator, %d', (x) => {
    const [c, s] = [Math.cos(x), Math.sin(x)];
    const turn = exponential(Float64Array.of(0, -1, 1, 0), 2, x, [0, 0]);
    [c, -s, s, c].forEach((value, i) => {
      expect(Math.abs(turn[i]! - value)).toBeLessThan(1e-13 * (1 + x));
    });
    const boost = exponential(Float64Array.of(0, 1, 1, 0), 2, x, [0, 0]);
    [Math.cosh(x), Math.sinh(x), Math.sinh(x), Math.cosh(x)].forEach((value, i) => {
      expect(Math.abs(boost[i]! / value - 1)).toBeLessThan(1e-12);
    });
  });

  it('of −A is the inverse, and nothing passes between classes', () => {
    const n = 7;
    const random = uniform(2);
    const classes = [0, 1, 0, 1, 1, 2, 0];
    const a = Float64Array.from({ length: n * n }, (_, i) =>
      classes[Math.floor(i / n)] === classes[i % n] ? random() : 0,
    );
    const product = multiply(exponential(a, n, 0.9, classes), exponential(a, n, -0.9, classes), n, n, n);
    const whole = exponential(a, n, 0.9, new Int32Array(n));
    const blocks = exponential(a, n, 0.9, classes);
    for (let i = 0; i < n * n; i++) {
      expect(product[i]).toBeCloseTo(i % (n + 1) === 0 ? 1 : 0, 13);
      expect(blocks[i]).toBeCloseTo(whole[i]!, 13);
    }
  });
});
