import { describe, expect, it } from 'vitest';
import type { Ask } from '../../../../renderer/engine/protocol';
import { canRecount } from '../../../../renderer/ledger/reprice';

const ASK: Ask = {
  terms: 'all',
  electrons: null,
  occupations: null,
  target: { value: 5, unit: 'cm-1', meaning: 'level' },
  threshold: 1e-4,
  bits: 'auto',
  overlaps: [1],
  qubitsMax: null,
  seed: 1,
};
const FINER: Ask = { ...ASK, target: { ...ASK.target, value: 1 } };
const TRIPLET = 'triplet/separate/swap-layers/median/clean';
const MIXED = 'mixed/separate/swap-layers/optimised/clean';

const ORBITAL = { spin: 'given', orbital: 'optimised' } as const;

describe('figures are counted anew where the encoding stays', () => {
  it.each([
    ['another target', TRIPLET, ASK, FINER, true],
    [
      'another target, threshold by the budget',
      TRIPLET,
      { ...ASK, threshold: 'auto' },
      { ...FINER, threshold: 'auto' },
      false,
    ],
    ['another target, rows chosen by it', MIXED, ASK, FINER, false],
    ['the same, hypercontracted', 'hypercontracted/separate/index/none/clean', ASK, FINER, false],
    ['a cap of qubits, rows chosen by the target', MIXED, ASK, { ...ASK, qubitsMax: 900 }, true],
    [
      'the same energy in another unit',
      MIXED,
      ASK,
      { ...ASK, target: { value: 5 / 219474.6313632, unit: 'hartree', meaning: 'level' } },
      true,
    ],
    ['other terms', TRIPLET, ASK, { ...ASK, terms: ['sf'] }, false],
    ['other orbitals', 'sparse/-/index/none/clean', ASK, { ...ASK, frames: ORBITAL }, false],
    ['orbitals that only the sparse form turns', TRIPLET, ASK, { ...ASK, frames: ORBITAL }, true],
    ['other spin axes', TRIPLET, ASK, { ...ASK, frames: { spin: 'optimised', orbital: 'given' } }, false],
    [
      'other spin axes, to which this form is blind',
      'spinor/joint/index/median/clean',
      ASK,
      { ...ASK, frames: { spin: 'optimised', orbital: 'given' } },
      true,
    ],
    ['frames named as they are', TRIPLET, ASK, { ...ASK, frames: { spin: 'given', orbital: 'given' } }, true],
  ] as const)('%s', (_, name, then, now, expected) => {
    expect(canRecount(name, then as Ask, now as Ask)).toBe(expected);
  });
});
