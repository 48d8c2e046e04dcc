import { InputError } from '../../job';

/** Where the mixing of one part of a Hamiltonian stands. */
export interface MixingState {
  /** Smoothing stage it is in; a run that goes on begins there. */
  readonly stage: number;
  readonly done: boolean;
  /** λ of the part and of the planes of κ that its shifts act on, hartree. */
  readonly lambda: number;
  readonly count: number;
  /** The point: columns, or both sides of triples, and shifts. */
  readonly arrays: Readonly<Record<string, Float64Array>>;
}

/** Keeps what mixing found, so that a stopped run can go on. Parts are told apart by name, e.g. `coulomb`. */
export interface MixingStore {
  load(part: string): MixingState | null;
  /** Called with every better point: must be cheap. */
  save(part: string, state: MixingState): void;
}

/** Largest part of the tensor that a state may differ by. */
const SAME = 1e-9;

/**
 * Refuses a state whose factors do not add up to the tensor of the part.
 *
 * @param given - the tensor's action on some vectors, as computed from the factors to be mixed
 * @param found - the same from the state
 * @throws InputError `other-mixing-state`
 */
export function checkSameTensor(part: string, given: Float64Array, found: Float64Array): void {
  let square = 0;
  let difference = 0;
  for (let i = 0; i < given.length; i++) {
    square += given[i]! ** 2;
    difference += (given[i]! - (found[i] ?? 0)) ** 2;
  }
  // A NaN is no agreement either.
  if (found.length === given.length && Math.sqrt(difference) <= SAME * Math.sqrt(square)) return;
  throw otherState(part, 'factors that do not add up to this Hamiltonian', 'factors of the same tensor');
}

/** @throws InputError `other-mixing-state` where an array is absent or has another length */
export function arrayOf(part: string, state: MixingState, name: string, length: number): Float64Array {
  const found = state.arrays[name];
  if (found?.length === length) return found;
  throw otherState(part, `${found?.length ?? 'no'} numbers of "${name}"`, `${length}`);
}

function otherState(part: string, found: string, expected: string): InputError {
  return new InputError({
    code: 'other-mixing-state',
    where: `mixing state, part "${part}"`,
    found,
    expected,
    mend: 'Name another file, or remove this one to start anew.',
  });
}
