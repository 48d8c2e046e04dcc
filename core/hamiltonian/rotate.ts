import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { concatenated, multiply, transpose } from '../linalg';
import { fromStoredForm } from './forms';
import type { SpatialHamiltonian, TwoElectronTensor } from './hamiltonian';
import type { TripletOperator } from './operators';
import { rotatePairs } from './rotate-pairs';
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
  const mix = (planes: Float64Array, offset: number, size: number) =>
    mixedComponents(planes, offset, size, rotation);
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

/** The four planes of an operator with its spin axes turned: L^l → Σ_k R_kl L^k, the charge plane as it was. */
export function turnedSpinPlanes(planes: Float64Array, n: number, rotation: ArrayLike<number>): Float64Array {
  return mixedComponents(planes, n * n, n * n, rotation);
}

/** Three components of `size` numbers from `offset`, x^l → Σ_k R_kl x^k; what stands before them is copied. */
function mixedComponents(
  values: Float64Array,
  offset: number,
  size: number,
  rotation: ArrayLike<number>,
): Float64Array {
  const mixed = values.slice();
  for (let l = 0; l < 3; l++) {
    for (let i = 0; i < size; i++) {
      let sum = 0;
      for (let k = 0; k < 3; k++) sum += rotation[3 * k + l]! * values[offset + k * size + i]!;
      mixed[offset + l * size + i] = sum;
    }
  }
  return mixed;
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
 * factorisation depends on the basis. Uᵀ turns it back.
 *
 * @param u - N×N real orthogonal, row-major. Not checked.
 * @remarks Cost O(N⁵), in parallel pieces.
 */
export async function rotateOrbitals(
  hamiltonian: SpatialHamiltonian,
  u: Float64Array,
  context: JobContext,
): Promise<SpatialHamiltonian> {
  const { orbitals: n, g } = hamiltonian;
  const { charge, spinOrbit, spinSpin } = g;
  const rectangles = async (w: Float64Array): Promise<Float64Array> => {
    const size = w.length / 3;
    const parts: Float64Array[] = [];
    for (let k = 0; k < 3; k++)
      parts.push(await rotatedRectangle(n, w.subarray(k * size, (k + 1) * size), u, context));
    return concatenated(parts);
  };
  const triangles = async (values: Float64Array): Promise<Float64Array> => {
    const size = values.length / 6;
    const parts: Float64Array[] = [];
    for (let kl = 0; kl < 6; kl++) {
      parts.push(await rotatedTriangle(n, values.subarray(kl * size, (kl + 1) * size), u, context));
    }
    return concatenated(parts);
  };
  const rotated: TwoElectronTensor = {
    charge: charge && (await rotatedTriangle(n, charge, u, context)),
    spinOrbit: spinOrbit && {
      same: await rectangles(spinOrbit.same),
      other: spinOrbit.other instanceof Float64Array ? await rectangles(spinOrbit.other) : spinOrbit.other,
    },
    spinSpin: spinSpin && (await triangles(spinSpin)),
  };
  return fromStoredForm({ ...hamiltonian, h: rotateOperator(hamiltonian.h, u), g: rotated });
}

/** A pairs-triangle over turned orbitals. */
async function rotatedTriangle(
  n: number,
  values: Float64Array,
  u: Float64Array,
  context: JobContext,
): Promise<Float64Array> {
  const full = await rotatedSquare(n, squareOfTriangle(n, values), u, context);
  const npair = numSymmetricPairs(n);
  const packed = new Float64Array((npair * (npair + 1)) / 2);
  for (let a = 0, i = 0; a < npair; a++) {
    // Both triangles are averaged: rounding must not make the result depend on which one is kept.
    for (let b = 0; b <= a; b++, i++) packed[i] = (full[a * npair + b]! + full[b * npair + a]!) / 2;
  }
  return packed;
}

/** A pairs-triangle written out, npair × npair. */
export function squareOfTriangle(n: number, values: Float64Array): Float64Array {
  const npair = numSymmetricPairs(n);
  const full = new Float64Array(npair * npair);
  for (let a = 0, i = 0; a < npair; a++) {
    for (let b = 0; b <= a; b++, i++) {
      full[a * npair + b] = values[i]!;
      full[b * npair + a] = values[i]!;
    }
  }
  return full;
}

/** Bare integrals over npair × npair symmetric pairs, both pairs turned. */
export async function rotatedSquare(
  n: number,
  full: Float64Array,
  u: Float64Array,
  context: JobContext,
): Promise<Float64Array> {
  const npair = numSymmetricPairs(n);
  const side = { n, symmetric: true, rows: npair, u };
  const half = await rotatePairs({ ...side, values: full }, context);
  return rotatePairs({ ...side, values: transpose(half, npair, npair) }, context);
}

/** nanti × npair: antisymmetric pairs by symmetric ones. */
async function rotatedRectangle(
  n: number,
  w: Float64Array,
  u: Float64Array,
  context: JobContext,
): Promise<Float64Array> {
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  if (nanti === 0) return w;
  const half = await rotatePairs({ n, symmetric: true, rows: nanti, values: w, u }, context);
  const turned = transpose(half, nanti, npair);
  const whole = await rotatePairs({ n, symmetric: false, rows: npair, values: turned, u }, context);
  return transpose(whole, npair, nanti);
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
