import { expect, it } from 'vitest';
import { jacobiInPlace } from '../../../core/linalg/jacobi';

it('takes rows whose squares underflow for noise, and still makes the others orthogonal', () => {
  // Met in the antisymmetric planes of a symmetric molecule: exact zeros that reflections turned into 1e-311.
  const x = Float64Array.from([
    ...[0, -1.4e-312, 1.43e-311, 1.2e-312],
    ...[0, 0.0736, 0.0071, 0.00055],
    ...[0, -0.0145, 0.1484, 0.0128],
    ...[0, 0.00036, -0.0352, 0.4074],
  ]);
  const y = new Float64Array(16);
  for (let i = 0; i < 4; i++) y[5 * i] = 1;
  jacobiInPlace(x, y, 4, 4);
  for (let p = 0; p < 4; p++) {
    for (let q = 0; q < p; q++) {
      let dot = 0;
      for (let k = 0; k < 4; k++) dot += x[4 * p + k]! * x[4 * q + k]!;
      expect(Math.abs(dot)).toBeLessThan(1e-16);
    }
  }
});
