import { type OutputUnit, type Schema, Validator } from '@cfworker/json-schema';
import { InputError } from '../../job';
import type { Json } from './json';
import { nearest } from './nearest';

/**
 * Checks a document against a JSON schema (draft 2020-12), without generating code, so that it works under a
 * strict content security policy.
 *
 * @throws InputError `schema`: where = `file: JSON pointer`, and the nearest known key or value in the mend.
 */
export function checkSchema(document: Json, schema: object, file: string): void {
  const { valid, errors } = validate(document, schema as Schema);
  if (valid) return;
  const leaves = errors.filter((unit) => unit.keyword in RANK && !isPassedOn(unit, schema as Schema));
  // An unknown key usually explains the required key that is missing, so it comes first.
  leaves.sort((a, b) => RANK[a.keyword]! - RANK[b.keyword]!);
  const worst = leaves[0] ?? errors[0]!;
  const others = new Set(leaves.map((unit) => unit.instanceLocation + unit.error)).size - 1;
  const problem = explain(worst, document, schema as Schema);
  const more = others > 0 ? ` ${others} more problem${others > 1 ? 's' : ''} in this file.` : '';
  throw new InputError({
    code: 'schema',
    ...problem,
    where: `${file}: ${problem.where}`,
    mend: problem.mend + more,
  });
}

/** Keywords that say something about one place; those that only pass on a child's failure are left out. */
const RANK: Readonly<Record<string, number>> = {
  additionalProperties: 0,
  type: 1,
  enum: 2,
  const: 2,
  pattern: 2,
  minimum: 3,
  maximum: 3,
  exclusiveMinimum: 3,
  exclusiveMaximum: 3,
  multipleOf: 3,
  minLength: 3,
  maxLength: 3,
  minItems: 3,
  maxItems: 3,
  uniqueItems: 3,
  required: 4,
  not: 5,
};

/** All problems, or only the first where there are more than the library can collect. */
function validate(document: Json, schema: Schema) {
  try {
    return new Validator(schema, '2020-12', false).validate(document);
  } catch (error) {
    // It spreads its list of problems over the arguments of a call, of which there may not be 100 000.
    if (!(error instanceof RangeError)) throw error;
    return new Validator(schema, '2020-12', true).validate(document);
  }
}

/** An additionalProperties that is a schema only reports what its own keywords report more exactly. */
const isPassedOn = (unit: OutputUnit, schema: Schema): boolean =>
  unit.keyword === 'additionalProperties' &&
  resolveSchema(schema, pointerTokens(unit.keywordLocation)) !== false;

