import { InputError } from '../job';

export const WHATIF_METHODS = [
  'double-factorised',
  'single-factorised',
  'sparse',
  'hypercontracted',
] as const;
export type WhatIfMethod = (typeof WHATIF_METHODS)[number];

/** Published parameters of a spin-free block encoding; which sizes are needed depends on the method. */
export interface WhatIfOptions {
  readonly method: WhatIfMethod;
  /** 2N. */
  readonly spinOrbitals: number;
  /** λ in hartree. */
  readonly lambda: number;
  /** Target in hartree: standard deviation of one level, all of it for the walk. */
  readonly target: number;
  /** ℵ. @defaultValue 10, as published */
  readonly keepBits: number;
  /** β. @defaultValue 16 */
  readonly rotationBits: number;
  /** L: outer factors (double- and single-factorised). */
  readonly factors?: number;
  /** Σ of the ranks of all factors (double-factorised). */
  readonly rows?: number;
  /** d: stored coefficients (sparse). */
  readonly coefficients?: number;
  /** M (hypercontracted). */
  readonly rank?: number;
  /** k of the largest table. @defaultValue 32 for sparse, as published; else the one with the fewest Toffoli */
  readonly lookupBlock?: number | 'auto';
  readonly qubitsMax?: number | null;
}

type SizeName = 'factors' | 'rows' | 'coefficients' | 'rank';

const NEEDED: Readonly<Record<WhatIfMethod, readonly SizeName[]>> = {
  'double-factorised': ['factors', 'rows'],
  'single-factorised': ['factors'],
  sparse: ['coefficients'],
  hypercontracted: ['rank'],
};

/**
 * Fills in the defaults of `whatif` and checks every figure.
 *
 * @throws InputError naming the figure that is missing or out of range.
 */
export function checkWhatIf(
  given: Omit<WhatIfOptions, 'keepBits' | 'rotationBits'> &
    Partial<Pick<WhatIfOptions, 'keepBits' | 'rotationBits'>>,
): WhatIfOptions {
  const options = { keepBits: 10, rotationBits: 16, ...given };
  if (!WHATIF_METHODS.includes(options.method)) {
    throw refuse('method', String(options.method), `one of ${WHATIF_METHODS.join(', ')}`);
  }
  whole('spinOrbitals', options.spinOrbitals, 2, 4096);
  if (options.spinOrbitals % 2 !== 0) {
    throw refuse('spinOrbitals', String(options.spinOrbitals), 'an even number: two spins an orbital');
  }
  positive('lambda', options.lambda);
  positive('target', options.target);
  whole('keepBits', options.keepBits, 1, 60);
  whole('rotationBits', options.rotationBits, 3, 60);
  for (const name of NEEDED[options.method]) {
    const value = options[name];
    if (value === undefined) {
      throw refuse(
        name,
        'nothing',
        `a whole number: ${options.method} needs ${NEEDED[options.method].join(' and ')}`,
      );
    }
    whole(name, value, 1, 2 ** 40);
  }
  const block = options.lookupBlock;
  if (block !== undefined && block !== 'auto' && !(block >= 1 && Number.isInteger(Math.log2(block)))) {
    throw refuse('lookupBlock', String(block), 'a power of two or auto');
  }
  return options;
}

function positive(name: string, value: number): void {
  if (!(value > 0 && Number.isFinite(value))) throw refuse(name, String(value), 'a number above zero');
}

function whole(name: string, value: number, least: number, most: number): void {
  if (!Number.isInteger(value) || value < least || value > most) {
    throw refuse(name, String(value), `a whole number from ${least} to ${most}`);
  }
}

function refuse(name: string, found: string, expected: string): InputError {
  return new InputError({
    code: 'whatif-parameter',
    where: `whatif ${name}`,
    found,
    expected,
    mend: 'Correct the parameter; the published benchmarks show a full set.',
  });
}
