import { describe, expect, it } from 'vitest';
import { recommend } from '../../../core/plan';
import { estimate } from './estimates';

const INDEX = 'triplet/separate/index/median/clean';
const SWAP = 'triplet/separate/swap-layers/median/clean';
const SPINOR = 'spinor/separate/index/median/clean';

describe('the recommendation', () => {
  const variants = [
    estimate(INDEX),
    estimate(SWAP),
    estimate(SPINOR, { totalToffoli: 1_700_000_000, logicalQubits: 300 }),
  ];

  it('is the cheapest run, with reasons computed from the figures', () => {
    const { variant, reasons } = recommend(variants, null);
    expect(variant).toBe(SWAP);
    // 850 of 1 000 000 steps against 940: −9.6 %; 8.5e8 of 1.7e9 is one half; 500 of 850 is 58.8 %; 8 over 4.
    expect(reasons.join('\n')).toContain('8.50×10⁸');
    expect(reasons.join('\n')).toContain(`50.0 % of the Toffoli of the runner-up, ${SPINOR}`);
    expect(reasons.join('\n')).toContain('largest part of its step: table look-up, 58.8 %');
    expect(reasons.join('\n')).toContain(
      'whole step by −9.6 % against spin in the index: rotations −100, layers +10',
    );
    expect(reasons.join('\n')).toContain('2.00 times the least');
  });

  it('keeps within the qubit cap and says what that costs', () => {
    const { variant, reasons } = recommend(variants, 500);
    expect(variant).toBe(SPINOR);
    expect(reasons.filter((reason) => reason.includes('above the cap of 500'))).toHaveLength(2);
  });

  it('recommends nothing where nothing fits, and names the smallest', () => {
    const { variant, reasons } = recommend(variants, 100);
    expect(variant).toBeNull();
    expect(reasons).toEqual([`no variant fits in 100 logical qubits; the smallest, ${SPINOR}, needs 300`]);
    expect(recommend([], null).variant).toBeNull();
  });
});
