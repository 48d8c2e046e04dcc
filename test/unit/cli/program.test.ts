import { describe, expect, it } from 'vitest';
import { HelpShown, parseCall } from '../../../app/cli/program';
import { formatVariant } from '../../../core/encode';
import { InputError } from '../../../core/job';

const parse = (line: string) => parseCall(line.split(' ').filter(Boolean), '/demo', () => {});

function refusal(line: string): InputError {
  try {
    parse(line);
  } catch (error) {
    if (error instanceof InputError) return error;
    throw error;
  }
  throw new Error(`accepted: ${line}`);
}

describe('the command line', () => {
  it('has these defaults', () => {
    expect(parse('compare data --target 5cm-1')).toEqual({
      request: {
        command: 'compare',
        files: ['data'],
        recipe: null,
        comparison: {
          terms: 'all',
          electrons: null,
          occupations: null,
          window: null,
          target: { value: 5, unit: 'cm-1', meaning: 'level' },
          variants: null,
          threshold: 0,
          bits: 'auto',
          overlaps: [1],
          qubitsMax: null,
        },
        mixingState: null,
      },
      manner: { json: false, quiet: false, seed: 1, workers: 1, trace: false },
    });
  });

  it('reads which frames to optimise, on every command that plans or checks', () => {
    const asked = '--orbital-frame optimised';
    const frames = { spin: 'given', orbital: 'optimised' };
    expect(parse(`compare data --target 5cm-1 ${asked}`).request).toMatchObject({ comparison: { frames } });
    expect(parse(`demo ${asked}`).request).toMatchObject({ comparison: { frames } });
    expect(parse(`verify data ${asked}`).request).toMatchObject({ frames });
    expect(
      parse(`circuit data --target 5cm-1 --variant sparse/-/index/none/clean --count-only ${asked}`).request,
    ).toMatchObject({ circuit: { frames } });
    expect(parse('verify data --spin-frame optimised').request).toMatchObject({
      frames: { spin: 'optimised', orbital: 'given' },
    });
    expect(parse('verify data --spin-frame given').request).not.toHaveProperty('frames');
  });

  it('reads every option of compare', () => {
    const { request, manner } = parse(
      'compare a b --target 0.5meV --meaning splitting --overlap 0.8,0.7 --terms so2,sf --threshold auto ' +
        '--bits 12 --qubits-max 2000 --electrons 8 --occupations 2,2,1.5 --recipe r.json --json --quiet --seed 7 --workers 2 ' +
        '--variants sparse/-/index/none/* --window 6,3-4 --window-electrons 2',
    );
    expect(request).toMatchObject({
      files: ['a', 'b'],
      recipe: 'r.json',
      comparison: {
        terms: ['sf', 'so2'],
        electrons: 8,
        occupations: [2, 2, 1.5],
        window: { orbitals: [3, 4, 6], electrons: 2 },
        target: { value: 0.5, unit: 'meV', meaning: 'splitting' },
        threshold: 'auto',
        bits: 12,
        overlaps: [0.8, 0.7],
        qubitsMax: 2000,
      },
    });
    if (request.command !== 'compare') throw new Error('another command');
    expect(request.comparison.variants?.map(formatVariant)).toEqual([
      'sparse/-/index/none/plain',
      'sparse/-/index/none/clean',
      'sparse/-/index/none/dirty',
    ]);
    expect(manner).toEqual({ json: true, quiet: true, seed: 7, workers: 2, trace: false });
  });

  it('reads the number of factors and where mixing is kept', () => {
    const line = 'compare d --target 5cm-1 --variants compressed/separate/index/optimised/clean';
    const { request } = parse(`${line} --factors 6N --mixing-state m.json`);
    expect(request).toMatchObject({
      comparison: { factors: { count: 6, perOrbital: true } },
      mixingState: 'm.json',
    });
    expect(parse(`${line} --factors 120`).request).toMatchObject({
      comparison: { factors: { count: 120, perOrbital: false } },
    });
    for (const bad of ['0', '6n', '-3', '1.5N', 'N']) {
      expect(() => parse(`${line} --factors ${bad}`)).toThrow('--factors');
    }
    expect(() => parse('compare d --target 5cm-1 --mixing-state m.json')).toThrow('no variant with mixed');
  });

  it('takes one overlap for both levels of a splitting', () => {
    const { request } = parse('compare d --target 5cm-1 --meaning splitting --overlap 0.5');
    expect(request).toMatchObject({ comparison: { overlaps: [0.5, 0.5] } });
  });

  it('compares the demo, or copies it', () => {
    expect(parse('demo').request).toMatchObject({ command: 'compare', files: ['/demo'] });
    expect(parse('demo --out here').request).toEqual({ command: 'copy-demo', from: '/demo', out: 'here' });
  });

  it('reads the sizes of whatif and leaves out those not given', () => {
    const line =
      'whatif --method sparse --spin-orbitals 108 --lambda 2135.3 --coefficients 705831 --target 1mEh';
    expect(parse(line).request).toEqual({
      command: 'whatif',
      options: {
        method: 'sparse',
        spinOrbitals: 108,
        lambda: 2135.3,
        target: 1e-3,
        keepBits: 10,
        rotationBits: 16,
        coefficients: 705_831,
      },
    });
  });

  it.each([
    ['compare data', '--target'],
    ['compare --target 5cm-1', "missing required argument 'files'"],
    ['compare data --target 5', '"5"'],
    ['compare data --target -5cm-1', '"-5cm-1"'],
    ['compare data --target 5cm-1 --terms sf,xx', '"xx"'],
    ['compare data --target 5cm-1 --threshold -1', '"-1"'],
    ['compare data --target 5cm-1 --threshold 1e999', '"1e999"'],
    ['compare data --target 5cm-1 --bits 3', '"3"'],
    ['compare data --target 5cm-1 --bits 4.5', '"4.5"'],
    ['compare data --target 5cm-1 --overlap 0', '"0"'],
    ['compare data --target 5cm-1 --overlap 0.5,0.5', 'two numbers'],
    ['compare data --target 5cm-1 --meaning gap', 'gap'],
    ['compare data --target 5cm-1 --workers 0', '"0"'],
    ['compare data --target 5cm-1 --variants triplet/joint/index', '3 parts'],
    ['compare data --target 5cm-1 --occupations 2,3', '"3"'],
    ['compare data --target 5cm-1 --window 0-3', '"0-3"'],
    ['compare data --target 5cm-1 --window 6-3', '"6-3"'],
    ['verify data --window-electrons 3', 'no window'],
    ['compare data --target 5cm-1 --spin-frame best', 'best'],
    ['verify data --orbital-frame localised', 'localised'],
    ['verify data --threshold auto', '"auto"'],
    ['verify data --states 0', '"0"'],
    ['whatif --method magic --spin-orbitals 4 --lambda 1 --target 1mEh', 'magic'],
    ['inspect data --nonsense', '--nonsense'],
    ['nonsense', 'nonsense'],
    ['', 'no command'],
  ])('refuses "%s" in one line that names what was found', (line, found) => {
    const { message } = refusal(line);
    expect(message).toContain(found);
    expect(message).not.toContain('\n');
    expect(message).toMatch(/expected .+\. .+\.$/);
  });

  it('shows help and version through the given writer', () => {
    let shown = '';
    const write = (text: string) => {
      shown += text;
    };
    expect(() => parseCall(['compare', '--help'], '/demo', write)).toThrow(HelpShown);
    expect(shown).toContain('--qubits-max');
    shown = '';
    expect(() => parseCall(['--version'], '/demo', write)).toThrow(HelpShown);
    expect(shown).toMatch(/^\d+\.\d+\.\d+\n$/);
  });
});
