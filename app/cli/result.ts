import type { WhatIfResult } from '../../core/estimate';
import type {
  CircuitCount,
  CircuitText,
  ComparisonRun,
  Evidence,
  Inspection,
  Meaning,
  TablesCheck,
  TablesDocument,
} from '../../core/plan';
import type { OutputFile } from './request';

/** What a request comes back with; plain data, since it crosses a worker border. */
export type Result =
  | {
      readonly command: 'inspect';
      readonly inspection: Inspection;
      /** The recipe to write and where, or null. */
      readonly recipe: { readonly path: string; readonly text: string } | null;
    }
  | { readonly command: 'compare'; readonly run: ComparisonRun; readonly meaning: Meaning }
  | { readonly command: 'verify'; readonly evidence: Evidence }
  | { readonly command: 'circuit-count'; readonly count: CircuitCount }
  | { readonly command: 'circuit-text'; readonly text: CircuitText; readonly out: OutputFile }
  | { readonly command: 'encode'; readonly tables: TablesDocument; readonly out: OutputFile }
  | { readonly command: 'tables'; readonly folder: string; readonly check: TablesCheck }
  | { readonly command: 'whatif'; readonly whatIf: WhatIfResult }
  | { readonly command: 'copy-demo'; readonly from: string; readonly out: string };
