import { existsSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import type { Subroutine } from '../../../core/circuit';
import { tripletStep } from '../../../core/circuit';
import { erasureToffoli, lookUpToffoli } from '../../../core/circuit/primitives/look-up';
import { FACE_FLAGS, ROW_FLAGS } from '../../../core/circuit/triplet/rounded-row';
import { parseVariant } from '../../../core/encode';
import { inlineContext } from '../../../core/job';
import { costOf, targetOf, toleranceOf } from '../../../core/plan/costing';
import { Encodings } from '../../../core/plan/encodings';
import { hamiltonianOf, occupationsOf } from '../../../core/plan/system';

const ctx = inlineContext();
const MIXED = parseVariant('mixed/separate/swap-layers/optimised/clean');
const SETS = ['test/fixtures/sets/ch2o_sto3g_8o', '../shared/data/ch2o_631g_20o'].filter((set) => {
  if (existsSync(set)) return true;
  console.warn(`skipped: ${set} is not there`);
  return false;
});

async function mixed(set: string) {
  const loaded = await loadInputs(await openInputs({ files: [set], recipe: null }, ctx), 'all', 'throw', ctx);
  const request = {
    terms: ['sf', 'so1', 'somf', 'so2'] as const,
    electrons: null,
    occupations: null,
    target: { value: 5, unit: 'cm-1', meaning: 'level' } as const,
    threshold: 1e-4,
    bits: 'auto' as const,
    overlaps: [1],
    qubitsMax: null,
  };
  const target = targetOf(request);
  const encodings = new Encodings(
    hamiltonianOf(loaded, request),
    request.threshold,
    occupationsOf(loaded, request),
    toleranceOf(target),
  );
  const encoding = await encodings.of(MIXED, ctx);
  return { encoding, cost: costOf(encoding, MIXED, target, request) };
}

/** A look-up read at its best block; erasing is the same for one table or two and left out. */
const cheapest = (rows: number, width: number, controlled: boolean): number =>
  Math.min(...[1, 2, 4, 8, 16].map((k) => lookUpToffoli(Math.ceil(rows / k), width, k, controlled)));

/** Why tables have one width for all parts, and the outer PREPARE one level: DEVELOPERS, "Mixed encodings". */
describe.each(SETS)('a second width of tables would not pay: %s', (set) => {
  it('in the rows of SELECT', { timeout: 240_000 }, async () => {
    const { encoding, cost } = await mixed(set);
    const { shape, lambda } = encoding;
    const items = shape.items!;
    const light = [...items.rows.keys()].filter((t) => items.twoFaced[t] === 1);
    const lightRows = light.reduce((sum, t) => sum + items.rows[t]!, 0) + items.pairRows.at(-1)!;
    const heavyRows = items.rows.reduce((sum, rows) => sum + rows, 0) - lightRows;
    expect(lightRows).toBeGreaterThan(20);
    const width = (bits: number) => (shape.orbitals - 1) * (bits - 1) + ROW_FLAGS + FACE_FLAGS;
    // As many bits fewer as the light parts are lighter: the same absolute error.
    const lightLambda =
      lambda.parts['same-orbit']! + lambda.parts['other-orbit']! + lambda.parts['one-body.spin']!;
    const spared = Math.floor(Math.log2(lambda.total / lightLambda));
    expect(spared).toBeGreaterThan(8);
    const bits = cost.bits.rotation;
    const one = cheapest(heavyRows + lightRows, width(bits), false);
    const two = cheapest(heavyRows, width(bits), true) + cheapest(lightRows, width(bits - spared), true);
    expect(two).toBeGreaterThan(one);
    // Second vectors, which light rows alone have: one look-up a use, of which the other blocks must be erased too.
    const pairs = items.pairRows.reduce((sum, rows) => sum + rows, 0);
    const second = (k: number, b: number) =>
      lookUpToffoli(Math.ceil(pairs / k), (shape.orbitals - 1) * (b - 1), k, true) +
      (k > 1
        ? Math.min(...[1, 2, 4, 8, 16, 32].map((e) => erasureToffoli(Math.ceil(pairs / e), e, true)))
        : 0);
    const best = (b: number) => Math.min(...[1, 2, 4, 8].map((k) => second(k, b)));
    expect(best(bits - spared)).toBeGreaterThan(0.9 * best(bits));
  });

  it('in the outer PREPARE, which is a few per cent of the step', { timeout: 240_000 }, async () => {
    const { encoding, cost } = await mixed(set);
    const widths = { keepBits: cost.bits.keep, rotationBits: cost.bits.rotation, phaseBits: 20 };
    const policy = { mode: 'clean', block: 'auto', qubitCap: null } as const;
    const { recipe } = tripletStep(encoding.shape.items!, 'swap-layers', widths, policy);
    const sum = (node: Subroutine, counts: (name: string) => boolean, inside = false): number => {
      const own = inside || counts(node.name);
      const children = (node.children ?? []).reduce((all, child) => all + sum(child, counts, own), 0);
      return (node.times ?? 1) * ((own ? (node.toffoli ?? 0) : 0) + children);
    };
    const outer = sum(recipe, (name) => name.startsWith('outer PREPARE'));
    const step = sum(recipe, () => true);
    expect(outer).toBeGreaterThan(0);
    expect(outer).toBeLessThan(0.06 * step);
  });
});
