import { InputError } from '../../job';
import { FINE_STRUCTURE, toHartree } from '../../units';
import type { Term } from '../terms';
import type { Component, Layout, ListColumn, Recipe, RecipePart, Role, ValueKind } from './recipe';
import { ROLES, type RoleFacts } from './roles';

/** A part with every default filled in; nothing after this step looks at the recipe's optional keys. */
export interface ResolvedPart {
  readonly id: string;
  readonly role: Role;
  readonly facts: RoleFacts;
  readonly term: Term;
  readonly file: string;
  readonly dataset: string | null;
  /** Multiplies the stored number: scale × unit × ½-inside × spin × contact. */
  readonly factor: number;
  /** Factor of the two-electron values of a whole file, which alone can hold the extra ½. */
  readonly twoElectronFactor: number;
  readonly value: ValueKind;
  readonly physicists: boolean;
  readonly momentumSecond: boolean;
  readonly coversActive: boolean;
  readonly layout: Layout;
  /** Empty where the role has no Cartesian components. */
  readonly components: readonly Component[];
  readonly componentLast: boolean;
  readonly list: {
    readonly base: 0 | 1;
    readonly columns: readonly ListColumn[];
    readonly asListed: boolean;
  };
}

/**
 * Fills in the defaults of part `index` and refuses keys that contradict the role: a key that would be read
 * and not used is a misunderstanding.
 *
 * @throws InputError `recipe-part`, where = `file: /parts/index/key`.
 */
export function resolvePart(recipe: Recipe, index: number, file: string): ResolvedPart {
  const part = recipe.parts[index]!;
  const facts = ROLES[part.role];
  function refuse(key: string, found: string, expected: string, mend: string): never {
    throw new InputError({
      code: 'recipe-part',
      where: `${file}: /parts/${index}/${key}`,
      found,
      expected,
      mend,
    });
  }
  refuseIdleKeys(part, facts, refuse);
  const value = part.value ?? facts.values[0];
  if (!facts.values.includes(value)) {
    const expected = `${facts.values.join(' or ')} for role "${part.role}"`;
    refuse('value', `"${value}"`, expected, 'Correct the value or the role.');
  }
  const layout = part.layout ?? (part.list ? 'index-list' : 'full');
  if (facts.numIndices > 0 && !facts.layouts.includes(layout)) {
    const expected = `${facts.layouts.join(', ')} for role "${part.role}"`;
    refuse('layout', `"${layout}"`, expected, 'Correct the layout or the role.');
  }
  const physicists = part.order === 'physicists';
  if (physicists && (layout.startsWith('pairs') || layout.startsWith('antisymmetric'))) {
    refuse(
      'order',
      `"physicists" with layout "${layout}"`,
      'chemists',
      'Pairs are (pq) and (rs): remove the key.',
    );
  }
  const components = part.components ?? [];
  checkComponents(components, part, facts, refuse);
  if (
    value === 'contact' &&
    ((part.unit ?? 'hartree') !== 'hartree' || part.spin === 's' || part.half === 'inside')
  ) {
    refuse(
      'value',
      '"contact" with unit, spin or half',
      'the bare (pq|δ(r₁₂)|rs) in bohr⁻³',
      'Remove the other keys.',
    );
  }
  const complex = value === 'complex';
  const columns = part.list?.columns ?? defaultColumns(facts, components, complex);
  if (layout === 'index-list') checkColumns(columns, facts, components, complex, refuse);
  const scale = (part.scale ?? 1) * toHartree(1, part.unit ?? 'hartree');
  const half = part.half === 'inside' ? 2 : 1;
  const spin = part.spin === 's' ? 0.5 ** facts.numSpins : 1;
  const contact = value === 'contact' ? contactFactor(part.role, recipe.alpha ?? FINE_STRUCTURE) : 1;
  return {
    id: part.id,
    role: part.role,
    facts,
    term: part.term ?? facts.term,
    file: part.file,
    dataset: part.dataset ?? null,
    factor: scale * spin * contact * (facts.numIndices === 0 ? 1 : half),
    twoElectronFactor: scale * half,
    value,
    physicists,
    momentumSecond: part.momentum === 'second',
    coversActive: part.covers === 'all',
    layout,
    components,
    componentLast: part.componentAxis === 'last',
    list: { base: part.list?.base ?? 1, columns, asListed: part.list?.fill === 'as-listed' },
  };
}

