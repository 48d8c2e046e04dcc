import type { Subroutine } from '../../core/circuit/recipe';
import type { VariantEstimate } from '../../core/plan/comparison';
import { fromHartree } from '../../core/units';
import * as figures from '../figures/figures';
import { input, type Piece, type Reckoning, source, strong, words } from '../figures/reckoning';
import { columnTitle, type Entry, sideWord } from './columns';
import { lambdaParts, SERIES, seriesToffoli } from './parts';
import { type Row, type RowId, rowById, type View } from './rows';

const number = figures.formatCount;
const eh = figures.formatOneNorm;

/** Leaves of a subroutine tree with how often each runs in one step. */
export function leavesOf(tree: Subroutine, times = 1): { leaf: Subroutine; times: number }[] {
  const runs = times * (tree.times ?? 1);
  if (!tree.children?.length) return [{ leaf: tree, times: runs }];
  return tree.children.flatMap((child) => leavesOf(child, runs));
}

function join(pieces: Piece[][], by: string): Piece[] {
  return pieces.flatMap((piece, at) => (at === 0 ? piece : [words(by), ...piece]));
}

/** The dearest subroutine of the step with its formula, the figures that went in and where it is published. */
function dearest(e: VariantEstimate): Piece[] {
  if (!e.step.tree) return [];
  let best: { leaf: Subroutine; times: number } | null = null;
  for (const item of leavesOf(e.step.tree)) {
    if (!best || (item.leaf.toffoli ?? 0) * item.times > (best.leaf.toffoli ?? 0) * best.times) best = item;
  }
  const { leaf, times } = best!;
  const inputs = Object.entries(leaf.inputs ?? {}).map(([symbol, value]) => [
    input(`${symbol} = ${number(value)}`),
  ]);
  return [
    words(`Dearest: ${leaf.name}, ${times > 1 ? `${times} × ` : ''}${number(leaf.toffoli ?? 0)}`),
    ...(leaf.formula ? [words(` = ${leaf.formula}`)] : []),
    ...(inputs.length ? [words(' at '), ...join(inputs, ', ')] : []),
    words('. '),
    ...(leaf.source ? [source(leaf.source)] : []),
  ];
}

type Explain = (e: VariantEstimate, view: View) => [Piece[], Piece[]];

