import { describe, expect, it } from 'vitest';
import { parse } from './qasm/parse';

/** What the parser of the tests takes for OpenQASM 3, by the specification's chapters. */
describe('the OpenQASM 3 grammar of the tests', () => {
  it.each([
    ['version, inclusion', 'OPENQASM 3.0; include "stdgates.inc";'],
    ['comments', '// one\n/* two\nthree */ qubit q; // four'],
    ['registers', 'qubit[3] q; qubit r; bit[4] b = "0011"; bit c; qreg old[2]; creg out[2];'],
    [
      'classical types',
      'int[8] i = -3; uint u = 0xFF; float[64] f = 1.5e-3; angle[20] a = pi / 2; bool ok = true;',
    ],
    ['complex, durations', 'complex[float[64]] z = 1.5 + 2 im; duration d = 300ns; stretch g;'],
    ['arrays', 'array[int[16], 2, 2] m = {{1, 2}, {3, 4}}; const int[32] n = 2 ** 3;'],
    ['gates', 'h q[0]; U(0, 0, -pi/4) q; cx q[0], q[1]; gphase(pi / 2);'],
    ['modifiers', 'ctrl @ x a, b; ctrl(2) @ z a, b, c; negctrl @ inv @ pow(1 / 2) @ rx(0.1) a, b;'],
    ['definition of a gate', 'gate mine(t) a, b { rz(t) a; cx a, b; }'],
    ['measurements', 'c = measure q; c[0] = measure q[0]; measure q -> c; measure q; bit d = measure $0;'],
    ['conditions', 'if (c) x q; if (c[0] == 1 && !d) { x q; } else { z q; } if (c) x q; else z q;'],
    ['loops', 'for uint i in [0:2:8] { x q[i]; } for int j in {1, 3} h q[j]; while (n < 3) { n += 1; }'],
    ['switch', 'switch (i) { case 0, 1 { x q; } default { break; } }'],
    ['subroutines', 'def flip(qubit[2] q, int[8] n) -> bit { x q[0]; return measure q[1]; } flip(q, 3);'],
    ['aliases', 'let both = q[0:1] ++ r; let some = q[{0, 2}];'],
    ['timing', 'barrier q, r; delay[100ns] q; box { x q; } reset q; nop q;'],
    ['precedence and calls', 'a = -b ** 2 + sin(c) * (d >> 1) ^ ~e; f = int[8](g[0, 1:2]);'],
  ])('has %s', (_, text) => {
    expect(() => [...parse(text)]).not.toThrow();
  });

  it.each([
    ['no semicolon', 'x q'],
    ['an operand too many commas', 'cx q[0],, q[1];'],
    ['a keyword as a name', 'qubit reset;'],
    ['an open bracket', 'x q[0;'],
    ['an open scope', 'if (c) { x q;'],
    ['an unknown sign', 'x q[0]; § y;'],
    ['a condition without brackets', 'if c x q;'],
    ['a modifier without @', 'ctrl(2) z a, b, c;'],
    ['a rotation without a bracket', 'rz(0.5 q;'],
    ['a number that runs on', 'rz(1.5x) q;'],
    ['a version that comes late', 'x q; OPENQASM 3.0;'],
    ['a half string', 'include "stdgates.inc;'],
  ])('refuses %s', (_, text) => {
    expect(() => [...parse(text)]).toThrow(SyntaxError);
  });
});
