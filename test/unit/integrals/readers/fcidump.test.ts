import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  memorySource,
  readFcidump,
  type SpinFreeContents,
  type SpinorContents,
} from '../../../../core/integrals';
import { type InputError, inlineContext } from '../../../../core/job';

const context = inlineContext();
const read = (text: string) => readFcidump(memorySource('F', text), context);
const readReal = async (text: string) => (await read(text)) as SpinFreeContents;
const readComplex = async (text: string) => (await read(text)) as SpinorContents;
const problem = async (text: string): Promise<InputError> => {
  const result = await read(text).catch((error: unknown) => error);
  expect((result as Error)?.name, JSON.stringify(result)).toBe('InputError');
  return result as InputError;
};

const HEAD = '&FCI NORB=2,NELEC=2,MS2=0,\n ORBSYM=1,1,\n ISYM=1,\n&END\n';
const BODY = '0.7 1 1 1 1\n0.1 2 1 1 1\n0.6 2 2 1 1\n0.2 2 1 2 1\n0.05 2 2 2 1\n0.65 2 2 2 2\n';
const TAIL = '-1.2 1 1 0 0\n0.3 2 1 0 0\n-0.5 2 2 0 0\n0.9 0 0 0 0\n';
const PLAIN = HEAD + BODY + TAIL;
/** (11|11), (21|11), (21|21), (22|11), (22|21), (22|22): the pairs-triangle over 11, 21, 22. */
const TRIANGLE = [0.7, 0.1, 0.2, 0.6, 0.05, 0.65];

