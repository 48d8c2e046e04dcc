/** A piece of work that a worker can run by name. Input and output must survive structured cloning. */
export interface Task<Input, Output> {
  readonly name: string;
  run(input: Input, context: JobContext): Promise<Output>;
}

/** What long work may ask of whoever runs it. */
export interface JobContext {
  /** Seed of every random choice in the job; the same seed gives the same result. */
  readonly seed: number;
  /** `done` never decreases within a stage; `total` is null while unknown. Cheap to call often. */
  report(stage: string, done: number, total: number | null): void;
  /**
   * Lets other messages in (at most every 16 ms) and throws {@link Cancelled} once a stop was asked for.
   * Call it at block borders, so that a stop is heard within 200 ms.
   */
  checkpoint(): Promise<void>;
  /**
   * Runs `task` once per input, on workers where there are any, and returns the outputs in input order.
   * The result does not depend on the number of workers.
   */
  map<Input, Output>(task: Task<Input, Output>, inputs: readonly Input[]): Promise<Output[]>;
}

/** The job was stopped on request. Stopped is not failed. */
export class Cancelled extends Error {
  override readonly name = 'Cancelled';
  constructor() {
    super('stopped on request');
  }
}

/** A context that runs everything in place and reports to no one. */
export function inlineContext(seed = 1): JobContext {
  const context: JobContext = {
    seed,
    report() {},
    async checkpoint() {},
    async map(task, inputs) {
      const outputs = [];
      for (const input of inputs) outputs.push(await task.run(input, context));
      return outputs;
    },
  };
  return context;
}