/**
 * What one unit of C = (pq|δ(r₁₂)|rs) contributes to A: −πα² in the two-electron Darwin term, −(2πα²/3) per
 * Cartesian component in the spin–spin contact term (Bethe & Salpeter, sections 38–39, quoted from memory;
 * σ convention, g_e = 2).
 */
function contactFactor(role: Role, alpha: number): number {
  return role === 'two-electron Darwin' ? -Math.PI * alpha ** 2 : (-2 * Math.PI * alpha ** 2) / 3;
}

type Refuse = (key: string, found: string, expected: string, mend: string) => never;

function refuseIdleKeys(part: RecipePart, facts: RoleFacts, refuse: Refuse): void {
  const whole = facts.numIndices === 0;
  const idle = (key: keyof RecipePart, present: boolean, why: string) => {
    if (present) refuse(key, `"${key}"`, `no such key: ${why}`, 'Remove the key.');
  };
  idle(
    'components',
    facts.components === 'none' && part.components !== undefined,
    `"${part.role}" has no components`,
  );
  idle(
    'componentAxis',
    (part.components?.length ?? 0) < 2 && part.componentAxis === 'last',
    'there is no such axis',
  );
  idle(
    'covers',
    part.role !== 'mean-field spin-orbit' && part.covers !== undefined,
    'only a mean field covers electrons',
  );
  idle(
    'list',
    part.list !== undefined && (part.layout ?? 'index-list') !== 'index-list',
    'the layout is no index-list',
  );
  idle('layout', whole && part.layout !== undefined, 'the file says it itself');
  idle('list', whole && part.list !== undefined, 'the file says it itself');
  // TREXIO is physicists' by its own standard; saying so is no mistake. A FCIDUMP is chemists' by its own.
  idle('order', part.order === 'physicists' && part.role === 'spinor', 'a FCIDUMP is in chemists’ order');
  idle('order', part.order === 'physicists' && facts.numIndices === 2, 'there are two indices');
  const momentum = part.role.startsWith('two-electron spin-');
  idle('momentum', part.momentum === 'second' && !momentum, `"${part.role}" has no momentum pair`);
  idle(
    'momentum',
    part.momentum === 'second' && part.role.endsWith('summed'),
    'the sum has no momentum pair',
  );
}

function checkComponents(
  components: readonly Component[],
  part: RecipePart,
  facts: RoleFacts,
  refuse: Refuse,
): void {
  if (facts.components === 'none') return;
  const length = facts.components === 'vector' ? 1 : 2;
  const wrong = components.find((name) => name.length !== length);
  if (wrong !== undefined) {
    const expected = length === 1 ? 'x, y, z' : 'xx, xy, xz, yy, yz, zz';
    refuse(
      'components',
      `"${wrong}"`,
      `${expected} for role "${part.role}"`,
      'Name the components in file order.',
    );
  }
}

function defaultColumns(facts: RoleFacts, components: readonly Component[], complex: boolean): ListColumn[] {
  const indices: ListColumn[] = facts.numIndices === 2 ? ['p', 'q'] : ['p', 'q', 'r', 's'];
  const values: ListColumn[] = complex ? ['re', 'im'] : ['value'];
  return [...(components.length > 1 ? (['component'] as const) : []), ...indices, ...values];
}

function checkColumns(
  columns: readonly ListColumn[],
  facts: RoleFacts,
  components: readonly Component[],
  complex: boolean,
  refuse: Refuse,
): void {
  const needed = defaultColumns(facts, components, complex);
  const extra = components.length === 1 ? ['component'] : [];
  const isMissing = needed.some((column) => columns.filter((other) => other === column).length !== 1);
  const isForeign = columns.some((column) => !needed.includes(column) && !extra.includes(column));
  if (isMissing || isForeign) {
    refuse(
      'list/columns',
      columns.join(' '),
      `${needed.join(' ')}, each once, in file order`,
      'Correct the columns.',
    );
  }
}
