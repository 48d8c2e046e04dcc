import type { SpatialHamiltonian, SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { exactSpectrum, type Spectrum } from '../verify';
import { type Check, check } from './evidence';
import { type Frame, turnedBack } from './frame';

/** Integrals turned and turned back, hartree: rounding of four sums over the orbitals each way. */
const ROUND_TRIP = 1e-12;
const SOURCE = 'a change of basis leaves every eigenvalue; the transpose undoes it';

/**
 * What a turned frame must leave as it was: the levels, and after turning back every integral.
 *
 * @param exact - levels of `given`
 * @returns nothing for a frame that was not turned
 */
export async function frameChecks(
  given: SpinHamiltonian,
  frame: Frame,
  exact: Spectrum,
  states: number,
  rounding: number,
  context: JobContext,
): Promise<Check[]> {
  if (!frame.record.turned || given.kind !== 'spatial') return [];
  const { kind, judgedBy, lambda } = frame.record;
  const levels = await exactSpectrum(frame.hamiltonian, { states }, context);
  let widest = 0;
  for (const [i, value] of levels.values.entries()) {
    widest = Math.max(widest, Math.abs(value - exact.values[i]!));
  }
  const what = `${kind === 'spin' ? 'spin axes' : 'orbitals'} turned for ${judgedBy}`;
  return [
    check(
      `${what}: levels against the given frame, largest difference`,
      widest,
      0,
      rounding + levels.errorBound + exact.errorBound,
      SOURCE,
    ),
    check(
      `${what}: integrals turned back, largest difference`,
      largestDifference(given, await turnedBack(frame.hamiltonian, frame, context)),
      0,
      ROUND_TRIP * Math.max(1, lambda.before),
      SOURCE,
    ),
  ];
}

function largestDifference(a: SpatialHamiltonian, b: SpatialHamiltonian): number {
  let widest = 0;
  const compare = (x: Float64Array | null | undefined, y: Float64Array | null | undefined) => {
    if (!x || !y) {
      if (x || y) widest = Number.POSITIVE_INFINITY;
      return;
    }
    for (let i = 0; i < x.length; i++) widest = Math.max(widest, Math.abs(x[i]! - y[i]!));
  };
  const array = (values: Float64Array | { readonly timesSame: number } | undefined) =>
    values instanceof Float64Array ? values : null;
  compare(a.h.planes, b.h.planes);
  compare(a.k.planes, b.k.planes);
  compare(a.g.charge, b.g.charge);
  compare(a.g.spinOrbit?.same, b.g.spinOrbit?.same);
  compare(array(a.g.spinOrbit?.other), array(b.g.spinOrbit?.other));
  compare(a.g.spinSpin, b.g.spinSpin);
  return widest;
}
