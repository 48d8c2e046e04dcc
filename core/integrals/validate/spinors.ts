import type { Finding, JobContext } from '../../job';
import type { SpinorIntegrals } from '../integral-set';
import { element, SYMMETRY_TOLERANCE } from '../recipe/symmetry';

type Unchecked = Omit<SpinorIntegrals, 'findings'>;

/** Hermiticity, the two permutations of complex integrals, and the equal energies of Kramers partners. */
export async function validateSpinors(
  set: Unchecked,
  origin: string,
  context: JobContext,
): Promise<Finding[]> {
  const findings: Finding[] = [];
  for (const check of [checkOneElectron, checkTwoElectron, checkKramers]) {
    findings.push(...check(set, origin));
    await context.checkpoint();
  }
  return findings;
}

function checkOneElectron({ h: { re, im }, spinors: n }: Unchecked, origin: string): Finding[] {
  let [max, worst, at] = [0, 0, 0];
  for (let p = 0; p < n; p++) {
    for (let q = 0; q <= p; q++) {
      const [a, b] = [p * n + q, q * n + p];
      max = Math.max(max, Math.hypot(re[a]!, im[a]!), Math.hypot(re[b]!, im[b]!));
      const off = Math.hypot(re[a]! - re[b]!, im[a]! + im[b]!);
      if (off > worst) [worst, at] = [off, a];
    }
  }
  if (worst <= SYMMETRY_TOLERANCE * max) return [];
  const [p, q] = [Math.floor(at / n), at % n];
  return [
    broken(
      origin,
      `h${element([p, q])} and h${element([q, p])} differ by ${worst.toExponential(3)} Eh from conjugates`,
      'a Hermitian matrix h',
      'One triangle is missing or not conjugated: write the file again with both.',
    ),
  ];
}

function checkTwoElectron({ g: { re, im }, spinors: n }: Unchecked, origin: string): Finding[] {
  let [max, exchange, hermitian] = [0, 0, 0];
  let [exchangeAt, hermitianAt] = [0, 0];
  for (let i = 0; i < re.length; i++) max = Math.max(max, Math.abs(re[i]!), Math.abs(im[i]!));
  for (let p = 0, at = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      for (let r = 0; r < n; r++) {
        for (let s = 0; s < n; s++, at++) {
          const swapped = ((r * n + s) * n + p) * n + q;
          const reversed = ((q * n + p) * n + s) * n + r;
          const x = Math.hypot(re[at]! - re[swapped]!, im[at]! - im[swapped]!);
          const y = Math.hypot(re[at]! - re[reversed]!, im[at]! + im[reversed]!);
          if (x > exchange) [exchange, exchangeAt] = [x, at];
          if (y > hermitian) [hermitian, hermitianAt] = [y, at];
        }
      }
    }
  }
  const name = (at: number) =>
    element([Math.floor(at / n ** 3), Math.floor(at / n ** 2) % n, Math.floor(at / n) % n, at % n]);
  const findings: Finding[] = [];
  if (exchange > SYMMETRY_TOLERANCE * max) {
    const found = `${name(exchangeAt)} and its electron-exchange partner differ by ${exchange.toExponential(3)} Eh`;
    const cure = 'Lines are missing, or the file is in physicists’ order.';
    findings.push(broken(origin, found, '(PQ|RS) = (RS|PQ)', cure));
  }
  if (hermitian > SYMMETRY_TOLERANCE * max) {
    const found = `${name(hermitianAt)} and its conjugate partner differ by ${hermitian.toExponential(3)} Eh`;
    const cure = 'Lines are missing, or indices are not in the order bra, ket, bra, ket.';
    findings.push(broken(origin, found, '(PQ|RS) = (QP|SR)*', cure));
  }
  return findings;
}

/** Time reversal gives the two spinors of a pair the same diagonal elements, whatever their phases. */
function checkKramers({ h: { re }, spinors: n }: Unchecked, origin: string): Finding[] {
  let [max, worst, at] = [0, 0, 0];
  for (let p = 0; p < n; p += 2) {
    const [a, b] = [re[p * n + p]!, re[(p + 1) * n + p + 1]!];
    max = Math.max(max, Math.abs(a), Math.abs(b));
    if (Math.abs(a - b) > worst) [worst, at] = [Math.abs(a - b), p];
  }
  if (worst <= 1e-6 * max) return [];
  return [
    {
      severity: 'warning',
      code: 'kramers-pairs',
      where: origin,
      found: `spinors ${at + 1} and ${at + 2} with diagonal elements of h ${worst.toExponential(3)} Eh apart`,
      expected: 'equal ones, because spinors 2m−1 and 2m are a Kramers pair',
      mend: 'A magnetic field, or another order of the spinors: reorder them in pairs.',
    },
  ];
}

const broken = (where: string, found: string, expected: string, mend: string): Finding => ({
  severity: 'error',
  code: 'symmetry',
  where,
  found,
  expected: `${expected} to ${SYMMETRY_TOLERANCE} of the largest element`,
  mend,
});
