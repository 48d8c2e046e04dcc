import type { SpinorKind, SpinorRow } from '../../encode';
import { angleStep, roundedVector, roundVector } from '../squares/rounded-vector';

/**
 * A row rounded to angle numbers: w = r_p e^{iβ_p} (cos θ_p, e^{iδ_p} sin θ_p), r real over the orbitals. r stands on
 * half steps; β, θ and δ, all modulo π since r has signs, on whole steps: a row without them is met exactly.
 *
 * Axial rows may have coarser steps, 2^m of the others: the upper bits of r's numbers, in the middle of such a step,
 * and those of β.
 */
export interface RoundedSpinorRow {
  /** N − 1 numbers of r. */
  readonly chain: Uint32Array;
  /** β of all orbitals but the last; none in a real row. */
  readonly phases: Uint32Array;
  /** θ, δ of each orbital in turn; none but in a full row. */
  readonly spins: Uint32Array;
}

const NONE = new Uint32Array(0);

/** Bits of angles: of all, and of those of axial rows and of phases. */
export interface AngleBits {
  readonly angleBits: number;
  readonly phaseBits: number;
}

export function roundRow(
  kind: SpinorKind,
  row: SpinorRow,
  { angleBits, phaseBits }: AngleBits,
): RoundedSpinorRow {
  if (kind === 'real') return { chain: roundVector(row.re, angleBits).numbers, phases: NONE, spins: NONE };
  const stride = kind === 'full' ? 2 : 1;
  const n = row.re.length / stride;
  const chainBits = kind === 'axial' ? phaseBits : angleBits;
  const step = angleStep(chainBits);
  const count = 2 ** chainBits;
  // n_w does not know the phase of w: the last orbital's is taken for it.
  const last = (n - 1) * stride;
  const common = Math.atan2(row.im[last]!, row.re[last]!);
  const nearest = (angle: number) => ((Math.round(angle / step) % count) + count) % count;
  const phases = new Uint32Array(n - 1);
  const spins = new Uint32Array(kind === 'full' ? 2 * n : 0);
  const r = new Float64Array(n);
  for (let p = 0; p < n; p++) {
    const up = turned(row, p * stride, -common);
    const beta = p === n - 1 ? 0 : nearest(up.angle);
    if (p < n - 1) phases[p] = beta;
    const a = up.size * Math.cos(up.angle - beta * step);
    if (kind === 'axial') {
      r[p] = a;
      continue;
    }
    const down = turned(row, p * stride + 1, -common - beta * step);
    const delta = nearest(down.angle);
    const b = down.size * Math.cos(down.angle - delta * step);
    const theta = nearest(Math.atan2(b, a));
    spins[2 * p] = theta;
    spins[2 * p + 1] = delta;
    r[p] = a * Math.cos(theta * step) + b * Math.sin(theta * step);
  }
  const coarse = 2 ** (angleBits - chainBits);
  const chain = roundVector(r, chainBits).numbers.map((x) => x * coarse + (coarse >> 1));
  return { chain, phases, spins };
}

/** A component, turned by an angle. */
function turned({ re, im }: SpinorRow, i: number, angle: number): { size: number; angle: number } {
  return { size: Math.hypot(re[i]!, im[i]!), angle: Math.atan2(im[i]!, re[i]!) + angle };
}

/** The unit vector that the numbers stand for, up to a phase; laid out as in the row. */
export function roundedRow(
  kind: SpinorKind,
  { chain, phases, spins }: RoundedSpinorRow,
  { angleBits, phaseBits }: AngleBits,
): { re: Float64Array; im: Float64Array } {
  const r = roundedVector(chain, angleBits);
  const n = r.length;
  if (kind === 'real') return { re: r, im: new Float64Array(n) };
  const step = angleStep(kind === 'axial' ? phaseBits : angleBits);
  const stride = kind === 'full' ? 2 : 1;
  const re = new Float64Array(n * stride);
  const im = new Float64Array(n * stride);
  for (let p = 0; p < n; p++) {
    const beta = (phases[p] ?? 0) * step;
    const theta = kind === 'full' ? spins[2 * p]! * step : 0;
    re[p * stride] = r[p]! * Math.cos(theta) * Math.cos(beta);
    im[p * stride] = r[p]! * Math.cos(theta) * Math.sin(beta);
    if (kind !== 'full') continue;
    const both = beta + spins[2 * p + 1]! * step;
    re[2 * p + 1] = r[p]! * Math.sin(theta) * Math.cos(both);
    im[2 * p + 1] = r[p]! * Math.sin(theta) * Math.sin(both);
  }
  return { re, im };
}
