import { Cancelled, InputError, type Problem } from '../../core/job';
import type { Engine } from '../engine/engine';
import type { Reading, Source } from '../engine/protocol';
import { problemOf } from '../engine/serve';
import { formatBytes, formatCount, formatOneNorm } from '../figures/figures';
import { type Reckoning, source, strong, words } from '../figures/reckoning';
import type { OpenedFiles, Shell } from '../shell';
import type { StopLine } from './stops';

export type LoadPhase = 'empty' | 'reading' | 'ready' | 'failed';

/** The files of the job and what reading them told. */
export class LoadState {
  phase = $state<LoadPhase>('empty');
  source = $state.raw<Source | null>(null);
  reading = $state.raw<Reading | null>(null);
  problem = $state.raw<Problem | null>(null);
  stage = $state('');
  fraction = $state<number | null>(null);
  /** True while files are dragged over the window. */
  dragging = $state(false);
  /** Id of the part whose row has the focus. */
  focus = $state<string | null>(null);

  readonly #engine: Engine;
  readonly #shell: Shell;
  #stop: AbortController | null = null;
  #nextId = 1;

  constructor(engine: Engine, shell: Shell) {
    this.#engine = engine;
    this.#shell = shell;
  }

  async choose(what: 'files' | 'folder' = 'files'): Promise<void> {
    const opened = await this.#shell.open(what);
    if (opened) await this.read(opened);
  }

  async useDemo(): Promise<void> {
    await this.#fetch('demo', () => this.#shell.demo());
  }

  /** Opens the files that were named when the program was started; does nothing where there were none. */
  async useGiven(): Promise<void> {
    await this.#fetch('files of the command line', () => this.#shell.given());
  }

  async #fetch(where: string, get: () => Promise<OpenedFiles | null>): Promise<void> {
    try {
      const opened = await get();
      if (opened) await this.read(opened);
    } catch (error) {
      this.phase = 'failed';
      this.problem = problemOf(error, where);
    }
  }

  async read(given: OpenedFiles): Promise<void> {
    if (given.files.length === 0) return;
    this.#stop?.abort();
    const stop = new AbortController();
    this.#stop = stop;
    const opened: Source = { id: this.#nextId++, ...given };
    this.phase = 'reading';
    this.source = opened;
    this.reading = null;
    this.problem = null;
    this.focus = null;
    this.stage = 'opening';
    this.fraction = null;
    try {
      const reading = await this.#engine.run(
        'read',
        { source: opened },
        {
          signal: stop.signal,
          onProgress: (stage, done, total) => {
            this.stage = stage;
            this.fraction = total ? done / total : null;
          },
        },
      );
      if (this.#stop !== stop) return;
      this.reading = reading;
      this.phase = 'ready';
    } catch (error) {
      if (this.#stop !== stop) return;
      if (error instanceof Cancelled) {
        this.phase = 'empty';
        this.source = null;
        return;
      }
      this.phase = 'failed';
      this.problem = error instanceof InputError ? error.toProblem() : problemOf(error, given.name);
    }
  }

  stopReading(): void {
    this.#stop?.abort();
  }

  readonly errors = $derived(this.reading?.findings.filter((f) => f.severity === 'error').length ?? 0);

  /** Integrals that other stops can work on. */
  readonly ready = $derived(
    this.phase === 'ready' && this.errors === 0 && this.source && this.reading
      ? { source: this.source, reading: this.reading }
      : null,
  );

  readonly warnings = $derived(this.reading?.findings.filter((f) => f.severity !== 'note').length ?? 0);

  readonly line = $derived.by((): StopLine => {
    const { reading } = this;
    if (this.phase === 'reading') return { mark: 'half', fact: 'reading', knows: false };
    if (this.phase === 'failed') return { mark: 'error', fact: 'not readable', knows: false };
    if (!reading) return { mark: 'empty', fact: 'no integrals yet', knows: false };
    if (this.errors > 0)
      return {
        mark: 'error',
        fact: `${this.errors} ${this.errors === 1 ? 'error' : 'errors'} in the files`,
        knows: false,
      };
    const arrays = `${reading.parts.length} ${reading.parts.length === 1 ? 'array' : 'arrays'}`;
    return {
      mark: this.warnings > 0 ? 'half' : 'full',
      fact: `${arrays}, ${reading.orbitals} orbitals`,
      knows: true,
    };
  });

  readonly reckoning = $derived.by((): Reckoning => {
    const { reading } = this;
    if (!reading) {
      return [
        [
          words(
            'Integral files hold the Hamiltonian: an FCIDUMP for the spin-free part, arrays for each spin-dependent one.',
          ),
        ],
        [
          words(
            'A recipe (*.recipe.json) says which array plays which role; without it the names of the arrays do.',
          ),
        ],
      ];
    }
    const part = reading.parts.find((p) => p.id === this.focus);
    if (part) {
      const findings = reading.findings.filter((f) => f.where.startsWith(part.origin));
      return [
        [
          strong(part.origin),
          words(` holds the ${part.role} part of term ${part.term}. `),
          source(part.holds),
        ],
        [
          words(
            findings[0]
              ? `${findings[0].found}; expected ${findings[0].expected}.`
              : 'All its symmetries hold within 1e-8 of its largest element.',
          ),
        ],
      ];
    }
    return [
      [
        strong(`${reading.orbitals} orbitals, ${reading.electrons} electrons`),
        words(` read from ${this.source?.files.length ?? 0} files, ${formatBytes(reading.bytes)}. `),
      ],
      [
        words(
          `Terms: ${reading.terms.map((t) => `${t.name} ${formatOneNorm(t.oneNorm)}`).join(', ')}; constant ${reading.constant.toFixed(6)} Eh. `,
        ),
        source(`${formatCount(reading.findings.length)} findings.`),
      ],
    ];
  });
}
