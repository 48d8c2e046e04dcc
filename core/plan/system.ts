import { buildHamiltonian, restrictToWindow, type SpinHamiltonian } from '../hamiltonian';
import type { IntegralSet, SelectableTerm } from '../integrals';
import { InputError } from '../job';
import type { FrameRequest } from './frame';

/** Some orbitals of the set; the others keep their occupations as a mean field. */
export interface OrbitalChoice {
  /** 1-based as people count them, ascending. */
  readonly orbitals: readonly number[];
  /** null: what the occupations leave in the window. */
  readonly electrons: number | null;
}

/** Which Hamiltonian is meant: plain data. */
export interface SystemRequest {
  /** Terms of H to keep, or every term the files hold. */
  readonly terms: readonly SelectableTerm[] | 'all';
  /** Electrons in the orbitals; null: as the files say. */
  readonly electrons: number | null;
  /** Reference occupations for mean fields, 0…2 each; null: as the files say. */
  readonly occupations: readonly number[] | null;
  /** Absent or null: all orbitals. */
  readonly window?: OrbitalChoice | null;
  /** Absent: spin axes and orbitals as the files have them. */
  readonly frames?: FrameRequest;
}

/**
 * The Hamiltonian of a request.
 * @throws InputError where terms, electrons, occupations or window do not fit the integrals
 */
export function hamiltonianOf(set: IntegralSet, request: SystemRequest): SpinHamiltonian {
  const { terms, electrons, occupations, window } = request;
  const whole = buildHamiltonian(set, {
    terms,
    ...(electrons === null ? {} : { electrons }),
    ...(occupations === null ? {} : { occupations }),
  });
  if (!window) return whole;
  if (set.kind === 'spinor' || whole.kind === 'spinor') {
    throw new InputError({
      code: 'bad-window',
      where: 'window',
      found: 'integrals over complex spinors',
      expected: 'spatial orbitals',
      mend: 'Leave the window out.',
    });
  }
  const filling = occupations ?? set.occupations;
  const orbitals = window.orbitals.map((orbital) => orbital - 1);
  return restrictToWindow(whole, {
    orbitals,
    electrons: window.electrons ?? Math.round(orbitals.reduce((sum, p) => sum + (filling[p] ?? 0), 0)),
    occupations: filling,
  });
}

/**
 * Reference occupations of the orbitals of {@link hamiltonianOf}: the mean field of dropped two-electron spin–orbit
 * factors is taken over them. null for spinors, which have no such mean field.
 */
export function occupationsOf(
  set: IntegralSet,
  { occupations, window }: SystemRequest,
): readonly number[] | null {
  if (set.kind === 'spinor') return null;
  const filling = Array.from(occupations ?? set.occupations);
  return window ? window.orbitals.map((orbital) => filling[orbital - 1]!) : filling;
}
