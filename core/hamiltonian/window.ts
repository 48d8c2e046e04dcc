import { symmetricPair } from '../integrals/integral-set';
import { InputError } from '../job';
import { fromStoredForm } from './forms';
import type { SpatialHamiltonian, TwoElectronTensor } from './hamiltonian';
import { normalOrder } from './normal-order';
import { zeroOperator } from './operators';

export interface OrbitalWindow {
  /** Orbitals kept, 0-based, ascending. */
  readonly orbitals: readonly number[];
  /** Electrons in the window. */
  readonly electrons: number;
  /** Occupations 0…2 of all N orbitals; those outside the window are frozen as a spin-averaged mean field. */
  readonly occupations: ArrayLike<number>;
}

/**
 * The Hamiltonian of a window of orbitals, everything else frozen with its occupations: constant and one-body
 * part take up the mean field (direct and exchange) of the frozen orbitals, exact where these are 0 or 2.
 *
 * @throws InputError `bad-window` where orbitals or electrons do not fit.
 */
export function restrictToWindow(hamiltonian: SpatialHamiltonian, window: OrbitalWindow): SpatialHamiltonian {
  const n = hamiltonian.orbitals;
  const kept = window.orbitals;
  checkWindow(hamiltonian, window);
  const half = Float64Array.from({ length: n }, (_, p) =>
    kept.includes(p) ? 0 : window.occupations[p]! / 2,
  );
  const { energy, even } = normalOrder(hamiltonian, half, half);
  const size = kept.length;
  const h = zeroOperator('even', size);
  for (let mu = 0; mu < 4; mu++) {
    for (let p = 0; p < size; p++) {
      for (let q = 0; q < size; q++) {
        h.planes[(mu * size + p) * size + q] = even.planes[(mu * n + kept[p]!) * n + kept[q]!]!;
      }
    }
  }
  return fromStoredForm({
    orbitals: size,
    electrons: window.electrons,
    terms: hamiltonian.terms,
    constant: energy,
    h,
    g: restrictTensor(hamiltonian.g, n, kept),
  });
}

function restrictTensor(g: TwoElectronTensor, n: number, kept: readonly number[]): TwoElectronTensor {
  const symmetric: number[] = [];
  const antisymmetric: number[] = [];
  for (let p = 0; p < kept.length; p++) {
    for (let q = 0; q <= p; q++) symmetric.push(symmetricPair(kept[p]!, kept[q]!));
    for (let q = 0; q < p; q++) antisymmetric.push((kept[p]! * (kept[p]! - 1)) / 2 + kept[q]!);
  }
  const triangle = (values: Float64Array, offset: number): number[] =>
    symmetric.flatMap((a, i) => symmetric.slice(0, i + 1).map((b) => values[offset + symmetricPair(a, b)]!));
  const npair = (n * (n + 1)) / 2;
  const nanti = (n * (n - 1)) / 2;
  const rectangle = (w: Float64Array): Float64Array =>
    Float64Array.from(
      [0, 1, 2].flatMap((k) =>
        antisymmetric.flatMap((a) => symmetric.map((b) => w[(k * nanti + a) * npair + b]!)),
      ),
    );
  const { charge, spinOrbit, spinSpin } = g;
  return {
    charge: charge && Float64Array.from(triangle(charge, 0)),
    spinOrbit: spinOrbit && {
      same: rectangle(spinOrbit.same),
      other: spinOrbit.other instanceof Float64Array ? rectangle(spinOrbit.other) : spinOrbit.other,
    },
    spinSpin:
      spinSpin &&
      Float64Array.from([0, 1, 2, 3, 4, 5].flatMap((kl) => triangle(spinSpin, (kl * spinSpin.length) / 6))),
  };
}

function checkWindow(hamiltonian: SpatialHamiltonian, window: OrbitalWindow): void {
  const n = hamiltonian.orbitals;
  const { orbitals, electrons, occupations } = window;
  const refuse = (found: string, expected: string, mend: string): never => {
    throw new InputError({ code: 'bad-window', where: 'window', found, expected, mend });
  };
  const ascending = orbitals.every(
    (p, i) => Number.isInteger(p) && p >= 0 && p < n && (i === 0 || p > orbitals[i - 1]!),
  );
  if (orbitals.length === 0 || !ascending) {
    refuse(
      `orbitals ${orbitals.map((p) => p + 1).join(', ')}`,
      `ascending orbitals 1…${n}, each once`,
      'Name orbitals of the set.',
    );
  }
  let frozen = 0;
  for (let p = 0; p < n; p++) if (!orbitals.includes(p)) frozen += occupations[p]!;
  if (Math.abs(frozen + electrons - hamiltonian.electrons) > 1e-9 || electrons > 2 * orbitals.length) {
    refuse(
      `${electrons} electrons in ${orbitals.length} orbitals beside ${frozen} frozen ones`,
      `${hamiltonian.electrons} electrons together and at most ${2 * orbitals.length} in the window`,
      'Change the window, its electrons or the occupations.',
    );
  }
}
