const MAX_SWEEPS = 60;

/**
 * One-sided Jacobi (Hestenes): rotates the `count` rows of `x` (each `width` long) until they are orthogonal to
 * 4·2⁻⁵² relative; the same rotations go to the rows of `y` (count×count). Rows shorter than 4·2⁻⁵² of the whole are
 * rounding noise: they cannot be made orthogonal to that measure and are held to the length of the noise instead.
 */
export function jacobiInPlace(x: Float64Array, y: Float64Array, count: number, width: number): void {
  let total = 0;
  for (let i = 0; i < count * width; i++) total += x[i] * x[i];
  const noise = (4 * Number.EPSILON) ** 2 * total;
  for (let sweep = 0; sweep < MAX_SWEEPS; sweep++) {
    let rotated = false;
    for (let p = 0; p < count; p++) {
      for (let q = p + 1; q < count; q++) {
        const rp = p * width;
        const rq = q * width;
        let pp = 0;
        let qq = 0;
        let pq = 0;
        for (let k = 0; k < width; k++) {
          pp += x[rp + k] * x[rp + k];
          qq += x[rq + k] * x[rq + k];
          pq += x[rp + k] * x[rq + k];
        }
        if (Math.abs(pq) <= 4 * Number.EPSILON * Math.sqrt(Math.max(pp, noise) * Math.max(qq, noise)))
          continue;
        rotated = true;
        const z = (qq - pp) / (2 * pq);
        const t = (z >= 0 ? 1 : -1) / (Math.abs(z) + Math.hypot(1, z));
        const c = 1 / Math.hypot(1, t);
        rotate(x, rp, rq, width, c, c * t);
        rotate(y, p * count, q * count, count, c, c * t);
      }
    }
    if (!rotated) return;
  }
  throw new Error(`Jacobi rotations of ${count} rows did not converge; are all elements finite?`);
}

function rotate(x: Float64Array, p: number, q: number, width: number, c: number, s: number): void {
  for (let k = 0; k < width; k++) {
    const a = x[p + k];
    const b = x[q + k];
    x[p + k] = c * a - s * b;
    x[q + k] = s * a + c * b;
  }
}
