import type { MixingState, MixingStore } from '../factor';
import type { SpatialHamiltonian } from '../hamiltonian';
import { InputError } from '../job';

/** What a mixing run belongs to; equal only where every word is. */
export interface MixingOwner {
  /** `compressed/joint` and the like. */
  readonly variant: string;
  readonly orbitals: number;
  readonly electrons: number;
  readonly terms: string;
  /** Hartree. */
  readonly threshold: number;
  /** Number asked for, or `auto`. */
  readonly factors: number | 'auto';
  /** Of everything in the Hamiltonian that mixing depends on, as hexadecimal digits. */
  readonly integrals: string;
}

/** One run with where each of its parts stands. */
export interface MixingRun {
  readonly owner: MixingOwner;
  readonly parts: Readonly<Record<string, MixingState>>;
}

/** Fingerprint of the Hamiltonian under the given choices. */
export function mixingOwner(
  h: SpatialHamiltonian,
  choices: Pick<MixingOwner, 'variant' | 'threshold' | 'factors'>,
  occupations: readonly number[] | null,
): MixingOwner {
  const { charge, spinOrbit, spinSpin } = h.g;
  const other = spinOrbit?.other;
  const arrays = [
    h.k.planes,
    charge,
    spinOrbit?.same,
    other instanceof Float64Array ? other : other ? Float64Array.of(other.timesSame) : null,
    spinSpin,
    occupations ? Float64Array.from(occupations) : null,
  ];
  return {
    ...choices,
    orbitals: h.orbitals,
    electrons: h.electrons,
    terms: h.terms.join(','),
    integrals: digest(arrays),
  };
}

/** 64 bits in two independent multiplicative hashes (FNV-1a style): tells files apart, hides nothing. */
function digest(arrays: readonly (Float64Array | null | undefined)[]): string {
  let a = 0x811c9dc5;
  let b = 0x9e3779b9;
  for (const array of arrays) {
    const words = array ? new Uint32Array(array.slice().buffer) : Uint32Array.of(0xffffffff);
    for (const word of words) {
      a = Math.imul(a ^ word, 0x01000193);
      b = Math.imul((b ^ word) + 0x7f4a7c15, 0x85ebca6b);
      // A multiplication carries upwards only.
      a ^= a >>> 15;
      b ^= b >>> 13;
    }
    a = Math.imul(a ^ words.length, 0x01000193);
  }
  return [a, b].map((x) => (x >>> 0).toString(16).padStart(8, '0')).join('');
}

/** Runs of mixing that can be taken up again. Knows nothing of files. */
export class MixingStates {
  readonly #runs: { readonly owner: MixingOwner; readonly parts: Map<string, MixingState> }[];
  readonly #onChange: () => void;
  readonly #where: string;
  /** Runs that came from outside and were not asked for yet all belong to something else. */
  #unproved: boolean;

  /**
   * @param where - what an error names, e.g. the file
   * @param onChange - called with every better point: must be cheap
   */
  constructor(given: readonly MixingRun[], where: string, onChange: () => void) {
    this.#runs = given.map(({ owner, parts }) => ({ owner, parts: new Map(Object.entries(parts)) }));
    this.#where = where;
    this.#onChange = onChange;
    this.#unproved = given.length > 0;
  }

  /** Everything known now. */
  runs(): MixingRun[] {
    return this.#runs.map(({ owner, parts }) => ({ owner, parts: Object.fromEntries(parts) }));
  }

  /**
   * Where the parts of one run are kept.
   *
   * @throws InputError `other-mixing-state` where runs were given and the first one asked for is not among them
   */
  of(owner: MixingOwner): MixingStore {
    let run = this.#runs.find((other) => differences(owner, other.owner).length === 0);
    if (!run) {
      if (this.#unproved) throw this.#foreign(owner);
      run = { owner, parts: new Map() };
      this.#runs.push(run);
    }
    this.#unproved = false;
    const { parts } = run;
    return {
      load: (part) => parts.get(part) ?? null,
      save: (part, state) => {
        parts.set(part, state);
        this.#onChange();
      },
    };
  }

  #foreign(owner: MixingOwner): InputError {
    const closest = this.#runs
      .map((run) => ({ run, words: differences(owner, run.owner) }))
      .sort((x, y) => x.words.length - y.words.length)[0]!;
    const say = (of: MixingOwner) => closest.words.map((word) => `${word} ${of[word]}`).join(', ');
    return new InputError({
      code: 'other-mixing-state',
      where: this.#where,
      found: `a state for ${say(closest.run.owner)}`,
      expected: say(owner),
      mend: 'Name another file, or remove this one to start anew.',
    });
  }
}

function differences(a: MixingOwner, b: MixingOwner): (keyof MixingOwner)[] {
  return (Object.keys(a) as (keyof MixingOwner)[]).filter((word) => a[word] !== b[word]);
}
