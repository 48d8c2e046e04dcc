import type { VariantEstimate } from '../../core/plan/comparison';
import { fromHartree } from '../../core/units';
import type { FrontModel, FrontPoint } from '../charts/front-chart';
import type { PartsModel, TotalsModel } from '../charts/lambda-charts';
import type { StepBar, StepModel } from '../charts/step-chart';
import type { TargetModel } from '../charts/target-chart';
import type { Ask } from '../engine/protocol';
import { signedCount, targetWords, UNIT_WORDS } from '../figures/figures';
import { CHEMICAL_ACCURACY, type Curve } from '../state/curves.svelte';
import type { Column, Entry } from './columns';
import { gridOf } from './geometry';
import { lambdaParts, SERIES, seriesToffoli } from './parts';

/** Short name of a column in a chart, with the shift only where two columns differ by nothing else. */
export function shortWord(column: Column, columns: readonly Column[]): string {
  const twin = columns.some((c) => c !== column && c.title === column.title);
  const word = column.title.toLowerCase().replace(/^triplet, /, '');
  return twin ? `${word}, ${column.note.replace('median shift', 'median')}` : word;
}

export function stepModel(columns: readonly Column[], focused: Entry | null): StepModel {
  const grid = gridOf(columns);
  const bars: StepBar[] = [];
  const pairs: [number, number][] = [];
  let selected: StepModel['selected'] = null;
  columns.forEach((column, at) => {
    const place = grid.places[at]!;
    if (column.sides.length === 2) pairs.push([bars.length, bars.length + 1]);
    column.sides.forEach((side, s) => {
      const e = side.estimate;
      bars.push({
        name: side.name,
        centre: place.centres[s]!,
        parts: e ? SERIES.map((series) => seriesToffoli(e, series)) : null,
        word: side.status === 'running' ? 'running' : side.status === 'failed' ? 'failed' : 'to come',
      });
    });
    if (column.sides.some((s) => s.name === focused?.name))
      selected = { left: place.left, right: place.left + place.width, words: pairWords(column) };
  });
  return {
    width: grid.width,
    bars,
    pairs,
    focused: focused?.name ?? null,
    selected,
    colours: SERIES.map((s) => s.colour),
  };
}

/** `rotations −2 856, layers +132`: what swap layers change inside the step. */
function pairWords({ sides }: Column): string {
  const [index, swap] = sides.map((s) => s.estimate);
  if (!index || !swap) return '';
  const change = (part: 'select.rotations' | 'select.swaps') =>
    signedCount(swap.step.parts[part] - index.step.parts[part]);
  return `rotations ${change('select.rotations')}, layers ${change('select.swaps')}`;
}

export function totalsModel(columns: readonly Column[], selected: string | null): TotalsModel {
  return {
    rows: columns.flatMap((column) => {
      const e = column.sides.find((s) => s.estimate)?.estimate;
      if (!e) return [];
      return [
        {
          word: shortWord(column, columns),
          lambda: e.lambda.total,
          floor: e.spectralFloor.value || null,
          selected: column.key === selected,
        },
      ];
    }),
  };
}

export function partsModel(entry: Entry | null): PartsModel {
  return { rows: entry?.estimate ? lambdaParts(entry.estimate) : [] };
}

export function frontModel(
  columns: readonly Column[],
  focused: string | null,
  cap: number | null,
): FrontModel {
  const points: FrontPoint[] = [];
  const groups: { word: string; members: number[] }[] = [];
  for (const column of columns) {
    const members: number[] = [];
    for (const side of column.sides) {
      if (!side.estimate) continue;
      members.push(points.length);
      points.push({
        name: side.name,
        qubits: side.estimate.logicalQubits,
        toffoli: side.estimate.totalToffoli,
        mark:
          column.sides.length === 1 ? 'single' : side.estimate.spinInSelect === 'index' ? 'index' : 'swap',
      });
    }
    if (members.length) groups.push({ word: shortWord(column, columns), members });
  }
  return { points, groups, cap, focused };
}

/** One line a column: its better side, since the two sides of a pair would lie on each other. */
export function targetModel(
  columns: readonly Column[],
  selected: string | null,
  ask: Ask,
  curveOf: (e: VariantEstimate) => Curve | null,
): TargetModel {
  const lines = columns.flatMap((column) => {
    const sides = column.sides.flatMap((s) => (s.estimate && s.stale === null ? [s.estimate] : []));
    const [first, ...others] = sides;
    if (!first) return [];
    const best = others.reduce((a, b) => (b.totalToffoli < a.totalToffoli ? b : a), first);
    const curve = curveOf(best);
    if (!curve) return [];
    const points = curve.map(({ hartree, toffoli }) => ({
      x: fromHartree(hartree, ask.target.unit),
      y: toffoli,
    }));
    return [{ word: shortWord(column, columns), selected: column.key === selected, points }];
  });
  return {
    unit: UNIT_WORDS[ask.target.unit],
    lines,
    own: { value: ask.target.value, words: `target ${targetWords(ask.target)}` },
    chemical: fromHartree(CHEMICAL_ACCURACY, ask.target.unit),
  };
}
