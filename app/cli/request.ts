import type { WhatIfOptions } from '../../core/estimate';
import type { ComparisonRequest, VerificationRequest } from '../../core/plan';

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
}

export interface VerifyRequest extends InputFiles, VerificationRequest {
  readonly command: 'verify';
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
export type Request = InspectRequest | CompareRequest | VerifyRequest | WhatIfRequest | CopyDemoRequest;

/** How the answer is given. */
export interface Manner {
  readonly json: boolean;
  readonly quiet: boolean;
  readonly seed: number;
  readonly workers: number;
  /** Show the stack of a bug. */
  readonly trace: boolean;
}
