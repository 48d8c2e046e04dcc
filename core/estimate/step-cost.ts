import { STEP_PARTS, type StepPart, type Subroutine } from '../circuit';
import type { StepCost } from './estimate';

/** Adds up a recipe. Every leaf with Toffoli must name its part, so that the parts sum to the whole. */
export function stepCost(tree: Subroutine): StepCost {
  const parts = Object.fromEntries(STEP_PARTS.map((part) => [part, 0])) as Record<StepPart, number>;
  let t = 0;
  const visit = (node: Subroutine, times: number) => {
    const runs = times * (node.times ?? 1);
    if (node.toffoli !== undefined && node.toffoli > 0) {
      if (node.part === undefined) throw new Error(`leaf "${node.name}" has Toffoli but names no step part`);
      parts[node.part] += runs * node.toffoli;
    }
    t += runs * (node.t ?? 0);
    for (const child of node.children ?? []) visit(child, runs);
  };
  visit(tree, 1);
  const toffoli = STEP_PARTS.reduce((sum, part) => sum + parts[part], 0);
  return { toffoli, t, parts, tree };
}