describe('readFcidump, real orbitals', () => {
  it('reads a plain file into packed form', async () => {
    const { kind, origin, orbitals, electrons, ms2, constant, oneElectron, twoElectron, notes } =
      await readReal(PLAIN);
    expect({ kind, origin, orbitals, electrons, ms2, constant }).toEqual({
      kind: 'spin-free',
      origin: 'F',
      orbitals: 2,
      electrons: 2,
      ms2: 0,
      constant: 0.9,
    });
    expect([...oneElectron]).toEqual([-1.2, 0.3, 0.3, -0.5]);
    expect([...twoElectron]).toEqual(TRIANGLE);
    expect(notes).toEqual([]);
  });

  // The namelist is Fortran's: any order, case and spacing of keys, three ways to end it.
  it.each([
    ['on one line', '&FCI NORB=2,NELEC=2,MS2=0,ORBSYM=1,1,ISYM=1 /\n'],
    ['one key a line', '&FCI\nNORB=2,\nNELEC=2,\nMS2=0,\nUHF=.FALSE.,\nORBSYM=1,1,\nISYM=1,\n&END\n'],
    ['lower case, $ marks', ' $fci isym=1 orbsym = 1 1\n nelec = 2 norb=  2 ms2=0\n $end\n'],
    ['repeat counts, comment', '&FCI NORB=2,NELEC=2, ! two of each / &END\nORBSYM=2*1,ISYM=1\n/\n'],
    ['wrapped labels', '&FCI NORB=2,NELEC=2,MS2=0,ORBSYM=1,\n1\n,ISYM=1\n&END\n'],
    ['blank lines and a byte-order mark', '\ufeff\n\n&FCI NORB=2,NELEC=2,MS2=0 &END\n\n'],
    ['no MS2, no ORBSYM', '&FCI NORB=2,NELEC=2 &END trailing words\n'],
  ])('accepts a header %s', async (_name, head) => {
    const { orbitals, electrons, twoElectron } = await readReal(head + BODY + TAIL);
    expect([orbitals, electrons, ...twoElectron]).toEqual([2, 2, ...TRIANGLE]);
  });

  it('notes unknown keys, missing NELEC, orbital energies, fields too many and orbitals never named', async () => {
    const { notes, electrons } = await readReal(
      `&FCI NORB=3,PNTGRP='x/y',NPROP=1 1\n&END\n${BODY}-0.7 1 0 0 0\n0.2 2 0 0 0 # e\n${TAIL}`,
    );
    expect(electrons).toBe(null);
    const text = notes.join(' ');
    expect(text).toContain('PNTGRP, NPROP');
    expect(text).toContain('no NELEC');
    expect(text).toContain('2 orbital energies');
    expect(text).toContain('1 lines have more than five fields');
    expect(text).toContain('orbital 3');
  });

  it('accepts Fortran exponents, commas, tabs, carriage returns and no last newline', async () => {
    const lines = `0.7D+00,1,1,1,1\r\n\t1.0d-1 2 1 1 1\r\n6.E-1 2 2 1 1 \r\n2.0-001 2 1 2 1\r\n.05 2 2 2 1\r\n+65e-2 2 2 2 2\r\n`;
    const contents = await readReal(HEAD + lines + TAIL.trimEnd());
    expect([...contents.twoElectron]).toEqual(TRIANGLE);
    expect(contents.constant).toBe(0.9);
  });

  it('gives the same for any order of lines, any of the eight permutations, and repeats that agree', async () => {
    const n = 4;
    const h = (p: number, q: number) => Math.sin(1 + p + q) / (1 + p * q);
    const g = (p: number, q: number, r: number, s: number) =>
      Math.cos(p + q) * Math.cos(r + s) + (p * q + r * s) / 8;
    const entries: { value: number; indices: number[] }[] = [];
    for (let p = 1; p <= n; p++) {
      for (let q = 1; q <= p; q++) {
        entries.push({ value: h(p, q), indices: [p, q, 0, 0] });
        for (let r = 1; r <= p; r++) {
          for (let s = 1; s <= r; s++) {
            if ((p * (p - 1)) / 2 + q >= (r * (r - 1)) / 2 + s) {
              entries.push({ value: g(p, q, r, s), indices: [p, q, r, s] });
            }
          }
        }
      }
    }
    const head = `&FCI NORB=${n},NELEC=2,MS2=0 &END\n`;
    const text = (list: typeof entries) =>
      [head, ...list.map(({ value, indices }) => `${value} ${indices.join(' ')}\n`), '1.5 0 0 0 0\n'].join(
        '',
      );
    const plain = await readReal(text(entries));
    const permuted = fc
      .tuple(
        fc.shuffledSubarray(entries, { minLength: entries.length }),
        fc.array(fc.nat(7), { minLength: entries.length, maxLength: entries.length }),
        fc.subarray(entries),
      )
      .map(([list, codes, again]) => [
        ...list.map(({ value, indices: [p, q, r, s] }, e) => {
          const bra = codes[e] & 1 ? [q, p] : [p, q];
          const ket = codes[e] & 2 ? [s, r] : [r, s];
          return { value, indices: codes[e] & 4 && r > 0 ? [...ket, ...bra] : [...bra, ...ket] };
        }),
        ...again,
      ]);
    await fc.assert(
      fc.asyncProperty(permuted, async (list) => {
        const contents = await readReal(text(list));
        expect(contents.oneElectron).toEqual(plain.oneElectron);
        expect(contents.twoElectron).toEqual(plain.twoElectron);
      }),
      { numRuns: 40 },
    );
    // And the plain one against the formula.
    for (let p = 1; p <= n; p++) {
      for (let q = 1; q <= n; q++)
        expect(plain.oneElectron[(p - 1) * n + q - 1]).toBe(h(Math.max(p, q), Math.min(p, q)));
    }
  });

  it('reads across the borders of its blocks and reports progress to the end', async () => {
    // Over 2 MiB of lines of uneven length; an entry cut anywhere would show as a wrong sum.
    const lines: string[] = [];
    for (let i = 0; i < 60000; i++) lines.push(`${' '.repeat(i % 37)}0.7${'0'.repeat(i % 11)} 1 1 1 1`);
    const told: [number, number | null][] = [];
    let checkpoints = 0;
    const text = `${HEAD}${lines.join('\n')}\n${TAIL}`;
    const contents = (await readFcidump(memorySource('F', text), {
      ...context,
      report: (_stage, done, total) => told.push([done, total]),
      checkpoint: async () => {
        checkpoints++;
      },
    })) as SpinFreeContents;
    expect(contents.twoElectron[0]).toBe(0.7);
    expect(told.at(-1)).toEqual([text.length, text.length]);
    expect(checkpoints).toBeGreaterThan(1);
  });
});

