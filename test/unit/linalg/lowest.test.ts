import { describe, expect, it } from 'vitest';
import { Cancelled, inlineContext } from '../../../core/job';
import {
  type ComplexMatrix,
  extremalEigenvalues,
  hermitianEigenvalues,
  type LowestEigenpairs,
  lowestEigenpairs,
  type Operator,
  type Planes,
} from '../../../core/linalg';
import { distance, hermitianResiduals, randomHermitian, randomNumbers } from './support';

/**
 * The hypercube graph of dimension d: values d − 2k with multiplicity binomial(d, k), here negated and, if `phases` are
 * given, turned complex by the gauge x_v → e^{iφ_v} x_v.
 */
function hypercube(d: number, phases?: Float64Array): { n: number; apply: Operator } {
  const n = 2 ** d;
  return {
    n,
    apply(x, y) {
      for (let v = 0; v < n; v++) {
        let re = 0;
        let im = 0;
        for (let bit = 1; bit < n; bit <<= 1) {
          const w = v ^ bit;
          if (!phases) {
            re -= x.re[w];
            continue;
          }
          const c = Math.cos(phases[v] - phases[w]);
          const s = Math.sin(phases[v] - phases[w]);
          re -= c * x.re[w] - s * x.im[w];
          im -= c * x.im[w] + s * x.re[w];
        }
        y.re[v] = re;
        if (phases) y.im[v] = im;
      }
    },
  };
}

const levels = (d: number, count: number) => {
  const all: number[] = [];
  for (let k = 0, multiplicity = 1; all.length < count; k++) {
    for (let i = 0; i < multiplicity; i++) all.push(-d + 2 * k);
    multiplicity = (multiplicity * (d - k)) / (k + 1);
  }
  return all.slice(0, count);
};

function dense({ n, re, im }: ComplexMatrix): Operator {
  return (x: Planes, y: Planes) => {
    for (let p = 0; p < n; p++) {
      y.re[p] = 0;
      y.im[p] = 0;
      for (let q = 0; q < n; q++) {
        y.re[p] += re[p * n + q] * x.re[q] - im[p * n + q] * x.im[q];
        y.im[p] += re[p * n + q] * x.im[q] + im[p * n + q] * x.re[q];
      }
    }
  };
}

/** True residuals, by the operator itself. */
async function residuals(apply: Operator, x: LowestEigenpairs, complex: boolean): Promise<number> {
  let worst = 0;
  const y = { re: new Float64Array(x.n), im: new Float64Array(complex ? x.n : 0) };
  for (let i = 0; i < x.values.length; i++) {
    const re = x.re.subarray(i * x.n, (i + 1) * x.n);
    const im = x.im.subarray(i * x.n, (i + 1) * x.n);
    await apply({ re, im: complex ? im : new Float64Array(0) }, y);
    let sum = 0;
    for (let j = 0; j < x.n; j++) {
      sum += (y.re[j] - x.values[i] * re[j]) ** 2 + ((y.im[j] ?? 0) - x.values[i] * im[j]) ** 2;
    }
    worst = Math.max(worst, Math.sqrt(sum));
  }
  return worst;
}

describe('multiplets', () => {
  it('hypercube, real: levels of 1, 9 and 36 states', async () => {
    const { n, apply } = hypercube(9);
    const x = await lowestEigenpairs(apply, n, 24, { complex: false }, inlineContext());
    expect(distance(x.values, levels(9, 24))).toBeLessThan(1e-12);
    expect(await residuals(apply, x, false)).toBeLessThan(1.1e-9);
    expect(x.im.every((y) => y === 0)).toBe(true);
  });

  it('hypercube, complex gauge', async () => {
    const { n, apply } = hypercube(
      8,
      randomNumbers(256, 1).map((x) => 3 * x),
    );
    const x = await lowestEigenpairs(apply, n, 12, {}, inlineContext());
    expect(distance(x.values, levels(8, 12))).toBeLessThan(1e-12);
    expect(await residuals(apply, x, true)).toBeLessThan(1.1e-9);
    expect(distance(x.residuals, new Float64Array(12))).toBeLessThan(1e-9);
  });

  it('a start vector of one symmetry does not hide the others', async () => {
    const { n, apply } = hypercube(7);
    const start = { re: new Float64Array(n).fill(1), im: new Float64Array(0) };
    const x = await lowestEigenpairs(apply, n, 8, { complex: false, start }, inlineContext());
    expect(distance(x.values, levels(7, 8))).toBeLessThan(1e-12);
  });
});

