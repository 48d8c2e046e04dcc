import type { IntegralSet, OneElectronPart, TwoElectronPart } from '../../core/integrals';
import type { ReadPart } from './protocol';

function holdsOne(part: OneElectronPart, n: number): string {
  return part.spin ? `3 × ${n} × ${n}, imaginary antisymmetric` : `${n} × ${n}, real symmetric`;
}

function holdsTwo(part: TwoElectronPart, n: number): string {
  if (part.kind === 'charge-charge') return `${n}⁴, real, eightfold symmetric`;
  if (part.kind === 'spin-spin') return `6 × ${n}⁴, real, eightfold symmetric`;
  const both =
    part.same && part.other ? 'same-orbit and other-orbit' : part.same ? 'same-orbit' : 'other-orbit';
  return `3 × ${n}⁴, antisymmetric × symmetric pairs, ${both}`;
}

/** The parts of a set as Load lists them: one row for everything a recipe part holds. */
export function listParts(set: IntegralSet): ReadPart[] {
  if (set.kind === 'spinor') {
    const { spinors, provenance } = set;
    const origin = provenance.files[0]?.path ?? provenance.title;
    return [{ id: 'spinor', origin, holds: `${spinors} complex spinors`, role: 'spinor', term: 'sf' }];
  }
  const rows = new Map<string, ReadPart>();
  const add = (part: OneElectronPart | TwoElectronPart, holds: string) => {
    const known = rows.get(part.id);
    const { id, origin, role, term } = part;
    rows.set(id, { id, origin, role, term, holds: known ? `${known.holds}; ${holds}` : holds });
  };
  for (const part of set.oneElectron) add(part, holdsOne(part, set.orbitals));
  for (const part of set.twoElectron) add(part, holdsTwo(part, set.orbitals));
  return [...rows.values()];
}
