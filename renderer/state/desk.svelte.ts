import type { Engine } from '../engine/engine';
import type { Ask } from '../engine/protocol';
import type { Reckoning } from '../figures/reckoning';
import type { Command, Shell } from '../shell';
import { LedgerState } from './ledger.svelte';
import { LoadState } from './load.svelte';
import { ProofState } from './proof.svelte';
import { STOPS, type Stop, type StopLine } from './stops';
import { TargetState } from './target.svelte';
import { TermsState } from './terms.svelte';
import { VariantsState } from './variants.svelte';

/** Everything the window knows: one job from files to proof. */
export class Desk {
  stop = $state<Stop>('load');
  keysOpen = $state(false);
  readonly shell: Shell;
  readonly load: LoadState;
  readonly terms: TermsState;
  readonly target = new TargetState();
  readonly variants: VariantsState;
  readonly ledger: LedgerState;
  readonly proof: ProofState;

  constructor(engine: Engine, shell: Shell) {
    this.shell = shell;
    this.load = new LoadState(engine, shell);
    this.terms = new TermsState(this.load);
    const ask = () => this.ask;
    this.variants = new VariantsState(engine, this.load, ask, () => this.target.surface);
    this.ledger = new LedgerState(this.variants, this.target, this.load);
    this.proof = new ProofState(engine, this.load, this.variants, ask);
  }

  readonly ask = $derived.by(
    (): Ask => ({
      terms: this.terms.kept,
      electrons: null,
      occupations: null,
      target: { ...this.target.target, meaning: this.target.meaning },
      threshold: this.variants.threshold.value,
      frames: this.variants.frames,
      bits: 'auto',
      overlaps: this.target.overlaps,
      qubitsMax: this.target.cap.value,
      seed: 1,
    }),
  );

  readonly lines = $derived.by(
    (): Readonly<Record<Stop, StopLine>> => ({
      load: this.load.line,
      terms: this.terms.line,
      target: this.target.line,
      variants: this.variants.line,
      ledger: this.ledger.line,
      proof: this.proof.line,
    }),
  );

  readonly reckoning = $derived.by((): Reckoning => this[this.stop].reckoning);

  readonly title = $derived.by(
    () => this.load.reading?.title || this.load.source?.name || 'No integrals yet',
  );

  /** `8 orbitals, 8 electrons, one level to 5 cm⁻¹ rms`. */
  readonly asked = $derived.by(() => {
    const { reading } = this.load;
    const system = reading ? `${reading.orbitals} orbitals, ${reading.electrons} electrons, ` : '';
    return `${system}${this.target.asked}`;
  });

  readonly busy = $derived.by(() => this.variants.busy || this.proof.busy || this.load.phase === 'reading');

  goTo(stop: Stop): void {
    this.stop = stop;
  }

  stopJob(): void {
    this.load.stopReading();
    this.variants.stop();
    this.proof.stop();
  }

  /** Starts the reckoning and shows where its figures will come. */
  async reckon(): Promise<void> {
    if (!this.variants.canReckon) return;
    await this.variants.reckon();
  }

  /** Reads the demo and reckons it, so that a first start shows a whole comparison. */
  async showDemo(): Promise<void> {
    await this.load.useDemo();
    if (this.load.ready) {
      this.goTo('ledger');
      await this.reckon();
    }
  }

  /** What the window does by itself at its start: the files it was given, else the demo where that was asked for. */
  async begin(): Promise<void> {
    this.shell.onCommand((command) => void this.obey(command));
    await this.load.useGiven();
    if (this.load.phase !== 'empty' && this.load.ready) {
      this.goTo('ledger');
      await this.reckon();
    }
  }

  async obey(command: Command): Promise<void> {
    const numbered = /^stop-(\d)$/.exec(command);
    if (numbered) this.goTo(STOPS[Number(numbered[1]) - 1]!);
    else if (command === 'open-files') await this.load.choose('files');
    else if (command === 'open-folder') await this.load.choose('folder');
    else if (command === 'demo') await this.load.useDemo();
    else if (command === 'reckon') await this.reckon();
    else if (command === 'copy-table') {
      this.goTo('ledger');
      this.ledger.panel = 'copy';
    } else if (command === 'stop-job') this.stopJob();
    else if (command === 'keys') this.keysOpen = true;
  }
}
