import { formatSignificant } from '../figures/figures';

/** Colours of the page as the charts need them: resolved, because a canvas knows no custom properties. */
export type Palette = (name: string) => string;

export function readPalette(): Palette {
  const style = getComputedStyle(document.documentElement);
  return (name) => style.getPropertyValue(name).trim();
}

/** Calls `listener` whenever the system changes between light and dark. @returns a function that stops it. */
export function onSchemeChange(listener: () => void): () => void {
  const query = matchMedia('(prefers-color-scheme: dark)');
  query.addEventListener('change', listener);
  return () => query.removeEventListener('change', listener);
}

export const FONT = '"Ysabeau Office Variable", system-ui, sans-serif';

/** Text over a chart: a wide stroke in the sheet's colour first, so that grid lines do not cross it. */
export function drawText(
  ctx: CanvasRenderingContext2D,
  text: string,
  x: number,
  y: number,
  options: { colour: string; halo: string; size?: number; weight?: number; align?: CanvasTextAlign },
): void {
  ctx.save();
  ctx.font = `${options.weight ?? 480} ${options.size ?? 12.5}px ${FONT}`;
  ctx.textAlign = options.align ?? 'left';
  ctx.textBaseline = 'middle';
  ctx.lineJoin = 'round';
  ctx.lineWidth = 4;
  ctx.strokeStyle = options.halo;
  ctx.strokeText(text, x, y);
  ctx.fillStyle = options.colour;
  ctx.fillText(text, x, y);
  ctx.restore();
}

/** A tick of a logarithmic axis with no more digits than it needs: 800, 5×10⁹, 1.5×10¹⁰. */
export function tickWords(value: number): string {
  if (value < 1e6) return formatSignificant(value, value < 1 ? 1 : 6).replace(/\.0+$/, '');
  return formatSignificant(value, 2).replace('.0×', '×').replace(/^1×/, '');
}
