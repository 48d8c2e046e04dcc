import { describe, expect, it } from 'vitest';
import { rotateOrbitals, rotateSpin, type SpatialHamiltonian } from '../../../core/hamiltonian';
import { fileSetFromMemory } from '../../../core/integrals';
import { transpose } from '../../../core/linalg';
import { hamiltonianOf, readFrame } from '../../../core/plan';
import { programOperator, sectorBasis, sparseProgramOperator } from '../../../core/verify';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { largestDifference } from '../hamiltonian/random-hamiltonian';
import { ctx, load, request, roundTrip, shifted } from './encode-tables-support';
import { tilted } from './tilted';

const TERMS = { terms: ['sf', 'so1', 'somf', 'so2'] };
const FRAMES = { frames: { spin: 'optimised', orbital: 'optimised' } };

describe('exported tables over a turned basis', () => {
  it.each([
    ['spin', 'triplet/joint/swap-layers/median/clean'],
    ['orbital', 'sparse/-/index/none/clean'],
  ] as const)('%s: with the array that turns them back they are H', async (kind, name) => {
    const whole = await load('test/fixtures/sets/oh_sto3g');
    // Three orbitals that a rotation can still improve.
    const window = { orbitals: [2, 3, 5], electrons: 4 };
    const occupations = [2, 1.5, 1.5, 1, 1];
    const set = tilted(whole);
    const how = request(name, { ...TERMS, ...FRAMES, window, occupations });
    const { document, files, stored } = await roundTrip(set, how);
    expect(document.frame).toMatchObject({ kind });
    expect(document.frame!.lambda.after).toBeLessThan(document.frame!.lambda.before);
    const frame = (await readFrame(fileSetFromMemory('tables', files), ctx))!;
    expect(frame).toMatchObject({ kind, size: 3 });
    const given = hamiltonianOf(set, how) as SpatialHamiltonian;
    const turn = async (h: SpatialHamiltonian, by: Float64Array) =>
      kind === 'spin' ? rotateSpin(h, by) : rotateOrbitals(h, by, ctx);
    const over = await turn(given, frame.rotation);
    const back = await turn(over, transpose(frame.rotation, 3, 3));
    expect(largestDifference(back.h.planes, given.h.planes)).toBeLessThan(1e-13);
    const basis = sectorBasis(2 * given.orbitals, given.electrons);
    const read =
      stored.form === 'triplet'
        ? shifted(programOperator(stored.program, basis), stored.program.constant)
        : stored.form === 'sparse'
          ? shifted(sparseProgramOperator(stored.program, basis), stored.program.constant)
          : null;
    const off = (h: SpatialHamiltonian) =>
      operatorNorm(difference(read!, restrict(matrixOf(h), given.electrons)));
    const allowed = document.rounding.realised + document.residual.oneNormBound + 1e-10;
    expect(off(over)).toBeLessThan(allowed);
    // Over the given basis they are another matrix.
    expect(off(given)).toBeGreaterThan(3 * allowed);
  });

  it('have no such array where the basis is the given one', async () => {
    const set = await load('test/fixtures/sets/f_sto3g_2p');
    const { document, files } = await roundTrip(set, request('triplet/separate/index/median/clean', TERMS));
    expect(document).not.toHaveProperty('frame');
    expect(files.has('frame.npy')).toBe(false);
    expect(await readFrame(fileSetFromMemory('tables', files), ctx)).toBeNull();
  });

  it('are refused where the array is damaged', async () => {
    const set = tilted(await load('test/fixtures/sets/f_sto3g_2p'));
    const { files } = await roundTrip(
      set,
      request('triplet/joint/index/median/clean', { ...TERMS, ...FRAMES }),
    );
    const damaged = new Map(files);
    const bytes = files.get('frame.npy')!.slice();
    bytes[bytes.length - 1]! ^= 1;
    damaged.set('frame.npy', bytes);
    await expect(readFrame(fileSetFromMemory('tables', damaged), ctx)).rejects.toMatchObject({
      code: 'bad-tables',
    });
  });
});
