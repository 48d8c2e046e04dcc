import type { ChartConfiguration, Plugin } from 'chart.js';
import { logAxis } from './front-chart';
import { drawText, FONT, type Palette } from './palette';

export interface TargetModel {
  /** Unit of the horizontal axis, as it is written. */
  readonly unit: string;
  readonly lines: readonly {
    readonly word: string;
    readonly selected: boolean;
    readonly points: readonly { readonly x: number; readonly y: number }[];
  }[];
  /** The own target, and its words. */
  readonly own: { readonly value: number; readonly words: string };
  /** Chemical accuracy in the axis' unit. */
  readonly chemical: number;
}

const DASHES = [[], [7, 3], [2, 3], [9, 3, 2, 3], [4, 2]];

/** Toffoli of one run over the target, both logarithmic: the selected form solid, the others dashed. */
export function targetChart(model: TargetModel, palette: Palette): ChartConfiguration {
  const xs = model.lines.flatMap((l) => l.points.map((p) => p.x));
  const ys = model.lines.flatMap((l) => l.points.map((p) => p.y));
  const x = { min: Math.min(...xs), max: Math.max(...xs) };
  const y = { min: Math.min(...ys) / 1.3, max: Math.max(...ys) * 1.3 };
  const marks: Plugin = {
    id: 'marks',
    afterDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      const px = (v: number) => scales.x!.getPixelForValue(v);
      const ink = { colour: palette('--ink'), halo: palette('--sheet') };
      ctx.save();
      ctx.strokeStyle = palette('--accent');
      ctx.lineWidth = 2;
      ctx.beginPath();
      ctx.moveTo(px(model.own.value), chartArea.top);
      ctx.lineTo(px(model.own.value), chartArea.bottom);
      ctx.stroke();
      const selected = model.lines.find((l) => l.selected);
      const at = selected?.points.find((p) => p.x >= model.own.value);
      if (at) {
        ctx.fillStyle = palette('--accent');
        ctx.beginPath();
        ctx.arc(px(model.own.value), scales.y!.getPixelForValue(at.y), 4, 0, 2 * Math.PI);
        ctx.fill();
      }
      const chemical = px(model.chemical);
      if (chemical > chartArea.left && chemical < chartArea.right) {
        ctx.strokeStyle = palette('--rule2');
        ctx.lineWidth = 1;
        ctx.beginPath();
        ctx.moveTo(chemical, chartArea.top + 22);
        ctx.lineTo(chemical, chartArea.bottom);
        ctx.stroke();
        drawText(ctx, 'chemical accuracy', chemical + 4, chartArea.top + 18, { ...ink, align: 'right' });
      }
      drawText(ctx, model.own.words, px(model.own.value) + 7, chartArea.top + 4, ink);
      const rows = model.lines.slice(0, 5);
      // The own target's line may run behind the names.
      ctx.font = `480 12.5px ${FONT}`;
      const width = Math.max(...rows.map((l) => ctx.measureText(l.word).width));
      ctx.fillStyle = palette('--sheet');
      ctx.fillRect(chartArea.left + 4, chartArea.bottom - 2 - 12 * rows.length, width + 36, 12 * rows.length);
      rows.forEach((line, row) => {
        const baseline = chartArea.bottom - 8 - 12 * (rows.length - 1 - row);
        ctx.strokeStyle = palette(line.selected ? '--accent' : '--ink');
        ctx.lineWidth = line.selected ? 2.2 : 1.3;
        ctx.setLineDash(line.selected ? [] : DASHES[1 + (row % 4)]!);
        ctx.beginPath();
        ctx.moveTo(chartArea.left + 8, baseline);
        ctx.lineTo(chartArea.left + 30, baseline);
        ctx.stroke();
        drawText(ctx, line.word, chartArea.left + 35, baseline, ink);
      });
      ctx.restore();
    },
  };
  const config: ChartConfiguration<'line', { x: number; y: number }[]> = {
    type: 'line',
    data: {
      datasets: model.lines.map((line, at) => ({
        data: [...line.points],
        borderColor: palette(line.selected ? '--accent' : '--ink'),
        borderWidth: line.selected ? 2.2 : 1.3,
        borderDash: line.selected ? [] : DASHES[1 + (at % 4)]!,
        pointRadius: 0,
        order: line.selected ? 0 : 1,
      })),
    },
    options: {
      parsing: false,
      font: { family: FONT },
      layout: { padding: { top: 6, right: 8 } },
      scales: { x: logAxis(x, palette, 'x'), y: logAxis(y, palette, 'y') },
      plugins: { legend: { display: false }, tooltip: { enabled: false } },
    },
    plugins: [marks as Plugin<'line'>],
  };
  return config as unknown as ChartConfiguration;
}
