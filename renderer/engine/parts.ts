import type { IntegralSet, OneElectronPart, Recipe, TwoElectronPart } from '../../core/integrals';
import type { ReadPart } from './protocol';

function holdsOne(part: OneElectronPart, n: number): string {
  return part.spin ? `3 × ${n} × ${n}, imaginary antisymmetric` : `${n} × ${n}, real symmetric`;
}

function holdsTwo(part: TwoElectronPart, n: number): string {
  if (part.kind === 'charge-charge') return `${n}⁴, real, eightfold symmetric`;
  // One array of contact integrals stands for three equal diagonal components.
  if (part.role === 'spin-spin contact') return `${n}⁴, real, eightfold symmetric`;
  if (part.kind === 'spin-spin') return `6 × ${n}⁴, real, eightfold symmetric`;
  const both =
    part.same && part.other ? 'same-orbit and other-orbit' : part.same ? 'same-orbit' : 'other-orbit';
  return `3 × ${n}⁴, antisymmetric × symmetric pairs, ${both}`;
}

const PLAIN_UNITS: Readonly<Record<string, string>> = { hartree: 'Eh', 'cm-1': 'cm⁻¹', eV: 'eV', meV: 'meV' };

/** The conventions the recipe states for a part, in words; what it leaves out is the default and goes without saying. */
function readAs(part: Recipe['parts'][number] | undefined): string {
  if (!part) return '–';
  const said = [
    part.order === 'physicists' ? 'physicists’ order' : '',
    part.spin === 's' ? 's = σ/2' : '',
    part.half === 'inside' ? '½ inside' : '',
    part.momentum === 'second' ? 'momentum second' : '',
    part.value ?? '',
    part.layout && part.layout !== 'full' ? part.layout.replaceAll('-', ' ') : '',
    part.scale !== undefined && part.scale !== 1 ? `times ${part.scale}` : '',
  ].filter((word) => word !== '');
  return said.length ? said.join(', ') : 'as is';
}

/** The parts of a set as Load lists them: one row for everything a recipe part holds. */
export function listParts(set: IntegralSet, recipe: Recipe): ReadPart[] {
  const stated = (id: string) => {
    const part = recipe.parts.find((p) => p.id === id);
    return { units: PLAIN_UNITS[part?.unit ?? 'hartree']!, readAs: readAs(part) };
  };
  if (set.kind === 'spinor') {
    const { spinors, provenance } = set;
    const origin = provenance.files[0]?.path ?? provenance.title;
    return [
      {
        id: 'spinor',
        origin,
        holds: `${spinors} complex spinors`,
        role: 'spinor',
        term: 'sf',
        units: 'Eh',
        readAs: 'as is',
      },
    ];
  }
  const rows = new Map<string, ReadPart>();
  const add = (part: OneElectronPart | TwoElectronPart, holds: string) => {
    const known = rows.get(part.id);
    const { id, origin, role, term } = part;
    rows.set(id, {
      id,
      origin,
      role,
      term,
      ...stated(id),
      holds: known ? `${known.holds}; ${holds}` : holds,
    });
  };
  for (const part of set.oneElectron) add(part, holdsOne(part, set.orbitals));
  for (const part of set.twoElectron) add(part, holdsTwo(part, set.orbitals));
  return [...rows.values()];
}
