import { beforeAll, describe, expect, it } from 'vitest';
import type { IntegralSet } from '../../../core/integrals';
import { hamiltonianOf, type TablesDocument } from '../../../core/plan';
import { sectorBasis, sparseProgramOperator } from '../../../core/verify';
import { addScaled, type Dense, majorana, times, zeros } from '../circuit/majorana-algebra';
import { identity } from '../circuit/spinor-support';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { load, numbersOf, request, roundTrip, shifted } from './encode-tables-support';

let atom: IntegralSet;
beforeAll(async () => {
  atom = await load('test/fixtures/sets/f_sto3g_2p');
});

const ALL = ['sf', 'so1', 'somf', 'so2', 'ss'];
const ORBIT = ['sf', 'so1', 'somf', 'so2'];

const VARIANTS = [
  'sparse/-/index/none/clean',
  'sparse/joint/index/none/clean',
  'sparse/-/index/optimised/clean',
  'sparse/joint/index/optimised/clean',
];
const CASES = VARIANTS.flatMap((name) => [ALL, ORBIT, ['sf']].map((terms) => [name, terms] as const));

describe('exported tables of the sparse form', () => {
  it.each(CASES)('%s with %s: read back they are H within the realised bound', async (name, terms) => {
    for (const bits of ['auto', 9] as const) {
      const how = request(name, { terms, bits });
      const { document, files, stored, tables } = await roundTrip(atom, how);
      expect(stored).toEqual(tables.encoded);
      if (stored.form !== 'sparse') throw new Error('another form');
      const { program } = stored;
      const h = restrict(matrixOf(hamiltonianOf(atom, how)), document.electrons);
      const basis = sectorBasis(2 * program.orbitals, document.electrons);
      const read = shifted(sparseProgramOperator(program, basis), program.constant);
      const norm = operatorNorm(difference(read, h));
      const { realised, typical, worstCase } = document.rounding;
      expect(norm).toBeLessThan(realised + document.residual.oneNormBound + 1e-10);
      if (bits === 9) expect(norm).toBeGreaterThan(1e-6);
      expect(typical).toBeLessThan(realised);
      expect(realised).toBeLessThan(worstCase);
      // The window is the whole shell here, so the shifts of its levels obey the bound too.
      expect(document.window!.orbitals).toEqual([1, 2, 3]);
      expect(document.window!.largestShift).toBeLessThanOrEqual(norm * (1 + 1e-6) + 1e-11);
      // Nothing of the core between the files and the matrix: the document's own words, Majorana by Majorana.
      const literal = restrict(literalOperator(document, files), document.electrons);
      expect(operatorNorm(difference(literal, read))).toBeLessThan(1e-10);
    }
  });
});

