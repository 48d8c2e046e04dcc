/** Words of the language and of its standard gate library that no register may be called. */
const TAKEN = new Set(
  (
    'OPENQASM include defcalgrammar def cal defcal gate extern box let break continue if else end return for while in ' +
    'switch case default nop pragma input output const readonly mutable qreg qubit creg bool bit int uint float angle ' +
    'complex array void duration stretch gphase inv pow ctrl negctrl dim durationof delay reset measure barrier true ' +
    'false im pi tau euler sizeof arccos arcsin arctan ceiling cos exp floor log mod popcount rotl rotr sin sqrt tan real ' +
    'imag U p x y z h s sdg t tdg sx rx ry rz cx cy cz cp crx cry crz ch swap ccx cswap cu CX phase cphase id u1 u2 u3'
  ).split(' '),
);

/**
 * A name as an identifier that is neither a word of OpenQASM 3, nor a gate of `stdgates.inc`, nor in use; takes it.
 * @param used - identifiers in use; the new one is added
 */
export function takeIdentifier(name: string, used: Set<string>): string {
  const plain = name.replace(/[^A-Za-z0-9_]+/g, '_').replace(/^(?![A-Za-z_])/, '_');
  let identifier = plain;
  for (let n = 2; TAKEN.has(identifier) || used.has(identifier); n++) identifier = `${plain}_${n}`;
  used.add(identifier);
  return identifier;
}
