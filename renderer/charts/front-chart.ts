import type { ChartConfiguration, Plugin } from 'chart.js';
import { formatCount } from '../figures/figures';
import { drawText, FONT, type Palette, tickWords } from './palette';

export interface FrontPoint {
  readonly name: string;
  readonly qubits: number;
  readonly toffoli: number;
  /** Full mark: swap layers; hollow: spin in the index; square: one form. */
  readonly mark: 'index' | 'swap' | 'single';
}

export interface FrontModel {
  readonly points: readonly FrontPoint[];
  /** Indices of the two points of a pair, joined by a stem; the word stands beside it. */
  readonly groups: readonly { readonly word: string; readonly members: readonly number[] }[];
  readonly cap: number | null;
  readonly focused: string | null;
}

/** Corners of the stair below which nothing of the compared lies: ascending qubits, descending Toffoli. */
export function stair(
  points: readonly { qubits: number; toffoli: number }[],
): { qubits: number; toffoli: number }[] {
  const corners: { qubits: number; toffoli: number }[] = [];
  for (const point of [...points].sort((a, b) => a.qubits - b.qubits || a.toffoli - b.toffoli)) {
    const last = corners[corners.length - 1];
    if (!last || point.toffoli < last.toffoli) corners.push({ qubits: point.qubits, toffoli: point.toffoli });
  }
  return corners;
}

