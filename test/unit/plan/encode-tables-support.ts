import { loadInputs, openInputs } from '../../../app/cli/inputs';
import type { LookupPolicy } from '../../../core/circuit';
import { type Encoding, parseVariant } from '../../../core/encode';
import type { SpinHamiltonian } from '../../../core/hamiltonian';
import { fileSetFromMemory, type IntegralSet } from '../../../core/integrals';
import { inlineContext } from '../../../core/job';
import type { ComplexMatrix } from '../../../core/linalg';
import {
  encodeTables,
  type FormProgram,
  readTables,
  type TablesDocument,
  writeTables,
} from '../../../core/plan';
import { TABLES_SCHEMA } from '../../../core/plan/encode-tables/document';
import type { FormName } from '../../../core/plan/encode-tables/form';
import { FORMS } from '../../../core/plan/encode-tables/forms';
import { type SectorBasis, sectorMatrix } from '../../../core/verify';

export const ctx = inlineContext();

export async function load(folder: string): Promise<IntegralSet> {
  return loadInputs(await openInputs({ files: [folder], recipe: null }, ctx), 'all', 'throw', ctx);
}

export function request(variant: string, change: object = {}) {
  return {
    terms: 'all' as const,
    electrons: null,
    occupations: null,
    target: { value: 5, unit: 'cm-1' as const, meaning: 'level' as const },
    variant: parseVariant(variant),
    threshold: 0,
    bits: 'auto' as const,
    overlaps: [1],
    qubitsMax: null,
    ...change,
  };
}

/** The files of tables by their names, as they would lie in a folder. */
export async function filesOf(tables: Awaited<ReturnType<typeof encodeTables>>) {
  const pieces = new Map<string, Uint8Array[]>();
  const document = await writeTables(
    tables,
    (file, bytes) => pieces.set(file, [...(pieces.get(file) ?? []), bytes.slice()]),
    ctx,
  );
  const files = new Map<string, Uint8Array>();
  for (const [file, parts] of pieces) {
    const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
    let at = 0;
    for (const part of parts) {
      bytes.set(part, at);
      at += part.length;
    }
    files.set(file, bytes);
  }
  return { document, files };
}

export const readFiles = (files: ReadonlyMap<string, Uint8Array | string>) =>
  readTables(fileSetFromMemory('tables', files), ctx);

/** Encodes, writes, reads back. */
export async function roundTrip(set: IntegralSet, how: ReturnType<typeof request>) {
  const tables = await encodeTables(set, how, ctx);
  const { document, files } = await filesOf(tables);
  return { tables, document, files, stored: await readFiles(files) };
}

/** The numbers of an array, found without the reader of the core; none where it is left out. */
export function numbersOf(document: TablesDocument, files: ReadonlyMap<string, Uint8Array>, name: string) {
  const listed = document.arrays.find((array) => array.name === name);
  if (!listed) return [];
  const bytes = files.get(listed.file)!;
  const from = 10 + bytes[8]! + 256 * bytes[9]!;
  const data = bytes.slice(from).buffer;
  const numbers =
    listed.type === '<f8'
      ? new Float64Array(data)
      : listed.type === '<u4'
        ? new Uint32Array(data)
        : listed.type === '<u2'
          ? new Uint16Array(data)
          : listed.type === '|i1'
            ? new Int8Array(data)
            : new Uint8Array(data);
  if (numbers.length !== listed.shape.reduce((product, extent) => product * extent, 1)) {
    throw new Error(`${name} has ${numbers.length} numbers`);
  }
  return Array.from(numbers);
}

/** H on the determinants of a sector, over modes e^{iφ_P} ψ_P. */
export async function sectorOf(
  h: SpinHamiltonian,
  basis: SectorBasis,
  phases: Float64Array | null,
): Promise<ComplexMatrix> {
  const matrix = await sectorMatrix(h, h.electrons, 'product', ctx);
  const n = matrix.dim;
  const out = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  const total = Float64Array.from(basis.states, (state) =>
    (phases ?? new Float64Array(0)).reduce((sum, phi, p) => sum + ((state >>> p) & 1 ? phi : 0), 0),
  );
  for (let j = 0; j < n; j++) {
    out.re[j * n + j] = matrix.diagonal[j]!;
    for (let e = matrix.start[j]!; e < matrix.start[j + 1]!; e++) {
      const i = matrix.row[e]!;
      const [x, y] = [matrix.re[e]!, matrix.im.length > 0 ? matrix.im[e]! : 0];
      const angle = total[j]! - total[i]!;
      const [re, im] = [Math.cos(angle) * x - Math.sin(angle) * y, Math.cos(angle) * y + Math.sin(angle) * x];
      out.re[i * n + j] = out.re[j * n + i] = re;
      out.im[i * n + j] = im;
      out.im[j * n + i] = -im;
    }
  }
  return out;
}

/** a + x·1. */
export function shifted(a: ComplexMatrix, x: number): ComplexMatrix {
  const re = a.re.slice();
  for (let i = 0; i < a.n; i++) re[i * a.n + i]! += x;
  return { ...a, re };
}

/** A program written and read back without a set of integrals around it: what is written, and what is read. */
export async function throughForm(
  name: FormName,
  encoding: Partial<Encoding>,
  bits: { readonly keep: number; readonly rotation: number },
) {
  const form = FORMS.find((known) => known.form === name)!;
  const policy: LookupPolicy = { mode: 'clean', block: 'auto', qubitCap: null };
  const rounded = form.round(encoding as Encoding, { bits, phaseBits: 1, policy })!;
  const encoded = { form: name, program: rounded.encoded } as FormProgram;
  const { orbitals, constant } = rounded.encoded;
  const summary = { schema: TABLES_SCHEMA, form: name, orbitals, constant } as TablesDocument;
  const { files } = await filesOf({
    rounded,
    encoded,
    summary: { ...summary, bits: rounded.bits, sizes: rounded.sizes },
  });
  return { encoded, files, stored: await readFiles(files) };
}

/** Probabilities of an alias table. */
export function drawn(keep: readonly number[], alternate: readonly number[], bits: number): number[] {
  const units = keep.map(() => 0);
  keep.forEach((kept, i) => {
    units[i]! += kept;
    units[alternate[i]!]! += 2 ** bits - kept;
  });
  return units.map((x) => x / (keep.length * 2 ** bits));
}
