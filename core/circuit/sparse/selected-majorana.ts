import { adjoint, gate, nothing, type Operation, repeat, sequence, within } from '../gates/operation';
import { type RangedLeaf, rangedIteration, rangedIterationWires } from '../primitives/ranged-iteration';
import { unaryIterationToffoli } from '../primitives/unary-iteration';

/** Modes 0 … 2N − 1, and 2N for no operator at all. */
export function modeAddresses(modes: number): Uint32Array {
  return Uint32Array.from({ length: modes + 1 }, (_, i) => i);
}

/** Toffoli of a selected Majorana operator over 2N modes, or none: 2N − 1. */
export function selectedMajoranaToffoli(modes: number): number {
  return unaryIterationToffoli(modes + 1, false);
}

/** Wires lent: the iteration's, and the one that carries the Jordan–Wigner string. */
export function selectedMajoranaWires(modes: number): number {
  return rangedIterationWires(modeAddresses(modes), false);
}

/**
 * X_m Z_{m+1} Z_{m+2} … where the address is m < 2N (kind 0), or X_m Z_m Z_{m+1} … = −i Y_m Z_{m+1} … (kind 1);
 * where it is 2N, only `none`. Ranged unary iteration: a further wire is 1 at all modes after the flagged one and puts
 * the string of Z there.
 *
 * The strings run upward: Jordan–Wigner in reversed order. a_m then has (−1)^{n_{>m}} in place of (−1)^{n_{<m}},
 * which is the same up to the parity of all electrons: even operators that keep their number do not change.
 *
 * @param address - lowest bit first; where it is 2N, bits below the highest one of 2N may be anything.
 * @param none - made with the flag of address 2N.
 */
export function selectedMajorana(
  system: readonly number[],
  address: readonly number[],
  kind: 0 | 1,
  none: (flag: number) => Operation = () => nothing,
): Operation {
  const modes = system.length;
  const operator = (m: number, flag: number) => {
    if (m === modes) return none(flag);
    const flip = gate('CX', flag, system[m]!);
    return kind === 0 ? flip : sequence(gate('CZ', flag, system[m]!), flip);
  };
  const leaf =
    (isAdjoint: boolean): RangedLeaf =>
    (machine, m, flag, after) => {
      if (m < modes) machine.gate('CZ', after, system[m]!);
      const applied = operator(m, flag);
      if (isAdjoint) applied.runAdjoint(machine);
      else applied.run(machine);
    };
  return rangedIteration(address, modeAddresses(modes), null, 'above', leaf(false), leaf(true));
}

/** T gates around one Majorana operator whose kind a wire says: two a mode. */
export function kindExchangeT(modes: number): number {
  return 2 * modes;
}

/**
 * `inner` with its Majorana operators of kind 0 made those of the kind that a wire holds. (X − Y)/√2 = T†XT lies
 * midway between the two: a controlled X on every mode turns it into (X + Y)/√2, and a Z on every other mode mends
 * the sign that the strings pick up. Both kinds come out turned by 45°, which is e^{iφN̂} … e^{−iφN̂}: nothing for
 * operators that keep the electron number.
 */
export function ofKind(kindWire: number, system: readonly number[], inner: Operation): Operation {
  const all = (operation: (wire: number, m: number) => Operation) =>
    repeat(system.length, (m) => operation(system[m]!, m));
  const exchange = sequence(
    all((wire) => gate('CX', kindWire, wire)),
    all((wire, m) => (m % 2 === 0 ? gate('CZ', kindWire, wire) : nothing)),
  );
  return within(
    sequence(
      adjoint(exchange),
      all((wire) => gate('T', wire)),
    ),
    inner,
  );
}
