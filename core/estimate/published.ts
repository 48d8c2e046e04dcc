import type { WhatIfMethod, WhatIfOptions } from './whatif-options';

/** A published benchmark row that the cost model has to meet. */
export interface PublishedRow {
  readonly system: string;
  readonly method: WhatIfMethod;
  readonly spinOrbitals: number;
  /** λ in hartree. */
  readonly lambda: number;
  readonly keepBits: number;
  readonly rotationBits: number;
  /** Sizes of the method, by the names of {@link WhatIfOptions}. */
  readonly sizes: Readonly<Partial<Record<SizeName, number>>>;
  readonly stepToffoli: number;
  readonly totalToffoli: number;
  readonly logicalQubits: number;
  readonly source: string;
}

type SizeName = 'factors' | 'rows' | 'coefficients' | 'rank';

const SOURCE =
  'Lee et al., PRX Quantum 2, 030305 (2021), benchmarks on the iron–molybdenum cofactor; quoted from memory, total = steps × step exactly';
const A = 'A (108 spin orbitals)';
const B = 'B (152 spin orbitals)';

/** Target of the published rows: 1 mEh, all of it for the walk. */
export const PUBLISHED_TARGET = 1e-3;

export const PUBLISHED_ROWS: readonly PublishedRow[] = [
  row(A, 'double-factorised', 108, 294.8, 16, { factors: 360, rows: 13031 }, [21753, 10073183463, 3725]),
  row(A, 'sparse', 108, 2135.3, 0, { coefficients: 705831 }, [26347, 88371052334, 2190]),
  row(A, 'single-factorised', 108, 4258.0, 0, { factors: 200 }, [14184, 94868988984, 3320]),
  row(A, 'hypercontracted', 108, 306.3, 16, { rank: 350 }, [10912, 5250145120, 2142]),
  row(B, 'double-factorised', 152, 1171.2, 20, { factors: 394, rows: 20115 }, [35008, 64404812736, 6404]),
  row(B, 'sparse', 152, 1547.3, 0, { coefficients: 440501 }, [18143, 44096452642, 2489]),
  row(B, 'single-factorised', 152, 3071.8, 0, { factors: 275 }, [24396, 117714920508, 3628]),
  row(B, 'hypercontracted', 152, 1201.5, 20, { rank: 450 }, [16923, 31938980976, 2196]),
];

function row(
  system: string,
  method: WhatIfMethod,
  spinOrbitals: number,
  lambda: number,
  rotationBits: number,
  sizes: PublishedRow['sizes'],
  [stepToffoli, totalToffoli, logicalQubits]: readonly [number, number, number],
): PublishedRow {
  return {
    system,
    method,
    spinOrbitals,
    lambda,
    keepBits: 10,
    rotationBits,
    sizes,
    stepToffoli,
    totalToffoli,
    logicalQubits,
    source: SOURCE,
  };
}

/** The published row whose parameters these are, or null. */
export function publishedRow(options: WhatIfOptions): PublishedRow | null {
  const matches = (candidate: PublishedRow) =>
    candidate.method === options.method &&
    candidate.spinOrbitals === options.spinOrbitals &&
    candidate.lambda === options.lambda &&
    candidate.keepBits === options.keepBits &&
    (candidate.rotationBits === 0 || candidate.rotationBits === options.rotationBits) &&
    options.target === PUBLISHED_TARGET &&
    Object.entries(candidate.sizes).every(([name, value]) => options[name as SizeName] === value);
  return PUBLISHED_ROWS.find(matches) ?? null;
}
