import type { ChartConfiguration, Plugin, Scale } from 'chart.js';
import { formatOneNorm, normUnderHead } from '../figures/figures';
import { drawText, FONT, type Palette } from './palette';

export interface TotalsModel {
  readonly rows: readonly {
    readonly word: string;
    readonly lambda: number;
    readonly floor: number | null;
    readonly selected: boolean;
  }[];
}

export interface PartsModel {
  readonly rows: readonly { readonly word: string; readonly colour: string; readonly hartree: number }[];
}

const LABELS = 124;

/** Labels in a column of fixed width; no room above and below, since the first and last row are half a row from the edge. */
function fitLabels(axis: Scale): void {
  axis.width = LABELS;
  axis.paddingTop = 0;
  axis.paddingBottom = 0;
}

const FIGURES = 62;

/** A total this many times the least one is off the scale: its bar is broken and its figure printed. */
const OFF_SCALE = 4;

/** Totals of λ as bars from 0, with the floor of each row across it: what sticks out is what is left to win. */
export function totalsChart(model: TotalsModel, palette: Palette): ChartConfiguration {
  const least = Math.min(...model.rows.map((r) => r.lambda));
  const onScale = model.rows.map((r) => r.lambda).filter((v) => v <= OFF_SCALE * least);
  const end = Math.max(...onScale, ...model.rows.map((r) => r.floor ?? 0));
  const marks: Plugin = {
    id: 'marks',
    afterDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      const halo = palette('--sheet');
      const rowHeight = chartArea.height / model.rows.length;
      model.rows.forEach((row, at) => {
        const y = scales.y!.getPixelForValue(at);
        const broken = row.lambda > end;
        const x = scales.x!.getPixelForValue(Math.min(row.lambda, end));
        if (broken) {
          ctx.save();
          ctx.strokeStyle = halo;
          ctx.lineWidth = 3;
          for (const back of [10, 16]) {
            ctx.beginPath();
            ctx.moveTo(x - back - 2, y + 6);
            ctx.lineTo(x - back + 2, y - 6);
            ctx.stroke();
          }
          ctx.restore();
        }
        drawText(ctx, normUnderHead(row.lambda), x + 6, y, {
          colour: palette('--ink'),
          halo,
          weight: row.selected ? 650 : 480,
        });
        if (row.floor) {
          const at0 = scales.x!.getPixelForValue(row.floor);
          ctx.save();
          ctx.fillStyle = halo;
          ctx.fillRect(at0 - 2.5, y - rowHeight / 2, 5, rowHeight);
          ctx.fillStyle = palette('--accent');
          ctx.fillRect(at0 - 1, y - rowHeight / 2, 2, rowHeight);
          ctx.restore();
        }
      });
      const floors = new Set(model.rows.flatMap((r) => (r.floor ? [r.floor] : [])));
      if (floors.size === 0) return;
      // One figure where the rows share a floor; else each row shows its own line and the head says only what it is.
      const [floor] = floors;
      const words = floors.size === 1 ? `floor ${normUnderHead(floor!)}` : 'floors';
      const x = scales.x!.getPixelForValue(Math.max(...floors));
      drawText(ctx, words, Math.min(x, chartArea.right - 20), 7, {
        colour: palette('--ink'),
        halo,
        align: 'center',
      });
    },
  };
  const config: ChartConfiguration<'bar', { x: number; y: number }[]> = {
    type: 'bar',
    data: {
      labels: model.rows.map((r) => r.word),
      datasets: [
        {
          data: model.rows.map((r, y) => ({ x: Math.min(r.lambda, end), y })),
          backgroundColor: model.rows.map((r) => palette(r.selected ? '--accent' : '--rule2')),
          barThickness: 6,
        },
      ],
    },
    options: {
      indexAxis: 'y',
      parsing: false,
      layout: { padding: { top: 16, right: FIGURES } },
      scales: {
        x: { type: 'linear', min: 0, max: end, display: false },
        y: {
          type: 'category',
          border: { display: false },
          grid: { display: false },
          ticks: {
            color: (c) => palette(model.rows[c.index]?.selected ? '--ink' : '--ink'),
            font: (c) => ({
              family: FONT,
              size: 12.5,
              weight: model.rows[c.index]?.selected ? 650 : 480,
            }),
            autoSkip: false,
            padding: 6,
          },
          afterFit: fitLabels,
        },
      },
      plugins: { legend: { display: false }, tooltip: { enabled: false } },
    },
    plugins: [marks as Plugin<'bar'>],
  };
  return config as unknown as ChartConfiguration;
}

