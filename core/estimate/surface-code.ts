import { InputError } from '../job';
import type { PhysicalEstimate, SurfaceCodeAssumptions } from './estimate';

/** Starting point of the editable assumptions. */
export const SURFACE_CODE_DEFAULTS: SurfaceCodeAssumptions = {
  physicalError: 1e-3,
  cycleMicroseconds: 1,
  reactionMicroseconds: 10,
  factories: 4,
  failure: 0.01,
};

/**
 * A CCZ factory covers 12d × 6d sites, two physical qubits a site, and yields one state every 5.5d cycles; two T
 * states come from one CCZ state by catalysis. Gidney & Fowler, Quantum 3, 135 (2019), quoted from memory.
 */
const FACTORY_QUBITS_PER_D2 = 2 * 12 * 6;
const FACTORY_CYCLES_PER_D = 5.5;
const T_PER_CCZ = 2;
const LARGEST_DISTANCE = 199;

/** Physical qubits of one logical patch at distance d: Fowler & Gidney, arXiv:1808.06709. */
export function patchQubits(distance: number): number {
  return 2 * (distance + 1) ** 2;
}

/** Error of one logical qubit in one cycle, 0.1 (100 p)^((d+1)/2): Fowler & Gidney, arXiv:1808.06709. */
export function logicalError(physicalError: number, distance: number): number {
  return 0.1 * (100 * physicalError) ** ((distance + 1) / 2);
}

/**
 * Physical qubits and hours of a run: the least odd distance at which all logical qubits survive all cycles with the
 * accepted failure probability. The run is as slow as the slower of factories and reactions. Without routing space.
 *
 * @param work - gates of the whole run to be sized.
 * @throws InputError where the assumptions leave no distance up to 199.
 */
export function surfaceCode(
  logicalQubits: number,
  work: { readonly toffoli: number; readonly t: number },
  assumptions: SurfaceCodeAssumptions,
): PhysicalEstimate {
  const { physicalError, cycleMicroseconds, reactionMicroseconds, factories, failure } =
    checkAssumptions(assumptions);
  const states = work.toffoli + work.t / T_PER_CCZ;
  for (let distance = 3; distance <= LARGEST_DISTANCE; distance += 2) {
    const factoryMicroseconds = (states * FACTORY_CYCLES_PER_D * distance * cycleMicroseconds) / factories;
    const microseconds = Math.max(factoryMicroseconds, states * reactionMicroseconds);
    const cycles = microseconds / cycleMicroseconds;
    if (logicalQubits * cycles * logicalError(physicalError, distance) > failure) continue;
    return {
      distance,
      qubits: logicalQubits * patchQubits(distance) + factories * FACTORY_QUBITS_PER_D2 * distance ** 2,
      hours: microseconds / 3.6e9,
      assumptions,
    };
  }
  throw new InputError({
    code: 'no-code-distance',
    where: 'surface-code assumptions',
    found: `no distance up to ${LARGEST_DISTANCE} holds ${logicalQubits} logical qubits for ${states} states`,
    expected: 'a physical error rate well below the threshold of 0.01',
    mend: 'Lower the physical error rate or accept a larger failure probability.',
  });
}

function checkAssumptions(assumptions: SurfaceCodeAssumptions): SurfaceCodeAssumptions {
  const positive = Object.entries(assumptions).find(([, value]) => !(value > 0 && Number.isFinite(value)));
  const [name, value] =
    positive ??
    (assumptions.physicalError >= 0.01
      ? ['physicalError', assumptions.physicalError]
      : assumptions.failure >= 1
        ? ['failure', assumptions.failure]
        : [null, null]);
  if (name === null) return assumptions;
  throw new InputError({
    code: 'surface-code-assumption',
    where: `surface-code assumption ${name}`,
    found: String(value),
    expected: name === 'physicalError' ? 'a rate above 0 and below the threshold 0.01' : 'a positive number',
    mend: 'Correct the machine assumptions.',
  });
}