function explain(unit: OutputUnit, document: Json, schema: Schema) {
  const tokens = pointerTokens(unit.instanceLocation);
  const place = unit.instanceLocation.replace(/^#/, '');
  const where = place === '' ? '/' : place;
  const value = resolvePointer(document, tokens);
  const rule = resolveSchema(schema, pointerTokens(unit.keywordLocation));
  const found = shorten(value);
  const { keyword } = unit;
  if (keyword === 'additionalProperties') {
    const parent = resolveSchema(schema, pointerTokens(unit.keywordLocation).slice(0, -1)) as Schema;
    const known = Object.keys(parent.properties ?? {});
    const key = Object.keys(value as object).find((name) => !known.includes(name)) ?? '';
    const near = nearest(key, known);
    return {
      where: `${place}/${clip(key.replaceAll('~', '~0').replaceAll('/', '~1'))}`,
      found: `unknown key ${shorten(key)}`,
      expected: `one of ${known.join(', ')}`,
      mend: near === null ? 'Remove the key.' : `The nearest known key is "${near}".`,
    };
  }
  if (keyword === 'enum' || keyword === 'const') {
    const allowed: unknown[] = keyword === 'enum' ? (rule as unknown[]) : [rule];
    const near = typeof value === 'string' ? nearest(value, allowed.map(String)) : null;
    return {
      where,
      found,
      expected: `one of ${allowed.map((item) => JSON.stringify(item)).join(', ')}`,
      mend: near === null ? 'Choose one of these values.' : `The nearest known value is "${near}".`,
    };
  }
  if (keyword === 'required') {
    const missing = (rule as string[]).filter((key) => !Object.hasOwn(value as object, key));
    return {
      where,
      found: `no key "${missing[0]}"`,
      expected: `the keys ${(rule as string[]).join(', ')}`,
      mend: `Add "${missing[0]}".`,
    };
  }
  if (keyword === 'not') {
    if ((rule as Schema).const !== undefined) {
      const mend = 'Choose another value.';
      return { where, found, expected: `anything but ${JSON.stringify((rule as Schema).const)}`, mend };
    }
    const keys = (rule as Schema).required ?? [];
    return { where, found: `both ${keys.join(' and ')}`, expected: 'only one of them', mend: 'Remove one.' };
  }
  return { where, found, expected: expectation(keyword, rule), mend: cure(keyword, rule, value) };
}

function cure(keyword: string, rule: unknown, value: unknown): string {
  const isNumber = rule === 'integer' || rule === 'number';
  if (keyword === 'type' && isNumber && typeof value === 'string') return 'Write a number, without quotes.';
  if (keyword === 'minItems') return 'Add what is missing.';
  if (keyword === 'maxItems') return 'Remove what is too much.';
  if (keyword === 'uniqueItems') return 'Remove what stands twice.';
  if (keyword === 'pattern' && isPathRule(rule)) {
    return 'Put the file beside the recipe or in a folder below, and write its path from there.';
  }
  return 'Correct this value.';
}

/** The one pattern that starts by refusing an absolute path. */
const isPathRule = (rule: unknown): boolean => String(rule).startsWith('^(?!/)');

function expectation(keyword: string, rule: unknown): string {
  switch (keyword) {
    case 'type':
      return `a value of type ${String(rule)}`;
    case 'minimum':
      return `a value of at least ${rule}`;
    case 'maximum':
      return `a value of at most ${rule}`;
    case 'exclusiveMinimum':
      return `a value above ${rule}`;
    case 'exclusiveMaximum':
      return `a value below ${rule}`;
    case 'multipleOf':
      return `a multiple of ${rule}`;
    case 'minLength':
      return `a text of at least ${rule} characters`;
    case 'maxLength':
      return `a text of at most ${rule} characters`;
    case 'minItems':
      return `at least ${rule} entries`;
    case 'maxItems':
      return `at most ${rule} entries`;
    case 'uniqueItems':
      return 'entries that differ from each other';
    case 'pattern':
      return isPathRule(rule)
        ? 'a path relative to the recipe, "/" between folders, no "..", no drive, no backslash'
        : `a text that matches ${rule}`;
    default:
      return `a value that satisfies "${keyword}": ${JSON.stringify(rule)}`;
  }
}

function pointerTokens(location: string): string[] {
  const pointer = location.replace(/^#/, '');
  if (pointer === '' || pointer === '/') return [];
  return pointer
    .slice(1)
    .split('/')
    .map((token) => token.replaceAll('~1', '/').replaceAll('~0', '~'));
}

function resolvePointer(value: unknown, tokens: readonly string[]): unknown {
  let at = value;
  for (const token of tokens) at = (at as Record<string, unknown> | undefined)?.[token];
  return at;
}

/** Follows a keyword location through `$ref`. */
function resolveSchema(schema: Schema, tokens: readonly string[]): unknown {
  let at: unknown = schema;
  for (const token of tokens) {
    at = (at as Record<string, unknown> | undefined)?.[token];
    if (token === '$ref' && typeof at === 'string') at = resolvePointer(schema, pointerTokens(at));
  }
  return at;
}

const shorten = (value: unknown): string => clip(JSON.stringify(value) ?? 'nothing');

const clip = (text: string): string => (text.length > 80 ? `${text.slice(0, 77)}…` : text);
