import { formatShare } from '../../core/units';

export interface Progress {
  readonly stage: string;
  readonly done: number;
  readonly total: number | null;
}

/** The little of a stream that the bar needs. */
export interface TerminalStream {
  readonly isTTY?: boolean;
  readonly columns?: number;
  write(text: string): unknown;
}

const BAR = 24;
const CLEAR_LINE = '\r\u001b[2K';

/** A progress line on a terminal; on anything else it writes nothing. */
export class ProgressLine {
  readonly #stream: TerminalStream;
  readonly #active: boolean;
  #shown = false;

  constructor(stream: TerminalStream, quiet: boolean) {
    this.#stream = stream;
    this.#active = stream.isTTY === true && !quiet;
  }

  show({ stage, done, total }: Progress): void {
    if (!this.#active) return;
    const share = total ? Math.min(1, done / total) : null;
    const filled = Math.round(BAR * (share ?? 0));
    const bar = share === null ? '·'.repeat(BAR) : '='.repeat(filled) + '·'.repeat(BAR - filled);
    const text = `${bar} ${(share === null ? '' : formatShare(share)).padStart(7)}  ${stage}`;
    this.#stream.write(CLEAR_LINE + text.slice(0, (this.#stream.columns ?? 80) - 1));
    this.#shown = true;
  }

  clear(): void {
    if (this.#shown) this.#stream.write(CLEAR_LINE);
    this.#shown = false;
  }
}