describe('dense matrices', () => {
  it('agrees with the full spectrum, with and without the diagonal', async () => {
    const n = 150;
    const h = randomHermitian(n, 2);
    const diagonal = Float64Array.from({ length: n }, (_, i) => i + h.re[i * n + i]);
    for (let i = 0; i < n; i++) h.re[i * n + i] = diagonal[i];
    const exact = hermitianEigenvalues(h).slice(0, 6);
    const plain = await lowestEigenpairs(dense(h), n, 6, {}, inlineContext());
    const guided = await lowestEigenpairs(dense(h), n, 6, { diagonal }, inlineContext());
    for (const x of [plain, guided]) {
      expect(distance(x.values, exact)).toBeLessThan(1e-12);
      const { residual, overlap } = hermitianResiduals(h, x);
      expect(residual).toBeLessThan(1e-9);
      expect(overlap).toBeLessThan(1e-12);
    }
    expect(guided.applications).toBeLessThan(plain.applications);
  });

  it('small dimensions: everything there is, and no more', async () => {
    for (const n of [1, 2, 5]) {
      const h = randomHermitian(n, n);
      const x = await lowestEigenpairs(dense(h), n, 8, {}, inlineContext());
      expect(distance(x.values, hermitianEigenvalues(h))).toBeLessThan(1e-13);
    }
  });

  it('an operator that is a multiple of one', async () => {
    const apply: Operator = (x, y) => {
      y.re.set(x.re.map((z) => 3 * z));
      y.im.set(x.im.map((z) => 3 * z));
    };
    const x = await lowestEigenpairs(apply, 40, 5, {}, inlineContext());
    expect(distance(x.values, new Array(5).fill(3))).toBeLessThan(1e-14);
  });
});

it('extremal values of the hypercube: ±d', async () => {
  const { n, apply } = hypercube(8);
  const { min, max } = await extremalEigenvalues(apply, n, { complex: false }, inlineContext());
  expect(min).toBeCloseTo(-8, 12);
  expect(max).toBeCloseTo(8, 12);
});

describe('as a job', () => {
  it('the seed decides the result, and an asynchronous operator is awaited', async () => {
    const { n, apply } = hypercube(6);
    const late: Operator = async (x, y) => {
      await null;
      await apply(x, y);
    };
    const options = { complex: false, seed: 5 };
    const a = await lowestEigenpairs(apply, n, 3, options, inlineContext(1));
    const b = await lowestEigenpairs(late, n, 3, options, inlineContext(2));
    expect(a).toEqual(b);
    const c = await lowestEigenpairs(apply, n, 3, { complex: false, seed: 6 }, inlineContext(1));
    expect(distance(a.re, c.re)).toBeGreaterThan(1e-9);
  });

  it('stops on request and says so when it gives up', async () => {
    const { n, apply } = hypercube(8);
    const stopping = {
      ...inlineContext(),
      checkpoint: async () => {
        throw new Cancelled();
      },
    };
    await expect(lowestEigenpairs(apply, n, 3, { complex: false }, stopping)).rejects.toThrow(Cancelled);
    const impatient = { complex: false, maxApplications: 12, tolerance: 1e-12 };
    await expect(lowestEigenpairs(apply, n, 9, impatient, inlineContext())).rejects.toThrow(
      /above the tolerance/,
    );
  });
});
