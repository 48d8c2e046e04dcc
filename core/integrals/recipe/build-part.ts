import type { Finding, JobContext } from '../../job';
import { type OneElectronPart, pairsTriangleLength, type TwoElectronPart } from '../integral-set';
import type { RawArray, SpinFreeContents } from '../raw';
import type { IndexList } from '../readers';
import { convertEightfold } from './eightfold';
import { convertList, expandSummedList } from './index-list';
import type { ResolvedPart } from './part';
import { asRole, convertSpinOrbit } from './spin-orbit';
import { storedArray } from './stored';
import { convertTwoIndex } from './two-index';

/** What one part of the recipe contributes to the set, with what was noticed on the way. */
export interface BuiltPart {
  readonly oneElectron: readonly OneElectronPart[];
  readonly twoElectron: readonly TwoElectronPart[];
  readonly findings: readonly Finding[];
}

/** A whole spin-free file in the units and factors of its part. Scales the arrays in place. */
export function buildSpinFree(part: ResolvedPart, contents: SpinFreeContents): BuiltPart {
  const { id, role, term } = part;
  const { oneElectron, twoElectron, origin } = contents;
  scaleInPlace(oneElectron, part.factor);
  scaleInPlace(twoElectron, part.twoElectronFactor);
  const findings = contents.notes.map((note) => fileNote(origin, note));
  return {
    oneElectron: [{ id, role, term, origin, charge: oneElectron, spin: null }],
    twoElectron: [{ kind: 'charge-charge', id, role, term, origin, values: twoElectron }],
    findings,
  };
}

/** Something a reader wants to be known. */
export function fileNote(origin: string, note: string): Finding {
  return {
    severity: 'note',
    code: 'file-note',
    where: origin,
    found: note.replace(/\.$/, ''),
    expected: 'your confirmation',
    mend: 'No action is needed if this is what you mean.',
  };
}

/** An array part; `raw.data` may become part of the result. */
export async function buildArray(
  part: ResolvedPart,
  raw: RawArray,
  n: number,
  context: JobContext,
): Promise<BuiltPart> {
  const stored = storedArray(raw, part, n);
  if (part.facts.numIndices === 2) {
    const { values, findings } = convertTwoIndex(stored, part, n);
    return oneElectronPart(part, raw.origin, values, findings);
  }
  if (part.facts.components === 'vector') {
    const { arrays, findings } = await convertSpinOrbit(stored, part, n, context);
    const { id, role, term } = part;
    const { origin } = raw;
    return {
      oneElectron: [],
      twoElectron: [{ kind: 'spin-orbit', id, role, term, origin, ...arrays }],
      findings,
    };
  }
  const { values, findings } = await convertEightfold(stored, part, n, context);
  return eightfoldPart(part, raw.origin, values, n, findings);
}

/** A part given as an index–value list. */
export async function buildList(
  part: ResolvedPart,
  list: IndexList,
  n: number,
  context: JobContext,
): Promise<BuiltPart> {
  if (part.role === 'two-electron spin-orbit summed') return buildSummedList(part, list, n, context);
  const { values, findings } = await convertList(list, part, n, context);
  if (part.facts.numIndices === 2) return oneElectronPart(part, list.origin, values, findings);
  if (part.facts.components !== 'vector') return eightfoldPart(part, list.origin, values, n, findings);
  const { id, role, term } = part;
  const { origin } = list;
  return {
    oneElectron: [],
    twoElectron: [{ kind: 'spin-orbit', id, role, term, origin, ...asRole(part, values) }],
    findings,
  };
}

function buildSummedList(
  part: ResolvedPart,
  list: IndexList,
  n: number,
  context: JobContext,
): Promise<BuiltPart> {
  const count = part.components.length;
  const shape = count > 1 ? [count, n, n, n, n] : [n, n, n, n];
  const data = expandSummedList(list, part, n);
  const full: ResolvedPart = {
    ...part,
    layout: 'full',
    value: 'imaginary',
    physicists: false,
    componentLast: false,
  };
  return buildArray(full, { origin: list.origin, shape, complex: false, data }, n, context);
}

function oneElectronPart(
  part: ResolvedPart,
  origin: string,
  values: Float64Array,
  findings: readonly Finding[],
): BuiltPart {
  const { id, role, term } = part;
  const planes =
    part.facts.components === 'vector' ? { charge: null, spin: values } : { charge: values, spin: null };
  return { oneElectron: [{ id, role, term, origin, ...planes }], twoElectron: [], findings };
}

function eightfoldPart(
  part: ResolvedPart,
  origin: string,
  values: Float64Array,
  n: number,
  findings: readonly Finding[],
): BuiltPart {
  const { id, role, term } = part;
  if (part.facts.components === 'tensor') {
    return {
      oneElectron: [],
      twoElectron: [{ kind: 'spin-spin', id, role, term, origin, values }],
      findings,
    };
  }
  if (part.role !== 'spin-spin contact') {
    return {
      oneElectron: [],
      twoElectron: [{ kind: 'charge-charge', id, role, term, origin, values }],
      findings,
    };
  }
  // ½ Σ_k A :T^k T^k:, so A stands in xx, yy and zz alike.
  const size = pairsTriangleLength(n);
  const six = new Float64Array(6 * size);
  for (const k of [0, 3, 5]) six.set(values, k * size);
  return {
    oneElectron: [],
    twoElectron: [{ kind: 'spin-spin', id, role, term, origin, values: six }],
    findings,
  };
}

function scaleInPlace(values: Float64Array, factor: number): void {
  if (factor === 1) return;
  for (let i = 0; i < values.length; i++) values[i] = values[i]! * factor;
}