/** H by the conventions of the document. */
function literalOperator(document: TablesDocument, files: ReadonlyMap<string, Uint8Array>): Dense {
  const { orbitals, bits, sizes } = document;
  const take = (name: string) => numbersOf(document, files, name);
  const [kinds, rowKind, rowOrbitals, negative] = [
    take('kinds'),
    take('row_kind'),
    take('row_orbitals'),
    take('row_negative'),
  ];
  const modes = 2 * orbitals;
  const all = Array.from({ length: 2 * modes }, (_, i) => majorana(modes, i >> 1, i & 1));
  const gamma = (p: number, spin: number, x: number) => all[2 * (2 * p + spin) + x]!;
  const pairs = new Map<string, Dense>();
  /** i γ γ'. */
  const pair = (a: readonly [number, number, number], b: readonly [number, number, number]): Dense => {
    const key = [...a, ...b].join();
    let found = pairs.get(key);
    if (!found) {
      found = zeros(2 ** modes);
      addScaled(found, times(gamma(...a), gamma(...b)), 0, 1);
      pairs.set(key, found);
    }
    return found;
  };
  const elements = new Map<string, Dense>();
  const element = (antisymmetric: number, mu: number, p: number, q: number): Dense => {
    const key = [antisymmetric, mu, p, q].join();
    const known = elements.get(key);
    if (known) return known;
    const [s, m, y] = [mu === 1 || mu === 2 ? 1 : 0, mu >= 2 ? 1 : 0, mu === 2 ? 1 : 0];
    const r = 1 ^ antisymmetric ^ y;
    const out = zeros(2 ** modes);
    for (const sigma of [0, 1]) {
      for (const x of [0, 1]) {
        const odd = (x & r) ^ (sigma & m) ^ (antisymmetric ? 0 : y);
        addScaled(out, pair([p, sigma, x], [q, sigma ^ s, x ^ r]), odd ? -0.25 : 0.25);
      }
    }
    elements.set(key, out);
    return out;
  };
  const out = zeros(2 ** modes);
  addScaled(out, identity(out.n), document.constant);
  const weights = drawn(take('keep'), take('alternate'), sizes, bits.keep!);
  for (let i = 0; i < sizes.rows!; i++) {
    const x = sizes.outerLambda! * weights[i]! * (negative[i] === 1 ? -1 : 1);
    if (x === 0) continue;
    const [p, q, r, s] = rowOrbitals.slice(4 * i, 4 * i + 4) as [number, number, number, number];
    const [strings, flags, mu, nu, shared, exchanged] = kinds.slice(6 * rowKind[i]!, 6 * rowKind[i]! + 6) as [
      number,
      number,
      number,
      number,
      number,
      number,
    ];
    if (strings === 1) {
      const [s1, s2, t, r1, r2] = [0, 1, 2, 3, 4].map((bit) => (flags >> bit) & 1) as [
        number,
        number,
        number,
        number,
        number,
      ];
      const m = s1 ^ s2 ^ r1 ^ r2;
      for (const sigma of [0, 1]) {
        for (const a of [0, 1]) {
          for (const b of [0, 1]) {
            const odd = (m & sigma) ^ (r1 & a) ^ (r2 & b);
            const product = times(
              pair([p, sigma, a], [q, sigma ^ s1, a ^ r1]),
              pair([r, sigma ^ t, b], [s, sigma ^ t ^ s2, b ^ r2]),
            );
            addScaled(out, product, (odd ? -x : x) / 8);
          }
        }
      }
      continue;
    }
    if (nu === 4) {
      addScaled(out, element(flags, mu, p, q), x);
      continue;
    }
    const other = sizes.otherShare!;
    const places: readonly (readonly [number, number, number])[] = shared
      ? [
          [mu, nu, 1 - other],
          [nu, mu, sizes.otherSign! * other],
        ]
      : exchanged
        ? [
            [mu, nu, 0.5],
            [nu, mu, 0.5],
          ]
        : [[mu, nu, 1]];
    for (const [first, second, share] of places) {
      const [a, b] = [element(flags, first, p, q), element(0, second, r, s)];
      addScaled(out, times(a, b), (x * share) / 2);
      addScaled(out, times(b, a), (x * share) / 2);
    }
  }
  return out;
}

/** Probabilities of the rows: how many numbers of the uniform register and of the low bits lead to each. */
function drawn(
  keep: readonly number[],
  alternate: readonly number[],
  { factor, lowBits, uniformBits, buckets }: TablesDocument['sizes'],
  keepBits: number,
): number[] {
  const out = new Array<number>(buckets!).fill(0);
  const size = 2 ** uniformBits!;
  const low = 2 ** lowBits!;
  for (let i = 0; i < buckets!; i++) {
    const high = Math.floor(i / low);
    const from = Math.ceil((high * size) / factor!);
    const to = Math.ceil(((high + 1) * size) / factor!);
    const kept = Math.ceil((high * size + keep[i]! * 2 ** (uniformBits! - keepBits)) / factor!);
    out[i]! += (kept - from) / (size * low);
    out[alternate[i]!]! += (to - kept) / (size * low);
  }
  return out;
}
