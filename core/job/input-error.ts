/** One problem with what the user gave, as data: people read the sentence, programs match the code. */
export interface Problem {
  /** Stable, kebab-case, e.g. `index-out-of-range`. */
  readonly code: string;
  /** File with line, dataset path or element: `demo.fcidump:212`, `so.npz:h1_z`. */
  readonly where: string;
  /** What was found. */
  readonly found: string;
  /** What was expected. */
  readonly expected: string;
  /** How to mend it. */
  readonly mend: string;
}

/** Bad input. Its message is one line: where, what was found, what was expected, how to mend it. */
export class InputError extends Error implements Problem {
  override readonly name = 'InputError';
  readonly code: string;
  readonly where: string;
  readonly found: string;
  readonly expected: string;
  readonly mend: string;

  constructor(problem: Problem) {
    const line = `${problem.where}: ${problem.found}; expected ${problem.expected}. ${problem.mend}`;
    super(plainLine(line));
    this.code = problem.code;
    this.where = problem.where;
    this.found = problem.found;
    this.expected = problem.expected;
    this.mend = problem.mend;
  }

  /** The plain data, for crossing a worker border: structured cloning keeps no class. */
  toProblem(): Problem {
    const { code, where, found, expected, mend } = this;
    return { code, where, found, expected, mend };
  }
}

/**
 * One line without control or formatting characters: names and titles come from files, and a terminal must not
 * obey them.
 */
export const plainLine = (text: string): string =>
  text
    .replace(/\s*[\n\r\t]\s*/g, ' ')
    .replace(/[\p{Cc}\p{Cf}\p{Zl}\p{Zp}]/gu, (c) => `\\u{${c.codePointAt(0)!.toString(16)}}`);

/**
 * Something noticed in otherwise readable input. `error` stops the job, `warning` asks for a decision,
 * `note` informs. Nothing is ever repaired silently: the cure is a proposal.
 */
export interface Finding extends Problem {
  readonly severity: 'error' | 'warning' | 'note';
}
