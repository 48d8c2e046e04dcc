/** The server ends this many seconds after the last page was heard of. */
const SILENCE_S = 10;
/** A browser may take its time to start. */
const START_S = 60;

/**
 * Watches whether a page is still there. It counts seconds in which the program ran, not seconds on the clock: a
 * computer that slept for an hour has not been left by its page.
 */
export class Heartbeat {
  #silent = 0;
  #heard = false;
  readonly #onsilence: () => void;
  readonly #timer: NodeJS.Timeout;

  constructor(onsilence: () => void) {
    this.#onsilence = onsilence;
    this.#timer = setInterval(() => this.#tick(), 1000);
  }

  beat(): void {
    this.#heard = true;
    this.#silent = 0;
  }

  stop(): void {
    clearInterval(this.#timer);
  }

  #tick(): void {
    this.#silent++;
    if (this.#silent < (this.#heard ? SILENCE_S : START_S)) return;
    this.stop();
    this.#onsilence();
  }
}
