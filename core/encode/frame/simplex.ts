/** A point and its value. */
export interface Vertex {
  readonly x: readonly number[];
  readonly value: number;
}

/**
 * Downhill simplex (J. A. Nelder and R. Mead, Comput. J. 7, 308 (1965)), for functions with kinks in few variables.
 * The start is a vertex, so the result is never worse than it.
 *
 * @param size - first edge length
 * @param evaluations - how often f is asked at most, the start not counted
 * @param settled - ends where all vertices agree to this
 */
export async function downhill(
  f: (x: readonly number[]) => Promise<number>,
  start: Vertex,
  size: number,
  evaluations: number,
  settled: number,
): Promise<Vertex> {
  let left = evaluations;
  const at = async (x: readonly number[]): Promise<Vertex> => {
    left--;
    return { x, value: await f(x) };
  };
  const simplex: Vertex[] = [start];
  for (let i = 0; i < start.x.length && left > 0; i++) {
    simplex.push(await at(start.x.map((x, j) => (i === j ? x + size : x))));
  }
  const sort = () => simplex.sort((a, b) => a.value - b.value);
  sort();
  while (left > 0) {
    const best = simplex[0]!;
    const worst = simplex[simplex.length - 1]!;
    if (worst.value - best.value <= settled) break;
    const others = simplex.slice(0, -1);
    const centre = best.x.map((_, j) => others.reduce((sum, { x }) => sum + x[j]!, 0) / others.length);
    const along = (t: number) => at(centre.map((c, j) => c + t * (worst.x[j]! - c)));
    const second = others[others.length - 1]!;
    const mirrored = await along(-1);
    let taken: Vertex | null = null;
    if (mirrored.value < best.value) {
      const further = left > 0 ? await along(-2) : mirrored;
      taken = further.value < mirrored.value ? further : mirrored;
    } else if (mirrored.value < second.value) {
      taken = mirrored;
    } else if (left > 0) {
      const inward = await along(mirrored.value < worst.value ? -0.5 : 0.5);
      if (inward.value < Math.min(worst.value, mirrored.value)) taken = inward;
    }
    if (taken) simplex[simplex.length - 1] = taken;
    else {
      for (let i = 1; i < simplex.length && left > 0; i++) {
        simplex[i] = await at(simplex[i]!.x.map((x, j) => (x + best.x[j]!) / 2));
      }
    }
    sort();
  }
  return simplex[0]!;
}
