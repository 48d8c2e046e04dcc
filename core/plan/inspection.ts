import { heldTerms } from '../hamiltonian';
import type { IntegralSet } from '../integrals';
import type { Finding, JobContext } from '../job';
import type { TermSummary } from './comparison';
import { termSummaries } from './term-summaries';

/** What `inspect --json` prints, keys in this order. Energies in hartree. */
export interface Inspection {
  readonly schema: 'spinwright-inspection/1';
  readonly title: string;
  readonly kind: IntegralSet['kind'];
  readonly orbitals: number;
  readonly electrons: number;
  /** Sum of the constants of all terms. */
  readonly constant: number;
  readonly terms: readonly TermSummary[];
  readonly files: readonly { readonly path: string; readonly bytes: number }[];
  readonly findings: readonly Finding[];
}

/** What a set of integrals holds. */
export async function inspectIntegrals(set: IntegralSet, context: JobContext): Promise<Inspection> {
  return {
    schema: 'spinwright-inspection/1',
    title: set.provenance.title,
    kind: set.kind,
    orbitals: set.kind === 'spatial' ? set.orbitals : set.spinors / 2,
    electrons: set.electrons,
    constant:
      set.kind === 'spatial'
        ? heldTerms(set).reduce(
            (sum, term) => sum + (set.constants[term as keyof typeof set.constants] ?? 0),
            0,
          )
        : set.constant,
    terms: await termSummaries(set, heldTerms(set), context),
    files: set.provenance.files,
    findings: set.findings,
  };
}
