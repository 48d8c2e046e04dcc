import type { EncodingShape } from '../../core/encode';
import type { Term } from '../../core/integrals/terms';
import type { Finding, Problem } from '../../core/job';
import type { Comparison, TermSummary } from '../../core/plan/comparison';
import type { ComparisonRequest, VariantOutcome } from '../../core/plan/request';

/** The files of one data set as the page holds them; a Blob crosses to the worker without its bytes being copied. */
export interface Source {
  /** Changes whenever the files change, so that a worker knows whether it still holds the right integrals. */
  readonly id: number;
  readonly name: string;
  readonly files: readonly { readonly path: string; readonly blob: Blob }[];
  /** True where the user named each file, false where a folder stands for the data set in it. */
  readonly chosenOneByOne: boolean;
}

/** One array (or FCIDUMP) of the set, as Load lists it. */
export interface ReadPart {
  readonly id: string;
  readonly origin: string;
  readonly holds: string;
  readonly role: string;
  readonly term: Term;
  readonly units: string;
  /** Conventions stated by the recipe. */
  readonly readAs: string;
}

/** What reading a set tells. Energies in hartree. */
export interface Reading {
  readonly title: string;
  readonly kind: 'spatial' | 'spinor';
  readonly orbitals: number;
  readonly electrons: number;
  readonly constant: number;
  readonly terms: readonly TermSummary[];
  readonly parts: readonly ReadPart[];
  readonly findings: readonly Finding[];
  /** Bytes over all files that were read. */
  readonly bytes: number;
  readonly meanFieldCoversActive: boolean;
}

/** What is asked of the reckoning, for the variants in their order; `seed` decides every random choice. */
export interface Ask extends Omit<ComparisonRequest, 'variants'> {
  readonly seed: number;
}

/** What a reckoning says while it runs: which variant is at work, and what became of it. */
export type VariantNews =
  | { readonly status: 'started'; readonly name: string }
  | { readonly status: 'sized'; readonly name: string; readonly shape: EncodingShape }
  | VariantOutcome;

/** One check of Proof. */
export interface ProofCheck {
  readonly name: string;
  readonly value: number;
  readonly expected: number;
  readonly tolerance: number;
  readonly source: string;
  readonly ok: boolean;
}

export interface Proof {
  readonly electrons: number;
  readonly terms: readonly string[];
  readonly exact: readonly number[];
  readonly variants: readonly { readonly name: string; readonly levels: readonly number[] }[];
  readonly checks: readonly ProofCheck[];
  /** What was not run, with the reason. */
  readonly notRun: readonly { readonly name: string; readonly reason: string }[];
}

/** Every job a worker can run: what goes in, what comes piece by piece, what comes out. */
export interface Jobs {
  read: { input: { source: Source }; news: never; output: Reading };
  reckon: {
    input: { source: Source; ask: Ask; variants: readonly string[] };
    news: VariantNews;
    output: Pick<Comparison, 'hamiltonian' | 'recommendation'>;
  };
  prove: {
    input: { source: Source; ask: Ask; variants: readonly string[] };
    news: never;
    output: Proof;
  };
}
export type JobName = keyof Jobs;

export type ToWorker =
  | { readonly type: 'run'; readonly id: number; readonly job: JobName; readonly input: unknown }
  | { readonly type: 'cancel'; readonly id: number };

/** How a job ended badly: stopped on request, bad input as data, or a bug with its text. */
export type Failure =
  | { readonly kind: 'cancelled' }
  | { readonly kind: 'input'; readonly problem: Problem }
  | { readonly kind: 'bug'; readonly message: string };

export type FromWorker =
  | {
      readonly type: 'progress';
      readonly id: number;
      readonly stage: string;
      readonly done: number;
      readonly total: number | null;
    }
  | { readonly type: 'news'; readonly id: number; readonly news: unknown }
  | { readonly type: 'result'; readonly id: number; readonly value: unknown }
  | { readonly type: 'failure'; readonly id: number; readonly failure: Failure };
