/** What a factor costs as its shift c moves: scale·(rest + Σ_j|ε_j − c|)^power. */
export interface SpectrumCost {
  readonly power: 1 | 2;
  readonly scale: number;
  readonly rest: number;
}

/**
 * min over c of scale·(rest + Σ_j|ε_j − c|)^power + slope·c, exactly: the function is convex and a polynomial between
 * neighbouring ε. −∞ where a linear cost is less steep than the slope.
 *
 * @param values - ε ascending, at least one
 */
export function leastWithSlope(values: Float64Array, cost: SpectrumCost, slope: number): number {
  const { power, scale, rest } = cost;
  const count = values.length;
  const at = (c: number): number => {
    let norm = rest;
    for (const x of values) norm += Math.abs(x - c);
    return scale * (power === 2 ? norm * norm : norm) + slope * c;
  };
  if (scale === 0) return slope === 0 ? 0 : Number.NEGATIVE_INFINITY;
  if (power === 1) {
    if (Math.abs(slope) > scale * count * (1 + 1e-12)) return Number.NEGATIVE_INFINITY;
    // The derivative scale·(2j − count) + slope changes sign at ε_j.
    const j = Math.ceil((count - slope / scale) / 2) - 1;
    return at(values[Math.min(count - 1, Math.max(0, j))]!);
  }
  // Left of ε_0, then between neighbours, then right of the last: Σ|ε − c| = (2j − count) c + const.
  let least = Number.POSITIVE_INFINITY;
  let below = 0;
  let total = 0;
  for (const x of values) total += x;
  for (let j = 0; j <= count; j++) {
    const steep = 2 * j - count;
    const constant = rest + total - 2 * below;
    const low = j === 0 ? Number.NEGATIVE_INFINITY : values[j - 1]!;
    const high = j === count ? Number.POSITIVE_INFINITY : values[j]!;
    if (steep !== 0) {
      const c = (-slope / (2 * scale * steep) - constant) / steep;
      if (c >= low && c <= high) least = Math.min(least, at(c));
    }
    if (j < count) {
      least = Math.min(least, at(values[j]!));
      below += values[j]!;
    }
  }
  return least;
}
