import type { HypercontractedFactors } from '../factor';
import type { VectorProducts } from './program';

/** Products below this part of the heaviest are rounding and take no entry. */
const PRODUCT_ZERO = 1e-13;

/**
 * ½ Σ_mn ζ_mn M_m M_n as products: m < n with λ = |ζ_mn|, and ½ζ_mm M_m² = ¼ζ_mm(2M_m² − 1) + ¼ζ_mm with
 * λ = ¼|ζ_mm|, the constant counted apart.
 */
export function vectorProducts({ n, count, vectors, zeta }: HypercontractedFactors): VectorProducts {
  const heaviest = zeta.reduce((most, z) => Math.max(most, Math.abs(z)), 0);
  const [first, second, weights]: [number[], number[], number[]] = [[], [], []];
  for (let m = 0; m < count; m++) {
    for (let k = m; k < count; k++) {
      const z = zeta[m * count + k]! * (k === m ? 0.25 : 1);
      if (Math.abs(z) <= PRODUCT_ZERO * heaviest) continue;
      first.push(m);
      second.push(k);
      weights.push(z);
    }
  }
  return {
    vectors: Array.from({ length: count }, (_, m) => vectors.slice(m * n, (m + 1) * n)),
    first: Uint32Array.from(first),
    second: Uint32Array.from(second),
    lambda: Float64Array.from(weights, Math.abs),
    sign: Int8Array.from(weights, (z) => (z < 0 ? -1 : 1)),
  };
}

/**
 * What T = 1 + M leaves beside the products, ½ Σ ζ T_m T_n = ½ Σ ζ M_m M_n + plane·T⁰ + constant:
 * plane = Σ_m (Σ_k ζ_mk) u_m u_mᵀ, N×N row-major, and constant = −½ Σ ζ; hartree.
 */
export function identityPart({ n, count, vectors, zeta }: HypercontractedFactors) {
  const plane = new Float64Array(n * n);
  let constant = 0;
  for (let m = 0; m < count; m++) {
    let z = 0;
    for (let k = 0; k < count; k++) z += zeta[m * count + k]!;
    constant -= 0.5 * z;
    for (let p = 0; p < n; p++) {
      const x = z * vectors[m * n + p]!;
      for (let q = 0; q < n; q++) plane[p * n + q]! += x * vectors[m * n + q]!;
    }
  }
  return { plane, constant };
}