/** Parts of one λ as dots on a logarithmic axis: they differ by powers of ten and are never stacked. */
export function partsChart(model: PartsModel, palette: Palette): ChartConfiguration {
  const values = model.rows.map((r) => r.hartree);
  const low = 10 ** Math.floor(Math.log10(Math.min(...values)) - 0.001);
  const high = 10 ** Math.ceil(Math.log10(Math.max(...values)) + 0.001);
  const stems: Plugin = {
    id: 'stems',
    beforeDatasetsDraw(chart) {
      const { ctx, scales, chartArea } = chart;
      model.rows.forEach((row, at) => {
        const y = scales.y!.getPixelForValue(at);
        ctx.strokeStyle = palette(row.colour);
        ctx.lineWidth = 1.6;
        ctx.beginPath();
        ctx.moveTo(chartArea.left, y);
        ctx.lineTo(scales.x!.getPixelForValue(row.hartree), y);
        ctx.stroke();
      });
    },
    afterDatasetsDraw(chart) {
      const { ctx, scales } = chart;
      model.rows.forEach((row, at) => {
        drawText(
          ctx,
          formatOneNorm(row.hartree),
          scales.x!.getPixelForValue(row.hartree) + 9,
          scales.y!.getPixelForValue(at),
          {
            colour: palette('--ink'),
            halo: palette('--sheet'),
          },
        );
      });
    },
  };
  const config: ChartConfiguration<'scatter'> = {
    type: 'scatter',
    data: {
      datasets: [
        {
          data: model.rows.map((r, y) => ({ x: r.hartree, y })),
          pointBackgroundColor: model.rows.map((r) => palette(r.colour)),
          pointBorderWidth: 0,
          pointRadius: 4.5,
          clip: false,
        },
      ],
    },
    options: {
      parsing: false,
      layout: { padding: { top: 2, right: FIGURES } },
      scales: {
        x: {
          type: 'logarithmic',
          min: low,
          max: high,
          border: { display: false },
          grid: {
            color: (c) => (isPower(Number(c.tick?.value)) ? palette('--rule') : 'transparent'),
            tickLength: 0,
          },
          ticks: {
            color: palette('--ink2'),
            font: { family: FONT, size: 12 },
            maxRotation: 0,
            autoSkip: false,
            // Words of six decades and more would touch: every other one then.
            callback: (value) => {
              const decade = Math.round(Math.log10(Number(value)));
              const crowded = Math.log10(high / low) > 4.5 && decade % 2 !== 0;
              return isPower(Number(value)) && !crowded ? powerWords(Number(value)) : '';
            },
          },
        },
        y: {
          type: 'linear',
          reverse: true,
          min: -0.5,
          max: model.rows.length - 0.5,
          border: { display: false },
          grid: { display: false },
          afterBuildTicks: (axis) => {
            axis.ticks = model.rows.map((_, value) => ({ value }));
          },
          ticks: {
            color: palette('--ink'),
            font: { family: FONT, size: 12.5 },
            padding: 6,
            autoSkip: false,
            callback: (value) => model.rows[Number(value)]?.word ?? '',
          },
          afterFit: fitLabels,
        },
      },
      plugins: { legend: { display: false }, tooltip: { enabled: false } },
    },
    plugins: [stems as Plugin<'scatter'>],
  };
  return config as unknown as ChartConfiguration;
}

export function isPower(value: number): boolean {
  const log = Math.log10(value);
  return Math.abs(log - Math.round(log)) < 1e-9;
}

/** 10ⁿ with raised digits. */
export function powerWords(value: number): string {
  const raised = '⁰¹²³⁴⁵⁶⁷⁸⁹';
  const power = Math.round(Math.log10(value));
  if (power === 0) return '1';
  const digits = [...String(Math.abs(power))].map((d) => raised[Number(d)]).join('');
  return `10${power < 0 ? '⁻' : ''}${digits}`;
}
