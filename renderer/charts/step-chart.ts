import type { ChartConfiguration, Plugin } from 'chart.js';
import { formatCount } from '../figures/figures';
import { BAR, LABEL } from '../ledger/geometry';
import { drawText, FONT, type Palette } from './palette';

/** One bar: where it stands under its column, and its parts from the base up (null: no figures yet). */
export interface StepBar {
  readonly name: string;
  readonly centre: number;
  readonly parts: readonly number[] | null;
  /** Printed in the place of a missing bar. */
  readonly word: string;
}

export interface StepModel {
  readonly width: number;
  readonly bars: readonly StepBar[];
  /** Indices of the bars of each pair. */
  readonly pairs: readonly (readonly [number, number])[];
  readonly focused: string | null;
  /** Left and right edge of the selected column, and the words above it. */
  readonly selected: { readonly left: number; readonly right: number; readonly words: string } | null;
  readonly colours: readonly string[];
}

const sum = (parts: readonly number[]) => parts.reduce((a, b) => a + b, 0);

/** Ribbons between the bars of a pair, hair lines round the selected column, a frame round the focused bar. */
function marks(model: StepModel, palette: Palette): Plugin {
  return {
    id: 'marks',
    beforeDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      const y = scales.y!;
      ctx.save();
      for (const [a, b] of model.pairs) {
        const left = model.bars[a]!;
        const right = model.bars[b]!;
        if (!left.parts || !right.parts) continue;
        let lowLeft = 0;
        let lowRight = 0;
        left.parts.forEach((value, part) => {
          const highLeft = lowLeft + value;
          const highRight = lowRight + right.parts![part]!;
          ctx.globalAlpha = 0.16;
          ctx.fillStyle = palette(model.colours[part]!);
          ctx.beginPath();
          ctx.moveTo(left.centre + BAR / 2, y.getPixelForValue(lowLeft));
          ctx.lineTo(left.centre + BAR / 2, y.getPixelForValue(highLeft));
          ctx.lineTo(right.centre - BAR / 2, y.getPixelForValue(highRight));
          ctx.lineTo(right.centre - BAR / 2, y.getPixelForValue(lowRight));
          ctx.fill();
          lowLeft = highLeft;
          lowRight = highRight;
        });
      }
      ctx.restore();
      if (!model.selected) return;
      ctx.save();
      ctx.strokeStyle = palette('--accent');
      ctx.lineWidth = 1;
      for (const x of [model.selected.left + 0.5, model.selected.right - 0.5]) {
        ctx.beginPath();
        ctx.moveTo(x, 0);
        ctx.lineTo(x, chartArea.bottom);
        ctx.stroke();
      }
      ctx.restore();
    },
    afterDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      const y = scales.y!;
      ctx.save();
      ctx.strokeStyle = palette('--ink');
      ctx.beginPath();
      ctx.moveTo(LABEL, chartArea.bottom + 0.5);
      ctx.lineTo(model.width, chartArea.bottom + 0.5);
      ctx.stroke();
      for (const bar of model.bars) {
        if (bar.parts) continue;
        ctx.strokeStyle = palette('--rule2');
        ctx.setLineDash([3, 3]);
        ctx.strokeRect(bar.centre - BAR / 2 + 0.5, chartArea.bottom - 60.5, BAR - 1, 60);
        ctx.setLineDash([]);
        const halo = palette('--sheet');
        drawText(ctx, bar.word, bar.centre, chartArea.bottom - 30, {
          colour: palette('--ink2'),
          halo,
          align: 'center',
        });
      }
      const bar = model.bars.find((b) => b.name === model.focused);
      if (bar?.parts) {
        const top = y.getPixelForValue(sum(bar.parts));
        ctx.strokeStyle = palette('--accent');
        ctx.lineWidth = 2;
        ctx.strokeRect(bar.centre - BAR / 2 - 3, top - 3, BAR + 6, chartArea.bottom - top + 4);
      }
      if (model.selected?.words) {
        const tops = model.bars
          .filter((b) => b.parts && b.centre > model.selected!.left && b.centre < model.selected!.right)
          .map((b) => y.getPixelForValue(sum(b.parts!)));
        const middle = (model.selected.left + model.selected.right) / 2;
        drawText(ctx, model.selected.words, middle, Math.max(8, Math.min(...tops) - 11), {
          colour: palette('--ink2'),
          halo: palette('--sheet'),
          align: 'center',
        });
      }
      ctx.restore();
    },
  };
}

/** Stacked cost of one step, each bar exactly under its column: the plot's pixels are the table's. */
export function stepChart(model: StepModel, palette: Palette): ChartConfiguration {
  const known = model.bars.some((b) => b.parts);
  const highest = Math.max(1, ...model.bars.map((b) => (b.parts ? sum(b.parts) : 0)));
  const config: ChartConfiguration<'bar', { x: number; y: number }[]> = {
    type: 'bar',
    data: {
      datasets: model.colours.map((colour, part) => ({
        data: model.bars.flatMap((b) => (b.parts ? [{ x: b.centre, y: b.parts[part]! }] : [])),
        backgroundColor: palette(colour),
        barThickness: BAR,
        grouped: false,
        stack: 'step',
        // A part too small for a pixel is still shown; its figure stands in the legend.
        minBarLength: 1,
      })),
    },
    options: {
      parsing: false,
      layout: { padding: { top: 10, bottom: 4, left: 0, right: 0 } },
      scales: {
        x: { type: 'linear', min: LABEL, max: model.width, display: false, offset: false },
        y: {
          type: 'linear',
          beginAtZero: true,
          // Room for the words above the selected pair.
          max: highest * 1.14,
          border: { display: false },
          grid: { display: known, color: palette('--rule'), tickLength: 0 },
          ticks: {
            color: palette('--ink2'),
            font: { family: FONT, size: 12 },
            padding: 6,
            maxTicksLimit: 5,
            includeBounds: false,
            display: known,
            callback: (value) => formatCount(Number(value)),
          },
          afterFit: (axis) => {
            axis.width = LABEL;
          },
        },
      },
      plugins: { legend: { display: false }, tooltip: { enabled: false } },
    },
    plugins: [marks(model, palette) as Plugin<'bar'>],
  };
  return config as unknown as ChartConfiguration;
}
