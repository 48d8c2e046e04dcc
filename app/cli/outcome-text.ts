import type { VariantOutcome } from '../../core/plan';

/** One sentence for everything about the outcomes that the table does not show: what is missing, and why. */
export function outcomeLines(outcomes: readonly VariantOutcome[]): string[] {
  // Variants of one factorisation share its notes: each is said once.
  const noted = new Set<string>();
  return outcomes.flatMap((outcome): string[] => {
    if (outcome.status === 'left-out') return [`left out: ${outcome.name}: ${outcome.reason}`];
    if (outcome.status === 'failed') {
      const { where, found, expected, mend } = outcome.problem;
      return [`failed: ${outcome.name}: ${where}: ${found}; expected ${expected}. ${mend}`];
    }
    const fresh = (outcome.notes ?? []).filter((note) => !noted.has(note));
    for (const note of fresh) noted.add(note);
    return fresh.map((note) => `note: ${outcome.name}: ${note}`);
  });
}
