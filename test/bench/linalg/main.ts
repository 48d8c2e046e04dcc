// `npm run bench -- linalg`: the kernels against their plain fallback and ml-matrix, alternately within one run, so that the ratios
// hold on a busy machine. Best of several turns; no assertion on time.
import { EigenvalueDecomposition, Matrix, SingularValueDecomposition } from 'ml-matrix';
import { inlineContext } from '../../../core/job';
import {
  denseRows,
  hermitianEigenvaluesBatch,
  householderQr,
  multiply,
  pivotedCholesky,
  singularValues,
  symmetricEigen,
  symmetricEigenAsync,
  symmetricEigenvaluesBatch,
} from '../../../core/linalg';
import { plainArena, put } from '../../../core/linalg/kernels/arena';
import { randomSource } from '../../../core/linalg/random';
import { finish } from '../../../core/linalg/steps';
import { eigenInArena } from '../../../core/linalg/symmetric';

interface Contender {
  readonly name: string;
  readonly run: () => unknown;
}

const random = randomSource(1);
const numbers = (count: number) => Float64Array.from({ length: count }, random);

function symmetric(n: number): Float64Array {
  const a = numbers(n * n);
  for (let i = 0; i < n; i++) for (let j = 0; j < i; j++) a[j * n + i] = a[i * n + j];
  return a;
}

/** Milliseconds of the best turn of each, taken alternately. */
async function race(contenders: readonly Contender[], turns: number): Promise<number[]> {
  const best = contenders.map(() => Number.POSITIVE_INFINITY);
  for (let turn = 0; turn < turns; turn++) {
    for (const [i, { run }] of contenders.entries()) {
      const start = performance.now();
      await run();
      best[i] = Math.min(best[i], performance.now() - start);
    }
  }
  return best;
}

async function show(title: string, turns: number, contenders: readonly Contender[]): Promise<void> {
  const times = await race(contenders, turns);
  const parts = contenders.map(({ name }, i) => {
    const ratio = i === 0 ? '' : ` (×${(times[i] / times[0]).toFixed(1)})`;
    return `${name} ${times[i].toPrecision(3)} ms${ratio}`;
  });
  console.log(`${title.padEnd(44)} ${parts.join('   ')}`);
}

for (const n of [50, 200, 500]) {
  const [a, b] = [numbers(n * n), numbers(n * n)];
  const [x, y] = [a, b].map((data) => Matrix.from1DArray(n, n, data));
  const arena = plainArena();
  const [pa, pb, pc] = [put(arena, a), put(arena, b), arena.take(n * n)];
  await show(`product, n = ${n}`, 5, [
    { name: 'kernels', run: () => multiply(a, b, n, n, n) },
    { name: 'plain', run: () => arena.kernels.gemm(n, n, n, 1, pa, n, 1, pb, n, 1, pc, n) },
    { name: 'ml-matrix', run: () => x.mmul(y) },
  ]);
}

for (const n of [50, 200]) {
  const a = symmetric(n);
  const matrix = Matrix.from1DArray(n, n, a);
  await show(`symmetric eigenvectors, n = ${n}`, 3, [
    { name: 'kernels', run: () => symmetricEigen(a, n) },
    {
      name: 'plain',
      run: () => {
        const arena = plainArena();
        return finish(eigenInArena(arena, put(arena, a), n));
      },
    },
    { name: 'ml-matrix', run: () => new EigenvalueDecomposition(matrix, { assumeSymmetric: true }) },
  ]);
}

{
  const [n, count] = [50, 200];
  const re = Float64Array.from(Array.from({ length: count }, () => Array.from(symmetric(n))).flat());
  const im = numbers(re.length);
  const arena = plainArena();
  const [a, d, room] = [arena.take(re.length), arena.take(count * n), arena.take(3 * n)];
  await show('200 sets of eigenvalues, n = 50', 8, [
    { name: 'symmetric', run: () => symmetricEigenvaluesBatch(re, count, n) },
    { name: 'Hermitian', run: () => hermitianEigenvaluesBatch(re, im, count, n) },
    {
      name: 'symmetric plain',
      run: () => {
        arena.f64.set(re, a);
        arena.kernels.eigenvaluesOfMany(a, n, n, count, 1, d, room);
      },
    },
  ]);
}

{
  const [rows, cols] = [120, 125];
  const a = numbers(rows * cols);
  const matrix = Matrix.from1DArray(rows, cols, a);
  await show('singular values, 120×125', 3, [
    { name: 'kernels', run: () => singularValues(a, rows, cols, inlineContext()) },
    { name: 'ml-matrix', run: () => new SingularValueDecomposition(matrix, { autoTranspose: true }) },
  ]);
}

{
  const n = 1275;
  const b = numbers(400 * n);
  const a = multiply(b, b, n, 400, n, { transposeA: true });
  await show('pivoted Cholesky, n = 1275, rank 400', 2, [
    { name: 'kernels', run: () => pivotedCholesky(denseRows(a, n), { threshold: 1e-6 }) },
  ]);
}

const large = process.argv.includes('--large');
for (const n of large ? [1000, 2550] : [600]) {
  const a = symmetric(n);
  await show(`symmetric eigenvectors, n = ${n}`, 1, [
    { name: 'kernels', run: () => symmetricEigenAsync(a, n, inlineContext()) },
  ]);
}
if (large) {
  const a = numbers(1225 * 1275);
  const tall = numbers(3675 * 1275);
  await show('large rectangles', 1, [
    { name: 'singular values 1225×1275', run: () => singularValues(a, 1225, 1275, inlineContext()) },
    { name: 'QR 3675×1275', run: () => householderQr(tall, 3675, 1275, inlineContext()) },
  ]);
}
