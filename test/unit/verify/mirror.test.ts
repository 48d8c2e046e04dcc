import { describe, expect, it } from 'vitest';
import { inlineContext } from '../../../core/job';
import { symmetricEigenvalues } from '../../../core/linalg';
import { sectorMatrix } from '../../../core/verify';
import { type Block, connectedBlocks } from '../../../core/verify/blocks';
import { splitByMirror } from '../../../core/verify/mirror';
import { denseMatrix } from '../../../core/verify/sparse';
import { largestDifference, randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const spectrum = (blocks: readonly Block[]) =>
  Float64Array.from(
    blocks.flatMap((block) => [...symmetricEigenvalues(denseMatrix(block).re, block.dim)]),
  ).sort();

/** Real matrix of 4 electrons in 4 orbitals: spin-free part and the y component of spin–orbit, real by itself. */
async function realBlocks(): Promise<Block[]> {
  const hamiltonian = randomHamiltonian(4, 8, { charge: true, spinOrbit: 'none', spinSpin: false }, 4);
  for (const { planes } of [hamiltonian.h, hamiltonian.k]) {
    planes.fill(0, 16, 32);
    planes.fill(0, 48, 64);
  }
  return connectedBlocks(await sectorMatrix(hamiltonian, 4, 'product', inlineContext()), inlineContext());
}

describe('spin reversal', () => {
  it('splits a real block into two without changing its spectrum', async () => {
    const blocks = await realBlocks();
    expect(blocks.map(({ dim, im }) => [dim, im.length])).toEqual([[70, 0]]);
    const split = (await splitByMirror(blocks[0]!, inlineContext()))!;
    expect(split.parts).toHaveLength(2);
    expect(split.parts[0]!.dim + split.parts[1]!.dim).toBe(70);
    expect(Math.min(split.parts[0]!.dim, split.parts[1]!.dim)).toBeGreaterThan(20);
    expect(largestDifference(spectrum(split.parts), spectrum(blocks))).toBeLessThan(1e-11);
    expect(split.bound).toBeLessThan(1e-10);
  });

  it('is refused where one element breaks it', async () => {
    const [block] = await realBlocks();
    const diagonal = block!.diagonal.slice();
    // Not the first: its image is another determinant.
    const lone = block!.states.findIndex((state) => (state & 0x55) << 1 !== (state & 0xaa));
    diagonal[lone]! += 1e-6;
    expect(await splitByMirror({ ...block!, diagonal }, inlineContext())).toBeNull();
  });
});
