/** A group of levels that agree: multiplicity, mean energy and spread, all in hartree. */
export interface Multiplet {
  readonly degeneracy: number;
  readonly energy: number;
  readonly spread: number;
}

/** Groups ascending levels wherever the step to the next one exceeds `gap`. */
export function multiplets(values: ArrayLike<number>, gap: number): Multiplet[] {
  const groups: number[][] = [];
  for (const value of Array.from(values)) {
    const group = groups.at(-1);
    if (group && value - group.at(-1)! <= gap) group.push(value);
    else groups.push([value]);
  }
  return groups.map((group) => ({
    degeneracy: group.length,
    energy: group.reduce((sum, value) => sum + value, 0) / group.length,
    spread: group.at(-1)! - group[0]!,
  }));
}