const EXPLAIN: Readonly<Record<RowId, Explain>> = {
  lambda: (e) => [
    [words(` = one-electron ${eh(e.lambda.oneBody)} + two-electron ${eh(e.lambda.twoBody)}. `)],
    [
      words('By part: '),
      ...join(
        lambdaParts(e).map((p) => [words(`${p.word} ${eh(p.hartree)}`)]),
        ' + ',
      ),
      words('. '),
      source('λ is the sum of all weights of the block encoding: the walk resolves energies relative to it.'),
    ],
  ],
  floor: (e) => {
    const { value, sector, low, high } = e.spectralFloor;
    const floor = value ?? low;
    if (!floor) return [[words(': the floor is not known for this size.')], []];
    const where = sector === 'eta' ? 'at this electron number' : 'over all electron numbers';
    const known = value === null ? `between ${eh(floor)} and ${high === null ? 'λ' : eh(high)}` : 'exact';
    return [
      [words(' = λ '), input(eh(e.lambda.total)), words(' / floor '), input(eh(floor)), words('. ')],
      [
        words(`The floor is half the width of the spectrum ${where}, ${known}. `),
        source('No block encoding of the same operator can have a smaller λ.'),
      ],
    ];
  },
  rows: (e) => [
    [
      words(
        `: ${number(e.factors)} items of the outer preparation, ${number(e.rows)} table rows of SELECT. `,
      ),
    ],
    [source('A row is one eigenpair of one factor; the look-up and the preparation grow with the rows.')],
  ],
  bits: (e) => [
    [
      words(
        `: ${e.bits.keep} bits for each weight of the alias table, ${e.bits.rotation} for each rotation angle. `,
      ),
    ],
    [source('The error budget sets them: one more bit halves that share of the error.')],
  ],
  residual: (e, view) => [
    [
      words(` ≤ one-norm of what truncation left out, `),
      input(eh(e.residual.oneNormBound)),
      words(`; Frobenius norm ${eh(e.residual.frobenius)}. `),
    ],
    [
      words(
        e.residual.energyEstimate === null
          ? 'A bound: no level moves further than this. '
          : `A bound; the estimate of the shift is ${figures.energyUnderHead(e.residual.energyEstimate, view.target)} ${figures.UNIT_WORDS[view.target.unit]}. `,
      ),
      words(
        e.residual.lowStates === null
          ? ''
          : `Low levels move against each other, or their couplings, by ${figures.energyUnderHead(e.residual.lowStates, view.target)} ${figures.UNIT_WORDS[view.target.unit]}. `,
      ),
      source('Triangle inequality over the dropped unitaries.'),
    ],
  ],
  step: (e) => [
    [
      words(' = '),
      ...join(
        SERIES.map((s) => [words(`${s.word} ${number(seriesToffoli(e, s))}`)]),
        ' + ',
      ),
      words('. '),
      source('Equal to the emitted circuit, gate by gate.'),
    ],
    dearest(e),
  ],
  t: (e) => [
    [words(': T gates beside the Toffoli; neither count contains the other. ')],
    e.step.t === 0
      ? [words('This form needs none in a step.')]
      : [source('They exchange the two Majorana kinds of a row.')],
  ],
  walk: (e, view) => [
    [
      words(' = ⌈π λ / (2 ε)⌉ with λ '),
      input(eh(e.lambda.total)),
      words(' and ε '),
      input(
        `${figures.formatSignificant(fromHartree((Math.PI * e.lambda.total) / (2 * e.walkSteps), view.target.unit), 4)} ${figures.UNIT_WORDS[view.target.unit]}`,
      ),
      words(`, the walk's share of the target `),
      input(figures.targetWords(view.target)),
      words('. '),
    ],
    [
      source(
        'ε is the standard deviation with a sine-window phase register; Babbush et al., Phys. Rev. X 8, 041015 (2018).',
      ),
    ],
  ],
  run: (e) => [
    [
      words(' = walk steps '),
      input(number(e.walkSteps)),
      words(' × Toffoli a step '),
      input(number(e.step.toffoli)),
      words('. '),
    ],
    [
      words(`Exact: ${figures.formatExactCount(e.totalToffoli)}. `),
      source('One run of phase estimation at one level, without the preparation of the start state.'),
    ],
  ],
  qubits: (e, view) => [
    [words(': the largest number alive at one time, counted by lifetimes. ')],
    view.cap === null
      ? [source('No cap is set.')]
      : [
          words(
            e.logicalQubits > view.cap
              ? `Over the cap of ${number(view.cap)} by ${number(e.logicalQubits - view.cap)}.`
              : `Within the cap of ${number(view.cap)}, ${number(view.cap - e.logicalQubits)} to spare.`,
          ),
        ],
  ],
  time: (e) => {
    if (!e.physical) return [[words(': no machine is assumed.')], []];
    const a = e.physical.assumptions;
    return [
      [
        words(
          ` on ${number(e.physical.qubits)} physical qubits at code distance ${e.physical.distance}, with error `,
        ),
        input(String(a.physicalError)),
        words(', cycle '),
        input(`${a.cycleMicroseconds} µs`),
        words(', reaction '),
        input(`${a.reactionMicroseconds} µs`),
        words(', '),
        input(`${a.factories} factories`),
        words('. '),
      ],
      [
        source(
          'An assumption throughout: surface code, Fowler & Gidney 2018; factories, Gidney & Fowler, Quantum 3, 135 (2019).',
        ),
      ],
    ];
  },
  runs: () => [
    [words(' = sum of 1 / overlap over the levels asked for. ')],
    [source('On average; a run that misses the wanted state is repeated.')],
  ],
  campaign: (e) => [
    [
      words(' = runs expected '),
      input(figures.formatSignificant(e.repetitions, 3)),
      words(' × Toffoli of one run '),
      input(number(e.totalToffoli)),
      words('. '),
    ],
    [],
  ],
  physical: (e, view) => EXPLAIN.time(e, view),
  distance: (e, view) => EXPLAIN.time(e, view),
};

/** Explains one cell of the ledger: name, value, formula with the figures put in, source. */
export function explain(rowId: RowId, entry: Entry, view: View): Reckoning {
  const row: Row = rowById(rowId);
  const place = `(${columnTitle(entry.name).toLowerCase()}, ${sideWord(entry.name)})`;
  const { estimate } = entry;
  if (!estimate) {
    const first = [strong(row.label), words(` ${place}: to come. `)];
    return [first, [words(entry.problem ? problemWords(entry) : statusWords(entry))]];
  }
  const figure = row.figure(estimate, view);
  const unit = row.unit?.(view);
  const lead = strong(
    `${row.label} ${figure ?? 'does not apply'}${unit && figure && !/[A-Za-z]$/.test(figure) ? ` ${unit}` : ''}`,
  );
  const [first, second] = figure === null ? [[], []] : EXPLAIN[rowId](estimate, view);
  const mark = row.mark?.(estimate, view);
  const line = [lead, words(` ${place}`), ...first, ...(mark ? [words(`${mark.sign} ${mark.words}. `)] : [])];
  return [line, entry.stale ? [words(`${entry.stale}. `), ...second] : second];
}

function statusWords({ status, stage, fraction, reason }: Entry): string {
  if (status === 'left-out') return `Left out: ${reason}`;
  const share = fraction === null ? '' : `, ${Math.floor(100 * fraction)} %`;
  if (status === 'running') return `Running: ${stage}${share}.`;
  if (status === 'stopped') return `Stopped${share ? ` at ${share.slice(2)}` : ''}. Reckon goes on.`;
  return status === 'waiting' ? 'Waits for its turn.' : 'Not reckoned yet.';
}

function problemWords({ problem }: Entry): string {
  const { where, found, expected, mend } = problem!;
  return `${where}: ${found}; expected ${expected}. ${mend}`;
}
