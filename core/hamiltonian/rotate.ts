import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import { multiply, transpose } from '../linalg';
import { fromStoredForm } from './forms';
import type { SpatialHamiltonian, TwoElectronTensor } from './hamiltonian';
import type { TripletOperator } from './operators';
import { spinSpinComponent } from './super-matrix';

type Component = 1 | 2 | 3;
const COMPONENTS: readonly Component[] = [1, 2, 3];

/**
 * The same Hamiltonian with its spin axes turned by a rotation R ∈ SO(3): T^k → Σ_l R_kl T^l. It changes the λ
 * of triplet forms, and no eigenvalue.
 *
 * @param rotation - 3×3 orthogonal with determinant +1, row-major. Not checked.
 */
export function rotateSpin(hamiltonian: SpatialHamiltonian, rotation: ArrayLike<number>): SpatialHamiltonian {
  const { orbitals: n, g } = hamiltonian;
  const mix = (planes: Float64Array, offset: number, size: number): Float64Array => {
    const mixed = planes.slice();
    for (let l = 0; l < 3; l++) {
      for (let i = 0; i < size; i++) {
        let sum = 0;
        for (let k = 0; k < 3; k++) sum += rotation[3 * k + l]! * planes[offset + k * size + i]!;
        mixed[offset + l * size + i] = sum;
      }
    }
    return mixed;
  };
  const size = numAntisymmetricPairs(n) * numSymmetricPairs(n);
  const { spinOrbit, spinSpin } = g;
  const rotated: TwoElectronTensor = {
    charge: g.charge,
    spinOrbit: spinOrbit && {
      same: mix(spinOrbit.same, 0, size),
      other: spinOrbit.other instanceof Float64Array ? mix(spinOrbit.other, 0, size) : spinOrbit.other,
    },
    spinSpin: spinSpin && mixPairs(spinSpin, rotation),
  };
  const h = { ...hamiltonian.h, planes: mix(hamiltonian.h.planes, n * n, n * n) };
  return fromStoredForm({ ...hamiltonian, h, g: rotated });
}

/** g^kl → Σ R_mk R_nl g^mn over six triangles. */
function mixPairs(values: Float64Array, rotation: ArrayLike<number>): Float64Array {
  const size = values.length / 6;
  const mixed = new Float64Array(values.length);
  for (const k of COMPONENTS) {
    for (const l of COMPONENTS.filter((x) => x >= k)) {
      const to = spinSpinComponent(k, l) * size;
      for (const m of COMPONENTS) {
        for (const n of COMPONENTS) {
          const weight = rotation[3 * (m - 1) + k - 1]! * rotation[3 * (n - 1) + l - 1]!;
          const from = spinSpinComponent(m, n) * size;
          for (let i = 0; i < size; i++) mixed[to + i]! += weight * values[from + i]!;
        }
      }
    }
  }
  return mixed;
}

/**
 * The same Hamiltonian over orbitals φ'_p = Σ_q U_pq φ_q. No eigenvalue changes, and λ only as far as the
 * factorisation depends on the basis.
 *
 * @param u - N×N real orthogonal, row-major. Not checked.
 * @remarks Cost O(N⁶) in the pair space; meant for tens of orbitals.
 */
export function rotateOrbitals(hamiltonian: SpatialHamiltonian, u: Float64Array): SpatialHamiltonian {
  const { orbitals: n, g } = hamiltonian;
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  const [symmetric, antisymmetric] = pairRotations(n, u);
  const sandwich = (left: Float64Array, a: Float64Array, rows: number, right: Float64Array, cols: number) =>
    multiply(multiply(left, a, rows, rows, cols), right, rows, cols, cols, { transposeB: true });
  const triangle = (values: Float64Array, offset: number): Float64Array => {
    const full = new Float64Array(npair * npair);
    for (let a = 0, i = offset; a < npair; a++) {
      for (let b = 0; b <= a; b++, i++) {
        full[a * npair + b] = values[i]!;
        full[b * npair + a] = values[i]!;
      }
    }
    const rotated = sandwich(symmetric, full, npair, symmetric, npair);
    const packed = new Float64Array((npair * (npair + 1)) / 2);
    for (let a = 0, i = 0; a < npair; a++) {
      // Both triangles are averaged: rounding must not make the result depend on which one is kept.
      for (let b = 0; b <= a; b++, i++) packed[i] = (rotated[a * npair + b]! + rotated[b * npair + a]!) / 2;
    }
    return packed;
  };
  const rectangles = (w: Float64Array): Float64Array => {
    const rotated = new Float64Array(w.length);
    const size = nanti * npair;
    for (let k = 0; k < 3 && size > 0; k++) {
      const block = w.subarray(k * size, (k + 1) * size);
      rotated.set(sandwich(antisymmetric, block, nanti, symmetric, npair), k * size);
    }
    return rotated;
  };
  const { charge, spinOrbit, spinSpin } = g;
  const rotated: TwoElectronTensor = {
    charge: charge && triangle(charge, 0),
    spinOrbit: spinOrbit && {
      same: rectangles(spinOrbit.same),
      other: spinOrbit.other instanceof Float64Array ? rectangles(spinOrbit.other) : spinOrbit.other,
    },
    spinSpin: spinSpin && joined(spinSpin, (kl) => triangle(spinSpin, (kl * spinSpin.length) / 6)),
  };
  return fromStoredForm({ ...hamiltonian, h: rotateOperator(hamiltonian.h, u), g: rotated });
}

function joined(like: Float64Array, part: (kl: number) => Float64Array): Float64Array {
  const values = new Float64Array(like.length);
  for (let kl = 0; kl < 6; kl++) values.set(part(kl), (kl * like.length) / 6);
  return values;
}

function rotateOperator(operator: TripletOperator, u: Float64Array): TripletOperator {
  const { n } = operator;
  const planes = new Float64Array(operator.planes.length);
  const ut = transpose(u, n, n);
  for (let mu = 0; mu < 4; mu++) {
    const plane = operator.planes.subarray(mu * n * n, (mu + 1) * n * n);
    planes.set(multiply(multiply(u, plane, n, n, n), ut, n, n, n), mu * n * n);
  }
  return { ...operator, planes };
}

/**
 * How bare integrals over pairs turn: (p'q'| = Σ_{r≥s} P_{[pq],[rs]} (rs| with P = U_pr U_qs + U_ps U_qr, once for
 * r = s, and for antisymmetric pairs U_pr U_qs − U_ps U_qr.
 */
function pairRotations(n: number, u: Float64Array): [Float64Array, Float64Array] {
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  const symmetric = new Float64Array(npair * npair);
  const antisymmetric = new Float64Array(nanti * nanti);
  for (let p = 0, a = 0, c = 0; p < n; p++) {
    for (let q = 0; q <= p; q++, a++) {
      for (let r = 0, b = 0, d = 0; r < n; r++) {
        for (let s = 0; s <= r; s++, b++) {
          const straight = u[p * n + r]! * u[q * n + s]!;
          const crossed = u[p * n + s]! * u[q * n + r]!;
          symmetric[a * npair + b] = r === s ? straight : straight + crossed;
          if (q < p && s < r) antisymmetric[c * nanti + d++] = straight - crossed;
        }
      }
      if (q < p) c++;
    }
  }
  return [symmetric, antisymmetric];
}
