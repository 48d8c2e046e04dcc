import type { EnergyUnit } from '../../units';
import type { Term } from '../terms';

/** Import recipe, version 1: which array plays which role, and in which convention it is written. */
export interface Recipe {
  readonly schema: 'spinwright-recipe/1';
  readonly title?: string;
  readonly source?: string;
  readonly orbitals?: number;
  readonly spinors?: number;
  readonly electrons?: number;
  readonly ms2?: number;
  readonly occupations?: readonly number[];
  readonly alpha?: number;
  readonly constants?: readonly RecipeConstant[];
  readonly ignore?: readonly string[];
  readonly parts: readonly RecipePart[];
}

export type RecipeUnit = Extract<EnergyUnit, 'hartree' | 'cm-1' | 'eV' | 'meV'>;

export interface RecipeConstant {
  readonly term: Term;
  readonly value: number;
  readonly unit?: RecipeUnit;
}

export type Role =
  | 'spin-free'
  | 'one-electron'
  | 'two-electron'
  | 'one-electron spin-orbit'
  | 'mean-field spin-orbit'
  | 'two-electron spin-same-orbit'
  | 'two-electron spin-other-orbit'
  | 'two-electron spin-orbit'
  | 'two-electron spin-orbit summed'
  | 'spin-spin'
  | 'mass-velocity'
  | 'one-electron Darwin'
  | 'two-electron Darwin'
  | 'spin-spin contact'
  | 'spinor';

export type ValueKind = 'real' | 'imaginary' | 'complex' | 'contact';

export type Layout =
  | 'full'
  | 'lower-triangle'
  | 'strict-lower-triangle'
  | 'pairs'
  | 'pairs-triangle'
  | 'antisymmetric-by-symmetric-pairs'
  | 'index-list';

export type VectorComponent = 'x' | 'y' | 'z';
export type TensorComponent = 'xx' | 'xy' | 'xz' | 'yx' | 'yy' | 'yz' | 'zx' | 'zy' | 'zz';
export type Component = VectorComponent | TensorComponent;

export type ListColumn = 'component' | 'p' | 'q' | 'r' | 's' | 'value' | 're' | 'im';

export interface ListFormat {
  readonly base?: 0 | 1;
  readonly columns?: readonly ListColumn[];
  readonly fill?: 'symmetry' | 'as-listed';
}

export interface RecipePart {
  readonly id: string;
  readonly role: Role;
  readonly term?: Term;
  readonly file: string;
  readonly dataset?: string;
  readonly unit?: RecipeUnit;
  readonly scale?: number;
  readonly value?: ValueKind;
  readonly spin?: 'sigma' | 's';
  readonly order?: 'chemists' | 'physicists';
  readonly half?: 'outside' | 'inside';
  readonly momentum?: 'first' | 'second';
  readonly covers?: 'core' | 'all';
  readonly layout?: Layout;
  readonly components?: readonly Component[];
  readonly componentAxis?: 'first' | 'last';
  readonly list?: ListFormat;
}
