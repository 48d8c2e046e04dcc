import type { Term } from '../terms';
import type { Layout, Role, ValueKind } from './recipe';

/** What a role fixes about its array: the table of the recipe format, row by row. */
export interface RoleFacts {
  /** Number of orbital indices; 0 = a whole file that says itself what it holds. */
  readonly numIndices: 0 | 2 | 4;
  /** Cartesian components: none, x y z, or xx … zz. */
  readonly components: 'none' | 'vector' | 'tensor';
  /** Number of spin operators: one factor ½ each where the file uses s instead of σ. */
  readonly numSpins: 0 | 1 | 2;
  readonly term: Term;
  readonly values: readonly [ValueKind, ...ValueKind[]];
  /** Permitted layouts, the default first. */
  readonly layouts: readonly Layout[];
}

const TWO_INDEX: readonly Layout[] = ['full', 'lower-triangle', 'index-list'];
const EIGHTFOLD: readonly Layout[] = ['full', 'pairs', 'pairs-triangle', 'index-list'];
const MOMENTUM: readonly Layout[] = ['full', 'antisymmetric-by-symmetric-pairs', 'index-list'];

function scalar2(term: Term): RoleFacts {
  return {
    numIndices: 2,
    components: 'none',
    numSpins: 0,
    term,
    values: ['real', 'complex'],
    layouts: TWO_INDEX,
  };
}
function vector2(term: Term): RoleFacts {
  const layouts: readonly Layout[] = [...TWO_INDEX, 'strict-lower-triangle'];
  return {
    numIndices: 2,
    components: 'vector',
    numSpins: 1,
    term,
    values: ['imaginary', 'complex'],
    layouts,
  };
}
function vector4(layouts: readonly Layout[]): RoleFacts {
  return {
    numIndices: 4,
    components: 'vector',
    numSpins: 1,
    term: 'so2',
    values: ['imaginary', 'complex'],
    layouts,
  };
}
function whole(term: Term): RoleFacts {
  return { numIndices: 0, components: 'none', numSpins: 0, term, values: ['real', 'complex'], layouts: [] };
}
function eightfold(
  components: 'none' | 'tensor',
  numSpins: 0 | 2,
  term: Term,
  values: readonly [ValueKind, ...ValueKind[]],
): RoleFacts {
  return { numIndices: 4, components, numSpins, term, values, layouts: EIGHTFOLD };
}

export const ROLES: Readonly<Record<Role, RoleFacts>> = {
  'spin-free': whole('sf'),
  spinor: whole('sf'),
  'one-electron': scalar2('sf'),
  'mass-velocity': scalar2('scalar'),
  'one-electron Darwin': scalar2('scalar'),
  'one-electron spin-orbit': vector2('so1'),
  'mean-field spin-orbit': vector2('somf'),
  'two-electron': eightfold('none', 0, 'sf', ['real', 'complex']),
  'two-electron Darwin': eightfold('none', 0, 'scalar', ['real', 'complex', 'contact']),
  'two-electron spin-same-orbit': vector4(MOMENTUM),
  'two-electron spin-other-orbit': vector4(MOMENTUM),
  'two-electron spin-orbit': vector4(MOMENTUM),
  'two-electron spin-orbit summed': vector4(['full', 'index-list']),
  'spin-spin': eightfold('tensor', 2, 'ss', ['real', 'complex']),
  'spin-spin contact': eightfold('none', 2, 'ssc', ['real', 'complex', 'contact']),
};
