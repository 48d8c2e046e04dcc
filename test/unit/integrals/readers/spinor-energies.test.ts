import { describe, expect, it } from 'vitest';
import { readFcidump, type SpinorContents } from '../../../../core/integrals';
import { inlineContext } from '../../../../core/job';
import { hermitianEigenvalues } from '../../../../core/linalg';
import { haveShared, sharedFolder } from './shared-data';

interface Reference {
  readonly nelec: number;
  readonly own_ci_eigenvalues: number[];
  readonly bagel_zfci_energies_printed?: number[];
}

/** Determinants of `electrons` in `spinors` places, as bit patterns. */
function determinants(spinors: number, electrons: number): number[] {
  const patterns: number[] = [];
  for (let bits = 0; bits < 2 ** spinors; bits++) {
    let count = 0;
    for (let b = bits; b !== 0; b &= b - 1) count++;
    if (count === electrons) patterns.push(bits);
  }
  return patterns;
}

/** Applies a†_p or a_p to ±|bits⟩, or gives null; the sign counts the occupied places below p. */
function ladder(state: { bits: number; sign: number }, p: number, create: boolean) {
  const occupied = ((state.bits >> p) & 1) === 1;
  if (occupied === create) return null;
  let sign = state.sign;
  for (let q = 0; q < p; q++) if ((state.bits >> q) & 1) sign = -sign;
  return { bits: state.bits ^ (1 << p), sign };
}

/** H over all determinants, operator string by operator string: no Slater–Condon rules, no symmetry. */
function matrix(contents: SpinorContents, electrons: number) {
  const m = contents.spinors;
  const patterns = determinants(m, electrons);
  const position = new Map(patterns.map((bits, i) => [bits, i]));
  const n = patterns.length;
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  patterns.forEach((bits, column) => {
    re[column * n + column] += contents.constant;
    const add = (state: { bits: number; sign: number }, factor: number, x: number, y: number) => {
      const at = (position.get(state.bits) as number) * n + column;
      re[at] += state.sign * factor * x;
      im[at] += state.sign * factor * y;
    };
    for (let q = 0; q < m; q++) {
      const one = ladder({ bits, sign: 1 }, q, false);
      if (one === null) continue;
      for (let p = 0; p < m; p++) {
        const there = ladder(one, p, true);
        if (there) add(there, 1, contents.h.re[p * m + q], contents.h.im[p * m + q]);
      }
      for (let s = 0; s < m; s++) {
        const two = ladder(one, s, false);
        if (two === null) continue;
        for (let r = 0; r < m; r++) {
          const three = ladder(two, r, true);
          if (three === null) continue;
          for (let p = 0; p < m; p++) {
            const four = ladder(three, p, true);
            const at = ((p * m + q) * m + r) * m + s;
            if (four) add(four, 0.5, contents.g.re[at], contents.g.im[at]);
          }
        }
      }
    }
  });
  return { n, re, im };
}

// Four-component files of a relativistic program (see ../shared/data/README.md): OH, 7 electrons in 10 spinors.
describe.skipIf(!haveShared)('energies from complex spinor files', () => {
  it.each(['oh_sto3g_4c_coulomb.FCIDUMP', 'oh_sto3g_4c_breit.FCIDUMP'])('%s', async (name) => {
    const files = await sharedFolder('spinor_fcidump');
    const source = files.open(name);
    const listing = files.open('reference.json');
    if (!source || !listing) throw new Error('files are missing');
    const contents = (await readFcidump(source, inlineContext())) as SpinorContents;
    const references = JSON.parse(new TextDecoder().decode(await listing.read(0, listing.size))) as Record<
      string,
      Reference
    >;
    const { nelec, own_ci_eigenvalues, bagel_zfci_energies_printed } = references[name];
    expect([contents.kind, contents.electrons, contents.notes.length]).toEqual(['spinor', nelec, 0]);
    const energies = hermitianEigenvalues(matrix(contents, nelec));
    own_ci_eigenvalues.forEach((energy, i) => {
      expect(Math.abs(energies[i] - energy)).toBeLessThan(1e-10);
    });
    // As printed, to 8 decimals, by the program that wrote the integrals.
    expect(bagel_zfci_energies_printed?.length ?? 0).toBeGreaterThan(0);
    bagel_zfci_energies_printed?.forEach((energy, i) => {
      expect(Math.abs(energies[i] - energy)).toBeLessThan(1e-8);
    });
  });
});
