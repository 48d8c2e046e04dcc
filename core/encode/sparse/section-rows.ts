import type { PairsKind } from './kinds';
import { emptyRow, type RowSource, sharesOf } from './rows';
import { kindsOf, numRows, type Section, visitRows } from './sections';

/** All pairs p ≥ q (or p > q) in the order of their indices. */
function pairsOf(n: number, isStrict: boolean): Uint16Array {
  const pairs: number[] = [];
  for (let p = 0; p < n; p++) for (let q = 0; q < p + (isStrict ? 0 : 1); q++) pairs.push(p, q);
  return Uint16Array.from(pairs);
}

/** Values between two steps. */
const BLOCK = 1 << 18;

/** The coefficients of sections as rows. */
export function sectionRows(sections: readonly Section[], n: number): RowSource {
  const symmetric = pairsOf(n, false);
  const antisymmetric = pairsOf(n, true);
  const row = emptyRow();
  return {
    parts: [...new Set(sections.flatMap(({ shares }) => shares.map(([part]) => part)))],
    *visit(visitor) {
      for (const section of sections) {
        const { layout, values } = section;
        const kinds = kindsFor(section);
        // Every unique value weighs half of what its copies in g sum to.
        const perWeight = section.oneBody ? 0 : 2 * copies(section.shares);
        const width = layout.kind === 'rows' ? layout.scale.length : 0;
        const rowPairs = layout.kind === 'rows' ? antisymmetric : symmetric;
        row.parts = sharesOf(section.shares);
        const rows = numRows(section);
        let since = 0;
        for (let i = 0; i < rows; i++) {
          const component = width > 0 ? Math.floor((2 * i) / rowPairs.length) : 0;
          const pair = width > 0 ? i - (component * rowPairs.length) / 2 : i;
          const first = width > 0 ? i * width : (i * (i + 1)) / 2;
          row.kind = kinds[component]!;
          if (layout.kind !== 'plane') {
            row.p = rowPairs[2 * pair]!;
            row.q = rowPairs[2 * pair + 1]!;
          }
          visitRows(section, i, i + 1, (weight, index) => {
            if (layout.kind === 'plane') {
              row.p = i;
              row.q = index - i * n;
              row.r = row.s = 0;
            } else {
              row.r = symmetric[2 * (index - first)]!;
              row.s = symmetric[2 * (index - first) + 1]!;
            }
            row.weight = weight;
            row.isNegative = values[index]! < 0;
            row.square = perWeight * Math.abs(values[index]!) * weight;
            visitor(row);
          });
          since += layout.kind === 'rows' ? width : i + 1;
          if (since < BLOCK) continue;
          since = 0;
          yield;
        }
      }
    },
  };
}

/** The same objects each time, so that kinds can be told apart by identity. */
const known = new WeakMap<Section, PairsKind[]>();

function kindsFor(section: Section): readonly PairsKind[] {
  let kinds = known.get(section);
  if (!kinds) {
    kinds = kindsOf(section);
    known.set(section, kinds);
  }
  return kinds;
}

/** Σ value² over value·weight for shares a : b of one value: (a² + b²)/(a + b), a = 1 for the same-orbit part. */
function copies(shares: Section['shares']): number {
  if (shares.length < 2) return 1;
  const [same, other] = [shares[0]![1], shares[1]![1]];
  return (same * same + other * other) / (same * (same + other));
}