describe('readFcidump, complex spinors', () => {
  const head = '&FCI NORB=2,NELEC=1,ORBSYM=1,1,ISYM=0,TREL=.TRUE.\n&END\n';
  const at = (i: number, j: number, k: number, l: number) => ((i * 2 + j) * 2 + k) * 2 + l;

  it('fills (kl|ij) = (ij|kl), and conjugate partners only where they are not listed', async () => {
    const { g, h, spinors, constant } = await readComplex(
      `${head}(0.5,0.25) 2 1 1 1\n(0.5,1e-18)1 1 1 1\n( 0.1 , -0.2 ) 2 1 2 1\n(-1.5,0) 1 1 0 0\n(0.3,0.4) 2 1 0 0\n(2.5,0.0) 0 0 0 0\n`,
    );
    expect([spinors, constant]).toEqual([2, 2.5]);
    const value = (i: number, j: number, k: number, l: number) => [
      g.re[at(i, j, k, l)],
      g.im[at(i, j, k, l)],
    ];
    expect(value(1, 0, 0, 0)).toEqual([0.5, 0.25]);
    expect(value(0, 0, 1, 0)).toEqual([0.5, 0.25]);
    expect(value(0, 1, 0, 0)).toEqual([0.5, -0.25]);
    expect(value(0, 0, 0, 1)).toEqual([0.5, -0.25]);
    expect(value(1, 0, 1, 0)).toEqual([0.1, -0.2]);
    expect(value(0, 1, 0, 1)).toEqual([0.1, 0.2]);
    expect([...h.re]).toEqual([-1.5, 0.3, 0.3, 0]);
    expect([...h.im]).toEqual([0, -0.4, 0.4, 0]);
  });

  it('keeps both of two conjugate partners as listed, for validation to judge', async () => {
    const { g, h } = await readComplex(
      `${head}(0.5,0.25) 2 1 1 1\n(0.6,-0.25) 1 2 1 1\n(0.3,0.4) 2 1 0 0\n(0.3,0.1) 1 2 0 0\n(2.5,0.0) 0 0 0 0\n`,
    );
    expect([g.re[at(1, 0, 0, 0)], g.re[at(0, 1, 0, 0)]]).toEqual([0.5, 0.6]);
    expect([h.im[2], h.im[1]]).toEqual([0.4, 0.1]);
  });

  it('takes complex values without TREL, and real values with TREL, as spinors', async () => {
    expect((await read('&FCI NORB=2,NELEC=1 &END\n(1,0) 1 1 0 0\n(0,0) 0 0 0 0\n')).kind).toBe('spinor');
    expect((await read(`${head}1.0 1 1 0 0\n0 0 0 0 0\n`)).kind).toBe('spinor');
  });
});

