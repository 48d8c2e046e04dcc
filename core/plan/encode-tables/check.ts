import { heldTerms, type OrbitalWindow, restrictToWindow, type SpinHamiltonian } from '../../hamiltonian';
import type { FileSet, IntegralSet } from '../../integrals';
import { InputError, type JobContext } from '../../job';
import { binomial, levelShifts } from '../../verify';
import { type Check, check } from '../evidence';
import { hamiltonianOf, occupationsOf } from '../system';
import type { TablesDocument } from './document';
import type { FormName, FormProgram, TablesForm } from './form';
import { FORMS } from './forms';
import { fermiWindow } from './levels';
import { openTables } from './read';

/** What `tables` says of a folder. Energies in hartree. */
export interface TablesCheck {
  readonly schema: 'spinwright-tables-check/1';
  readonly document: Omit<TablesDocument, 'conventions' | 'arrays'>;
  readonly arrays: number;
  /** Lowest levels side by side; null where no files to compare with were named. */
  readonly levels: {
    /** 1-based; all of them where the system is small. */
    readonly orbitals: readonly number[];
    readonly electrons: number;
    readonly files: readonly number[];
    readonly tables: readonly number[];
  } | null;
  readonly checks: readonly Check[];
}

/** Systems up to this many determinants are diagonalised as a whole. */
const DETERMINANTS = 5000;
const STATES = 6;
/** Double-precision arithmetic over some thousand determinants, hartree. */
const ARITHMETIC = 1e-9;

/**
 * Reads exported tables and checks them, against the files they were made from where these are given: the lowest levels of
 * the operator that the tables stand for may differ from those of H by what rounding and truncation allow.
 *
 * @param set - of the same files as at `encode`; null: the tables alone
 * @throws InputError as readTables; `other-system` where files and tables are not of the same system
 */
export async function checkTables(
  files: FileSet,
  set: IntegralSet | null,
  context: JobContext,
): Promise<TablesCheck> {
  const { document, tables } = await openTables(files, context);
  const { conventions: _, arrays, ...rest } = document;
  const lambda = document.lambda.total;
  const checks = [
    check(
      'lambda of the tables',
      formOf(tables).lambda(tables.program as never),
      lambda,
      ARITHMETIC * Math.max(1, lambda),
      'keep values share out lambda as a whole',
    ),
  ];
  const found = set ? await compareLevels(set, document, tables, context) : null;
  if (found) checks.push(found.check);
  return {
    schema: 'spinwright-tables-check/1',
    document: rest,
    arrays: arrays.length,
    levels: found?.levels ?? null,
    checks,
  };
}

async function compareLevels(
  set: IntegralSet,
  document: TablesDocument,
  tables: FormProgram,
  context: JobContext,
) {
  const h = hamiltonianOf(set, document.system);
  const orbitals = h.kind === 'spatial' ? h.orbitals : h.spinors / 2;
  const terms = (h.kind === 'spatial' ? h.terms : heldTerms(set)).join();
  if (
    orbitals !== document.orbitals ||
    h.electrons !== document.electrons ||
    terms !== document.terms.join()
  ) {
    throw otherSystem(
      `${orbitals} orbitals, ${h.electrons} electrons, terms ${terms}`,
      `${document.orbitals} orbitals, ${document.electrons} electrons, terms ${document.terms.join()}`,
    );
  }
  const window = windowFor(h, document, occupationsOf(set, document.system));
  const isWhole = window.orbitals.length === orbitals;
  const exact = isWhole || h.kind === 'spinor' ? h : restrictToWindow(h, window);
  const encoded = await formOf(tables).inWindow(tables.program as never, window, context);
  const { given, changed, largest, errorBound } = await levelShifts(exact, encoded, STATES, context);
  return {
    levels: {
      orbitals: window.orbitals.map((p) => p + 1),
      electrons: window.electrons,
      files: Array.from(given),
      tables: Array.from(changed),
    },
    check: check(
      `levels of the tables against the files${isWhole ? '' : ', in the window'}, largest difference`,
      largest,
      0,
      document.rounding.realised + document.residual.oneNormBound + ARITHMETIC + errorBound,
      'no level moves by more than rounding and truncation together (Weyl)',
    ),
  };
}

const formOf = (tables: FormProgram) =>
  FORMS.find((known) => known.form === tables.form) as TablesForm<FormName>;

/** All orbitals of a small system, else those at the Fermi level. */
function windowFor(
  h: SpinHamiltonian,
  document: TablesDocument,
  occupations: readonly number[] | null,
): OrbitalWindow {
  const { orbitals, electrons } = document;
  if (binomial(2 * orbitals, electrons) <= DETERMINANTS) {
    const all = Array.from({ length: orbitals }, (_, p) => p);
    return { orbitals: all, electrons, occupations: occupations ?? new Array(orbitals).fill(0) };
  }
  // Turned orbitals have no occupations to choose a window by.
  const isTurned = document.frame?.kind === 'orbital';
  const window =
    h.kind === 'spatial' && occupations && !isTurned ? fermiWindow(electrons, occupations) : null;
  if (window) return window;
  throw new InputError({
    code: 'no-window',
    where: 'tables',
    found: `${electrons} electrons in ${orbitals} orbitals without a window that can be diagonalised`,
    expected: `at most ${DETERMINANTS} determinants, or orbitals of integer occupation around the Fermi level`,
    mend: 'Name the folder alone, or encode fewer orbitals with --window.',
  });
}

const otherSystem = (found: string, expected: string): InputError =>
  new InputError({
    code: 'other-system',
    where: 'files beside the tables',
    found,
    expected: `${expected}, as the tables are of`,
    mend: 'Name the files that the tables were made from.',
  });
