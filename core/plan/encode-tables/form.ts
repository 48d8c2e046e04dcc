import type { LookupPolicy } from '../../circuit';
import type { Encoding, SparseProgram, SpinorProgram, TripletProgram } from '../../encode';
import type { OrbitalWindow, SpinHamiltonian } from '../../hamiltonian';
import type { JobContext } from '../../job';
import type { ArrayLayout, Numbers, Pieces, Sizes } from './arrays';

/** Programs by the name of their form. */
export interface Programs {
  readonly triplet: TripletProgram;
  readonly spinor: SpinorProgram;
  readonly sparse: SparseProgram;
}

export type FormName = keyof Programs;

/** A program and the form it is of. */
export type FormProgram = {
  readonly [F in FormName]: { readonly form: F; readonly program: Programs[F] };
}[FormName];

/**
 * A form of encoding as its tables are written and read back. A further form is a file with one of these, and a line
 * in forms.ts.
 */
export interface TablesForm<F extends FormName> {
  readonly form: F;
  /** How arrays make up H, a paragraph each; stands in the document. */
  readonly conventions: Readonly<Record<string, string>>;
  readonly arrays: readonly ArrayLayout[];
  /** @returns null for an encoding of another form */
  round(encoding: Encoding, how: RoundingChoice): RoundedTables<F> | null;
  /**
   * The program that written tables stand for, from them alone.
   *
   * @throws InputError `bad-tables` where they do not fit each other
   */
  read(stored: StoredTables): Promise<Programs[F]>;
  /** Of a program, hartree. */
  lambda(program: Programs[F]): number;
  /** The Hamiltonian that a program stands for over a window of orbitals, the others frozen. */
  inWindow(program: Programs[F], window: OrbitalWindow, context: JobContext): Promise<SpinHamiltonian>;
}

/** What decides the tables beside the encoding: as for the circuit of the same variant. */
export interface RoundingChoice {
  readonly bits: { readonly keep: number; readonly rotation: number };
  /** Of the phase register. */
  readonly phaseBits: number;
  readonly policy: LookupPolicy;
}

export interface RoundedTables<F extends FormName> {
  readonly bits: Sizes;
  /** Extents of the arrays, and what else reading needs. */
  readonly sizes: Sizes;
  readonly given: Programs[F];
  /** The program that the tables encode exactly. */
  readonly encoded: Programs[F];
  /** By the names of the form's arrays. */
  readonly data: Readonly<Record<string, Pieces>>;
  /** What rounding changes of H, hartree: a rigorous bound in the sector, and its expected size. */
  rounding(
    electrons: number,
    context: JobContext,
  ): Promise<{ readonly bound: number; readonly typical: number }>;
}

/** Tables as they were written, checked as they are asked for. */
export interface StoredTables {
  readonly orbitals: number;
  /** Hartree. */
  readonly constant: number;
  /** @throws InputError `bad-tables` where the document does not have it */
  size(name: string): number;
  /** Likewise. */
  bits(name: string): number;
  /**
   * An array of the form, row-major.
   *
   * @param from, below - limits of its numbers
   * @throws InputError `bad-tables` where file, document and layout differ, or a number is out of limits
   */
  array(name: string, from?: number, below?: number): Promise<Numbers>;
  /** @throws InputError `bad-tables` */
  refuse(name: string, found: string, expected: string): never;
}
