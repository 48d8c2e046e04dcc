/** The six stops of the rail, in the order of the job. */
export const STOPS = ['load', 'terms', 'target', 'variants', 'ledger', 'proof'] as const;
export type Stop = (typeof STOPS)[number];

export const STOP_WORDS: Readonly<Record<Stop, string>> = {
  load: 'Load',
  terms: 'Terms',
  target: 'Target',
  variants: 'Variants',
  ledger: 'Ledger',
  proof: 'Proof',
};

/** How far a stop is: nothing yet, partly, ready, out of date, or at fault. */
export type Mark = 'empty' | 'half' | 'full' | 'stale' | 'error';

/** One stop's line on the rail. `knows` draws the line to the next stop solid. */
export interface StopLine {
  readonly mark: Mark;
  readonly fact: string;
  readonly knows: boolean;
}
