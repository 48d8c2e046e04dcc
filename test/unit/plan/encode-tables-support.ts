import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { parseVariant } from '../../../core/encode';
import type { SpinHamiltonian } from '../../../core/hamiltonian';
import { fileSetFromMemory, type IntegralSet } from '../../../core/integrals';
import { inlineContext } from '../../../core/job';
import type { ComplexMatrix } from '../../../core/linalg';
import { encodeTables, readTables, type TablesDocument, writeTables } from '../../../core/plan';
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

/** The numbers of an array, found without the reader of the core. */
export function numbersOf(document: TablesDocument, files: ReadonlyMap<string, Uint8Array>, name: string) {
  const listed = document.arrays.find((array) => array.name === name)!;
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
