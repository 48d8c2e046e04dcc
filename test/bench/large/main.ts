import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import { runStages, type StageTimes } from './stages';

/*
 * The large set against what a user would write with NumPy and LAPACK. Both run alternately, each time in a fresh
 * process; the ratio is that of the best times. Usage:
 *
 *     npm run bench -- large --against ../shared/bench/baseline_numpy.py [--data DIR] [--rounds 3] [--workers 2]
 */

const LABELS = {
  read: 'read FCIDUMP and arrays',
  coulomb: 'Coulomb factors',
  inner: 'inner eigenvalues',
  spinOrbit: 'spin–orbit SVD with eigenvalues',
} as const;
type Stage = keyof typeof LABELS;
const STAGES = Object.keys(LABELS) as Stage[];

/** What the baseline calls its stages; its arrays are part of reading. */
const BASELINE: Readonly<Record<Stage, readonly string[]>> = {
  read: ['read FCIDUMP', 'arrays'],
  coulomb: ['eigh supermatrix'],
  inner: ['inner eigen'],
  spinOrbit: ['SVD of spin-orbit blocks + eigen'],
};

interface Run {
  readonly stages: Readonly<Record<Stage, number>>;
  readonly peakMiB: number;
  readonly note: string;
}

const total = (run: Run): number => STAGES.reduce((sum, stage) => sum + run.stages[stage], 0);

function runOurs(data: string, workers: number): Run {
  const script = fileURLToPath(import.meta.url);
  const found = spawnSync(process.execPath, [script, '--once', '--data', data, '--workers', `${workers}`], {
    encoding: 'utf8',
  });
  if (found.status !== 0) throw new Error(`run failed: ${found.stderr}`);
  const times = JSON.parse(found.stdout) as StageTimes;
  const { peakMiB, factors, triples, lambda } = times;
  const note = `${factors} factors, λ ${lambda.coulomb.toFixed(3)} Eh; ${triples} triples, λ ${lambda.spinOrbit.toFixed(6)} Eh`;
  return { stages: times, peakMiB, note };
}

function runBaseline(script: string, data: string): Run {
  const found = spawnSync('python3', [script, data], { encoding: 'utf8' });
  if (found.status !== 0) throw new Error(`${script} failed: ${found.stderr}`);
  const line = found.stdout.trim();
  const seconds = (name: string): number => {
    const value = line.match(new RegExp(`'${name.replace(/[+]/g, '\\+')}': ([\\d.]+)`))?.[1];
    if (value === undefined) throw new Error(`${script} printed no time for "${name}": ${line}`);
    return Number(value);
  };
  const stages = Object.fromEntries(
    STAGES.map((stage) => [stage, BASELINE[stage].reduce((sum, name) => sum + seconds(name), 0)]),
  ) as Record<Stage, number>;
  return {
    stages,
    peakMiB: Number(line.match(/peak MiB (\d+)/)?.[1] ?? Number.NaN),
    note: line.match(/lambda .*rows \d+/)?.[0] ?? '',
  };
}

function print(name: string, run: Run): void {
  const cells = STAGES.map((stage) => `${LABELS[stage]} ${run.stages[stage].toFixed(2)}`);
  process.stdout.write(
    `${name.padEnd(9)} ${cells.join(' · ')} · sum ${total(run).toFixed(2)} s · peak ${run.peakMiB.toFixed(0)} MiB\n`,
  );
}

export async function run(args: readonly string[]): Promise<void> {
  const { values } = parseArgs({
    args: [...args],
    options: {
      against: { type: 'string' },
      data: { type: 'string', default: join('..', 'shared', 'data', 'thiochromone_sto3g_50o') },
      rounds: { type: 'string', default: '3' },
      workers: { type: 'string', default: '2' },
      once: { type: 'boolean', default: false },
    },
  });
  const { data, against } = values;
  const workers = Number(values.workers);
  if (!existsSync(data)) throw new Error(`${data}: no such folder; give the large data set with --data`);
  if (values.once) {
    process.stdout.write(`${JSON.stringify(await runStages(data, workers))}\n`);
    return;
  }
  const ours: Run[] = [];
  const theirs: Run[] = [];
  for (let round = 0; round < Number(values.rounds); round++) {
    if (against !== undefined) {
      theirs.push(runBaseline(against, data));
      print('baseline', theirs.at(-1)!);
    }
    ours.push(runOurs(data, workers));
    print('this', ours.at(-1)!);
  }
  process.stdout.write(`this      ${ours[0]!.note}\n`);
  if (against === undefined) return;
  process.stdout.write(`baseline  ${theirs[0]!.note}\n`);
  const best = (runs: readonly Run[], figure: (run: Run) => number): number => Math.min(...runs.map(figure));
  for (const stage of STAGES) {
    const [a, b] = [best(ours, (r) => r.stages[stage]), best(theirs, (r) => r.stages[stage])];
    process.stdout.write(
      `${LABELS[stage].padEnd(32)} ${a.toFixed(2)} s / ${b.toFixed(2)} s = ${(a / b).toFixed(2)}\n`,
    );
  }
  const [a, b] = [best(ours, total), best(theirs, total)];
  process.stdout.write(
    `${'sum, best of each'.padEnd(32)} ${a.toFixed(2)} s / ${b.toFixed(2)} s = ${(a / b).toFixed(2)}\n`,
  );
}

await run(process.argv.slice(2));