interface Box {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

const boxAround = (x: number, y: number, dx: number, dy: number): Box => ({
  left: x - dx,
  right: x + dx,
  top: y - dy,
  bottom: y + dy,
});

const overlap = (a: Box, b: Box): boolean =>
  a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;

/** Least and largest of the values with room at both ends of a logarithmic axis. */
function range(values: readonly number[], room: number): { min: number; max: number } {
  return { min: Math.min(...values) / room, max: Math.max(...values) * room };
}

const DIGITS = [
  [1],
  [1, 2, 5],
  [1, 1.5, 2, 3, 4, 6, 8],
  [1, 1.2, 1.4, 1.6, 1.8, 2, 2.5, 3, 3.5, 4, 5, 6, 7, 8, 9],
];

/** Round ticks inside a logarithmic range, from the coarsest series that gives at least three. */
export function roundTicks(min: number, max: number): number[] {
  let ticks: number[] = [];
  for (const digits of DIGITS) {
    ticks = [];
    for (let power = Math.floor(Math.log10(min)); power <= Math.log10(max); power++) {
      for (const digit of digits) {
        const value = digit * 10 ** power;
        if (value >= min && value <= max) ticks.push(value);
      }
    }
    if (ticks.length >= 3) break;
  }
  return ticks;
}

export function frontChart(model: FrontModel, palette: Palette): ChartConfiguration {
  const x = range([...model.points.map((p) => p.qubits), ...(model.cap ? [model.cap] : [])], 1.35);
  const y = range(
    model.points.map((p) => p.toffoli),
    1.5,
  );
  const marks: Plugin = {
    id: 'marks',
    beforeDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      const px = (v: number) => scales.x!.getPixelForValue(v);
      const py = (v: number) => scales.y!.getPixelForValue(v);
      ctx.save();
      if (model.cap !== null) {
        const at = px(model.cap);
        ctx.beginPath();
        ctx.rect(at, chartArea.top, chartArea.right - at, chartArea.height);
        ctx.clip();
        ctx.strokeStyle = palette('--rule');
        ctx.lineWidth = 1;
        for (let c = at - chartArea.height; c < chartArea.right; c += 7) {
          ctx.beginPath();
          ctx.moveTo(c, chartArea.bottom);
          ctx.lineTo(c + chartArea.height, chartArea.top);
          ctx.stroke();
        }
        ctx.restore();
        ctx.save();
        ctx.strokeStyle = palette('--warn');
        ctx.lineWidth = 1.5;
        ctx.beginPath();
        ctx.moveTo(at, chartArea.top);
        ctx.lineTo(at, chartArea.bottom);
        ctx.stroke();
      }
      ctx.strokeStyle = palette('--accent');
      ctx.lineWidth = 1.6;
      ctx.lineCap = 'round';
      ctx.setLineDash([1, 4]);
      ctx.beginPath();
      let previous: number | null = null;
      for (const corner of stair(model.points)) {
        ctx.lineTo(px(corner.qubits), previous === null ? chartArea.top : previous);
        ctx.lineTo(px(corner.qubits), py(corner.toffoli));
        previous = py(corner.toffoli);
      }
      if (previous !== null) ctx.lineTo(chartArea.right, previous);
      ctx.stroke();
      ctx.setLineDash([]);
      ctx.strokeStyle = palette('--ink2');
      for (const { members } of model.groups) {
        if (members.length < 2) continue;
        const [a, b] = members.map((m) => model.points[m]!);
        ctx.beginPath();
        ctx.moveTo(px(a!.qubits), py(a!.toffoli));
        ctx.lineTo(px(b!.qubits), py(b!.toffoli));
        ctx.stroke();
      }
      ctx.restore();
    },
    afterDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      const px = (v: number) => scales.x!.getPixelForValue(v);
      const py = (v: number) => scales.y!.getPixelForValue(v);
      const ink = { colour: palette('--ink'), halo: palette('--sheet') };
      ctx.font = `480 12.5px ${FONT}`;
      const marks = model.points.map((p) => boxAround(px(p.qubits), py(p.toffoli), 5, 5));
      const taken: Box[] = [...marks];
      for (const { word, members } of model.groups) {
        const width = ctx.measureText(word).width;
        const places = members.flatMap((m) => {
          const { qubits, toffoli } = model.points[m]!;
          const at = { x: px(qubits), y: py(toffoli) };
          return [
            boxAround(at.x - 9 - width / 2, at.y, width / 2, 6),
            boxAround(at.x + 9 + width / 2, at.y, width / 2, 6),
            boxAround(at.x - 9 - width / 2, at.y - 9, width / 2, 6),
            boxAround(at.x + 9 + width / 2, at.y + 9, width / 2, 6),
          ];
        });
        const inside = (b: Box) =>
          b.left >= chartArea.left && b.right <= chartArea.right && b.bottom <= chartArea.bottom;
        const place = places.find((b) => inside(b) && !taken.some((t) => overlap(t, b))) ?? places[0]!;
        taken.push(place);
        drawText(ctx, word, place.left, (place.top + place.bottom) / 2, ink);
      }
      if (model.cap !== null)
        drawText(ctx, `cap ${formatCount(model.cap)}`, px(model.cap) + 5, chartArea.top + 7, ink);
    },
  };
  const config: ChartConfiguration<'scatter'> = {
    type: 'scatter',
    data: {
      datasets: [
        {
          data: model.points.map((p) => ({ x: p.qubits, y: p.toffoli })),
          pointStyle: model.points.map((p) => (p.mark === 'single' ? 'rect' : 'circle')),
          pointRadius: 3.8,
          pointBorderWidth: 1.5,
          pointBorderColor: model.points.map((p) => palette(p.name === model.focused ? '--accent' : '--ink')),
          pointBackgroundColor: model.points.map((p) =>
            p.mark === 'swap' ? palette(p.name === model.focused ? '--accent' : '--ink') : palette('--sheet'),
          ),
          clip: false,
        },
      ],
    },
    options: {
      parsing: false,
      layout: { padding: { top: 6, right: 8 } },
      scales: { x: logAxis(x, palette, 'x'), y: logAxis(y, palette, 'y') },
      plugins: { legend: { display: false }, tooltip: { enabled: false } },
    },
    plugins: [marks as Plugin<'scatter'>],
  };
  return config as unknown as ChartConfiguration;
}

/** A logarithmic axis with few round ticks. */
export function logAxis({ min, max }: { min: number; max: number }, palette: Palette, side: 'x' | 'y') {
  return {
    type: 'logarithmic' as const,
    min,
    max,
    border: { display: side === 'x', color: palette('--rule2') },
    grid: { color: side === 'y' ? palette('--rule') : 'transparent', tickLength: 4 },
    afterBuildTicks: (axis: { ticks: { value: number }[] }) => {
      axis.ticks = roundTicks(min, max).map((value) => ({ value }));
    },
    ticks: {
      color: palette('--ink2'),
      font: { family: FONT, size: 12 },
      maxRotation: 0,
      autoSkip: false,
      callback: (value: string | number) => tickWords(Number(value)),
    },
  };
}
