import { rotationOf } from '../../../core/encode';
import type { IntegralSet, SpatialIntegrals } from '../../../core/integrals';

/** Axes that no molecule of the tests has. */
export const TILT = rotationOf([0.3, 0.5, -0.9]);

/** x^l → Σ_k R_kl x^k over three blocks. */
function turned(values: Float64Array): Float64Array {
  const size = values.length / 3;
  return Float64Array.from(values, (_, at) => {
    const [l, i] = [Math.floor(at / size), at % size];
    return [0, 1, 2].reduce((sum, k) => sum + TILT[3 * k + l]! * values[k * size + i]!, 0);
  });
}

/** The set as a program would write it that does not align its spin axes with the molecule; without spin–spin parts. */
export function tilted(set: IntegralSet): SpatialIntegrals {
  if (set.kind !== 'spatial') throw new Error('spatial orbitals expected');
  return {
    ...set,
    oneElectron: set.oneElectron.map((part) => ({ ...part, spin: part.spin && turned(part.spin) })),
    twoElectron: set.twoElectron
      .filter((part) => part.kind !== 'spin-spin')
      .map((part) => {
        if (part.kind !== 'spin-orbit') return part;
        const { same, other } = part;
        return {
          ...part,
          same: same && turned(same),
          other: other instanceof Float64Array ? turned(other) : other,
        };
      }),
  };
}
