/** Least time of samples before a time left is named. */
const SAMPLES_MS = 2_000;
const STEPS_S = [5, 10, 20, 40, 60, 120, 180, 300, 600, 1200, 1800, 3600];

/** Time left of a job of equal pieces, in steps rather than seconds, so that it does not flicker. */
export class Remaining {
  #total: number;
  readonly #now: () => number;
  readonly #start: number;
  #done = 0;

  constructor(total: number, now: () => number = () => performance.now()) {
    this.#total = total;
    this.#now = now;
    this.#start = now();
  }

  finished(): void {
    this.#done++;
  }

  /** A piece that turned out to be no work: it says nothing about the others. */
  dropped(): void {
    this.#total--;
  }

  /** `About 40 s left`, or empty while nothing can be said. */
  words(): string {
    const elapsed = this.#now() - this.#start;
    if (this.#done === 0 || elapsed < SAMPLES_MS) return '';
    const left = ((elapsed / this.#done) * (this.#total - this.#done)) / 1000;
    const step = STEPS_S.find((s) => left <= s) ?? STEPS_S[STEPS_S.length - 1]!;
    return `About ${step < 120 ? `${step} s` : `${step / 60} min`} left`;
  }
}
