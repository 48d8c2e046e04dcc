import type { WhatIfOptions } from '../../core/estimate';
import type {
  CircuitPart,
  ComparisonRequest,
  CircuitRequest as PlanCircuitRequest,
  VerificationRequest,
} from '../../core/plan';

/** Which files a command reads. */
export interface InputFiles {
  /** Files, folders or a recipe, as given on the command line. */
  readonly files: readonly string[];
  readonly recipe: string | null;
}

export interface InspectRequest extends InputFiles {
  readonly command: 'inspect';
  readonly electrons: number | null;
  /** Where to write the recipe that the files were read by; null: nowhere. */
  readonly writeRecipe: string | null;
}

export interface CompareRequest extends InputFiles {
  readonly command: 'compare';
  readonly comparison: ComparisonRequest;
  /** File that keeps the mixing of factors, so that it can be taken up again; null: none. */
  readonly mixingState: string | null;
}

export interface VerifyRequest extends InputFiles, VerificationRequest {
  readonly command: 'verify';
}

/** One variant's circuit: counted, or written to a file. */
export interface CircuitRequest extends InputFiles {
  readonly command: 'circuit';
  readonly circuit: PlanCircuitRequest;
  readonly part: CircuitPart;
  /** null: count only. */
  readonly out: OutputFile | null;
}

/** The tables of one variant, written into a folder. */
export interface EncodeRequest extends InputFiles {
  readonly command: 'encode';
  readonly encode: PlanCircuitRequest;
  readonly out: OutputFile;
}

/** Tables that were written, read back; against the files they were made from, if any are named. */
export interface TablesRequest {
  readonly command: 'tables';
  readonly folder: string;
  readonly against: InputFiles | null;
}

/** A file or folder that the job writes under a temporary name while the main thread sees to it. */
export interface OutputFile {
  readonly path: string;
  readonly temporary: string;
}

export interface CopyDemoRequest {
  readonly command: 'copy-demo';
  readonly from: string;
  readonly out: string;
}

export interface WhatIfRequest {
  readonly command: 'whatif';
  readonly options: WhatIfOptions;
}

/** What one call of the command line asks for; plain data, since it crosses a worker border. */
export type Request =
  | InspectRequest
  | CompareRequest
  | VerifyRequest
  | CircuitRequest
  | EncodeRequest
  | TablesRequest
  | WhatIfRequest
  | CopyDemoRequest;

/** How the answer is given. */
export interface Manner {
  readonly json: boolean;
  readonly quiet: boolean;
  readonly seed: number;
  readonly workers: number;
  /** Show the stack of a bug. */
  readonly trace: boolean;
}
