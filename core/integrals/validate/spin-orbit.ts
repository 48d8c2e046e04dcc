import type { Finding } from '../../job';
import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integral-set';
import { originsOf, sumParts, type Unchecked } from './sums';

/** Relative residual below which one array counts as a multiple of another. */
const MULTIPLE_TOLERANCE = 1e-3;

/**
 * Spin–other-orbit is the spin–same-orbit integral with 2 s_j in place of s_i, so O = 2 S element by element in
 * the σ convention (Bethe & Salpeter, section 39, quoted from memory). Another ratio is a factor left out.
 */
export function checkOtherOverSame(set: Unchecked): Finding[] {
  const { same, other } = sumParts(set, (part) => part.term === 'so2');
  if (same === null || !(other instanceof Float64Array)) return [];
  let [ss, os, oo] = [0, 0, 0];
  for (let i = 0; i < same.length; i++) {
    ss += same[i]! * same[i]!;
    os += other[i]! * same[i]!;
    oo += other[i]! * other[i]!;
  }
  if (ss === 0 || oo === 0) return [];
  const ratio = os / ss;
  const residual = Math.sqrt(Math.max(0, oo - ratio * os) / oo);
  if (residual < MULTIPLE_TOLERANCE && Math.abs(ratio - 2) < 2 * MULTIPLE_TOLERANCE) return [];
  const where = originsOf(set.twoElectron.filter((part) => part.term === 'so2'));
  const isMultiple = residual < MULTIPLE_TOLERANCE;
  return [
    {
      severity: 'warning',
      code: 'factor-two',
      where,
      found: isMultiple
        ? `spin–other-orbit = ${ratio.toPrecision(4)} × spin–same-orbit, element by element`
        : `spin–other-orbit is no multiple of spin–same-orbit (${(100 * residual).toFixed(0)} % left over)`,
      expected: 'the ratio 2 of the Breit–Pauli operators in the σ convention',
      mend: isMultiple
        ? ratioCure(ratio)
        : 'Check "momentum" of the two parts and that both hold the same orbitals.',
    },
  ];
}

function ratioCure(ratio: number): string {
  const near = (value: number) => Math.abs(ratio - value) < 2 * MULTIPLE_TOLERANCE * Math.abs(value);
  if (near(1)) {
    return 'A factor 2 is missing: the same-orbit part may be written with s instead of σ ("spin": "s"), the other-orbit part may hold an extra ½ ("half": "inside"), or one array holds both (role "two-electron spin-orbit").';
  }
  if (near(4)) {
    return 'A factor 2 too many: the other-orbit part may be written with s instead of σ ("spin": "s"), or the same-orbit part may hold an extra ½ ("half": "inside").';
  }
  if (near(-2)) return 'The signs differ: the momentum pair of one part may be transposed ("scale": -1).';
  return 'Check "unit", "scale", "spin" and "half" of the two parts.';
}

/**
 * Electrons screen the nuclei, so their mean field opposes the nuclear spin–orbit operator. Compared are the
 * signs of ⟨F, h⟩, F being a stored mean field or the direct one, F^k_pq = Σ_c n_c S^k_pq,cc.
 */
export function checkScreening(set: Unchecked): Finding[] {
  const nuclear = sumParts(set, (part) => part.term === 'so1').spin;
  if (nuclear === null) return [];
  const findings: Finding[] = [];
  const meanField = sumParts(set, (part) => part.term === 'somf');
  if (meanField.spin !== null) {
    const where = originsOf(set.oneElectron.filter((part) => part.term === 'somf'));
    findings.push(...compareSigns(nuclear, meanField.spin, where, 'the mean field'));
  }
  const { same } = sumParts(set, (part) => part.term === 'so2');
  if (same !== null) {
    const where = originsOf(set.twoElectron.filter((part) => part.term === 'so2'));
    findings.push(
      ...compareSigns(nuclear, directField(same, set), where, 'the direct mean field of this array'),
    );
  }
  return findings;
}

function directField(same: Float64Array, { orbitals: n, occupations }: Unchecked): Float64Array {
  const [anti, sym] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const field = new Float64Array(3 * n * n);
  for (let k = 0; k < 3; k++) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < p; q++) {
        const row = (k * anti + (p * (p - 1)) / 2 + q) * sym;
        let sum = 0;
        for (let c = 0; c < n; c++) sum += occupations[c]! * same[row + symmetricPair(c, c)]!;
        field[k * n * n + p * n + q] = sum;
        field[k * n * n + q * n + p] = -sum;
      }
    }
  }
  return field;
}

function compareSigns(nuclear: Float64Array, field: Float64Array, where: string, what: string): Finding[] {
  let [dot, nn, ff] = [0, 0, 0];
  for (let i = 0; i < nuclear.length; i++) {
    dot += nuclear[i]! * field[i]!;
    nn += nuclear[i]! ** 2;
    ff += field[i]! ** 2;
  }
  if (nn === 0 || ff === 0) return [];
  const cosine = dot / Math.sqrt(nn * ff);
  // Near zero the sign says nothing: few orbitals, or a field of another shape.
  if (cosine < 0.3) return [];
  return [
    {
      severity: 'warning',
      code: 'screening-sign',
      where,
      found: `${what} has the same sign as the nuclear spin–orbit part (cosine ${cosine.toFixed(2)})`,
      expected: 'the opposite sign, because electrons screen the nuclei',
      mend: 'The sign or the momentum pair of one of the two may be reversed ("scale": -1), or a transposed index order is meant.',
    },
  ];
}