describe('readFcidump, bad input', () => {
  it.each<[string, string, string, string[]]>([
    ['an empty file', '', 'empty-file', ['F:']],
    ['blank lines only', '\n\n', 'bad-header', ['&FCI']],
    ['another group', '&HF X=1 &END\n', 'bad-header', ['F:1', '&HF X=1']],
    ['no header', BODY, 'bad-header', ['F:1', '0.7 1 1 1 1']],
    ['an open header', `&FCI NORB=2,NELEC=2\n${BODY}`, 'unclosed-header', ['F:2', '&END']],
    ['a header and no more', HEAD, 'no-entries', ['F:4']],
    ['an open header at the end', '&FCI NORB=2,', 'unclosed-header', ['&END']],
    ['no NORB', `&FCI NELEC=2 &END\n${BODY}`, 'bad-header', ['NORB']],
    ['NORB in words', `&FCI NORB=two &END\n${BODY}`, 'bad-header', ['NORB=two']],
    ['NORB zero', `&FCI NORB=0 &END\n${BODY}`, 'bad-header', ['NORB=0']],
    ['NORB negative', `&FCI\nNORB=-3 &END\n${BODY}`, 'bad-header', ['F:2', 'NORB=-3']],
    ['NORB twice', `&FCI NORB=2,NORB=3 &END\n${BODY}`, 'bad-header', ['NORB twice']],
    ['NORB over the limit', `&FCI NORB=100000000 &END\n${BODY}`, 'bad-header', ['400']],
    [
      'NORB that the file cannot fill',
      `&FCI NORB=400 &END\n${BODY}`,
      'implausible-size',
      ['NORB=400', 'MiB'],
    ],
    [
      'spinors that the file cannot fill',
      `&FCI NORB=800,TREL=T &END\n(1,0) 1 1 0 0\n`,
      'implausible-size',
      ['800'],
    ],
    [
      'labels that do not count NORB',
      `&FCI NORB=3,ORBSYM=1,1 &END\n${BODY}`,
      'orbsym-count',
      ['2 ORBSYM', 'NORB=3'],
    ],
    ['too many electrons', `&FCI NORB=2,NELEC=5 &END\n${BODY}`, 'electron-count', ['NELEC=5']],
    ['electrons that MS2 does not fit', `&FCI NORB=2,NELEC=2,MS2=1 &END\n${BODY}`, 'spin-count', ['MS2=1']],
    ['MS2 too large', `&FCI NORB=2,NELEC=3,MS2=3 &END\n${BODY}`, 'spin-count', ['MS2=3']],
    [
      'separate spins',
      `&FCI NORB=2,NELEC=2,UHF=.TRUE. &END\n${BODY}`,
      'unrestricted',
      ['UHF=.TRUE.', 'natural'],
    ],
    ['separate spins, another spelling', `&FCI NORB=2,IUHF=1 &END\n${BODY}`, 'unrestricted', ['UHF']],
    ['a word for a value', `${HEAD}0.7 1 1 1 1\nabc 2 1 1 1\n`, 'bad-number', ['F:6', 'abc']],
    ['a broken exponent', `${HEAD}0.7E 1 1 1 1\n`, 'bad-number', ['F:5', '0.7E']],
    ['stars', `${HEAD}******** 1 1 1 1\n`, 'bad-number', ['*****']],
    ['NaN', `${HEAD}NaN 1 1 1 1\n`, 'not-finite', ['F:5', 'NaN']],
    ['infinity', `${HEAD}-Infinity 1 1 1 1\n`, 'not-finite', ['Infinity']],
    ['overflow', `${HEAD}1E+999 1 1 1 1\n`, 'not-finite', ['1E+999']],
    ['an index too large', `${HEAD}0.7 3 1 1 1\n`, 'index-out-of-range', ['F:5', 'index 3', 'NORB=2']],
    ['an index far too large', `${HEAD}0.7 1 99999999999999999999 1 1\n`, 'index-out-of-range', ['F:5']],
    ['a negative index', `${HEAD}0.7 -1 1 1 1\n`, 'index-out-of-range', ['-1']],
    ['a fractional index', `${HEAD}0.7 1.5 1 1 1\n`, 'bad-index', ['1.5']],
    ['a zero among the indices', `${HEAD}0.7 1 0 1 1\n`, 'bad-indices', ['1 0 1 1']],
    ['two zeros in front', `${HEAD}0.7 0 0 1 1\n`, 'bad-indices', ['0 0 1 1']],
    ['three indices', `${HEAD}${BODY}0.7 1 1 1\n`, 'too-few-fields', ['F:11']],
    ['a file cut in a line', PLAIN.slice(0, -4), 'too-few-fields', ['cut short']],
    ['a file cut between lines', HEAD + BODY, 'no-core-energy', ['F:10', '0 0 0 0']],
    [
      'two values for one integral',
      `${HEAD}${BODY}${TAIL}0.11 1 1 1 2\n`,
      'duplicate-entry',
      ['F:15', 'line 6', '0.11', '0.1'],
    ],
    ['zero, then a value', `${HEAD}0.0 2 1 2 1\n${BODY}${TAIL}`, 'duplicate-entry', ['F:9', 'line 5']],
    ['two values for one h', `${HEAD}${BODY}${TAIL}0.4 1 2 0 0\n`, 'duplicate-entry', ['F:15', 'line 12']],
    ['two core energies', `${PLAIN}0.8 0 0 0 0\n`, 'duplicate-entry', ['F:15', 'line 14']],
    ['a complex value among real ones', `${HEAD}${BODY}(0.1,0.2) 1 1 2 2\n`, 'mixed-values', ['F:11']],
    ['an odd number of spinors', `&FCI NORB=3 &END\n(1,0) 1 1 1 1\n`, 'odd-spinors', ['Kramers']],
    ['half a complex value', `&FCI NORB=2 &END\n(0.1 1 1 1 1\n`, 'bad-number', ['F:2']],
    ['a complex core energy', `&FCI NORB=2 &END\n(0.1,0.2) 0 0 0 0\n`, 'complex-constant', ['0.2']],
    [
      'a spinor clash',
      `&FCI NORB=2 &END\n(1,0) 2 1 1 1\n(1,1) 1 1 2 1\n(0,0) 0 0 0 0\n`,
      'duplicate-entry',
      ['F:3', 'line 2', '(1,1)'],
    ],
    ['binary garbage', `${HEAD}\u0000\u0001\u0002\u0003 1 1 1 1\n`, 'bad-number', ['\\x00']],
    ['a line without end', `${HEAD}${'9'.repeat(300000)}`, 'line-too-long', ['F:5']],
  ])('refuses %s', async (_name, text, code, parts) => {
    const error = await problem(text);
    expect(error.code, error.message).toBe(code);
    for (const part of parts) expect(error.message).toContain(part);
    expect(error.message).not.toContain('\n');
    expect(error.mend.length).toBeGreaterThan(10);
  });

  it('lets repeats differ by a rounding of the last printed digit', async () => {
    const contents = await readReal(`${HEAD}${BODY}${TAIL}0.10000000000001 1 1 1 2\n`);
    expect(contents.twoElectron[1]).toBe(0.1);
  });
});
