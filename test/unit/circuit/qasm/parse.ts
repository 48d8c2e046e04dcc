import { KEYWORDS, OPENQASM } from './grammar';

export interface Token {
  /** `NAME`, `NUMBER`, …, or the text itself for keywords and signs. */
  readonly kind: string;
  readonly text: string;
  readonly line: number;
}

/** A rule that matched, or a token. */
export interface Tree {
  readonly rule: string;
  readonly children: readonly Tree[];
  readonly text: string;
  readonly line: number;
}

const DIGITS = '[0-9](?:_?[0-9])*';
const NUMBER = `(?:0[bB][01](?:_?[01])*|0o[0-7](?:_?[0-7])*|0[xX][0-9a-fA-F](?:_?[0-9a-fA-F])*|(?:${DIGITS}\\.(?:${DIGITS})?|\\.${DIGITS}|${DIGITS})(?:[eE][+-]?${DIGITS})?)`;
const LEXEMES: readonly [string, string][] = [
  ['SKIP', '[ \\t\\r\\n]+|//[^\\r\\n]*|/\\*[\\s\\S]*?\\*/'],
  ['BITS', '"[01](?:_?[01])*"'],
  ['STRING', '"[^"\\r\\t\\n]+"|\'[^\'\\r\\t\\n]+\''],
  ['TIMING', `${NUMBER}[ \\t]*(?:dt|ns|us|µs|ms|s)(?![A-Za-z0-9_])`],
  ['NUMBER', `${NUMBER}(?:[ \\t]*im)?(?![A-Za-z0-9_])`],
  ['HARDWARE', '\\$[0-9]+'],
  ['NAME', '[\\p{L}\\p{Nl}_][\\p{L}\\p{Nl}_0-9]*'],
  ['ASSIGN', '(?:\\*\\*|<<|>>|[-+*/&|~^%])='],
  ['SIGN', '->|\\+\\+|\\*\\*|\\|\\||&&|==|!=|>=|<=|>>|<<|[\\[\\]{}():;.,=+*/%|&^@~!<>-]'],
];
const LEXER = new RegExp(LEXEMES.map(([kind, pattern]) => `(?<${kind}>${pattern})`).join('|'), 'uy');

export function tokens(text: string): Token[] {
  const out: Token[] = [];
  let line = 1;
  for (let at = 0; at < text.length; at = LEXER.lastIndex) {
    LEXER.lastIndex = at;
    const groups = LEXER.exec(text)?.groups;
    if (!groups)
      throw new SyntaxError(`line ${line}: no token begins with ${JSON.stringify(text.slice(at, at + 9))}`);
    const [kind, lexeme] = Object.entries(groups).find(([, matched]) => matched !== undefined)!;
    if (kind !== 'SKIP') {
      const isSelf = kind === 'SIGN' || (kind === 'NAME' && KEYWORDS.has(lexeme!));
      out.push({ kind: isSelf ? lexeme! : kind, text: lexeme!, line });
    }
    line += lexeme!.split('\n').length - 1;
  }
  return out;
}

/** A parsing expression. */
type Form =
  | { readonly is: 'token' | 'rule'; readonly name: string }
  | { readonly is: 'choice' | 'sequence'; readonly parts: readonly Form[] }
  | { readonly is: '?' | '*' | '+'; readonly part: Form };

const RULES = readGrammar(OPENQASM);

function readGrammar(text: string): Map<string, Form> {
  const words = text.match(/'[^']+'|[A-Za-z_]+|[=/()?*+]/g)!;
  const rules = new Map<string, Form>();
  let at = 0;
  const choice = (): Form => {
    const parts = [sequence()];
    while (words[at] === '/') {
      at++;
      parts.push(sequence());
    }
    return parts.length === 1 ? parts[0]! : { is: 'choice', parts };
  };
  const sequence = (): Form => {
    const parts: Form[] = [];
    while (at < words.length && !['/', ')'].includes(words[at]!) && words[at + 1] !== '=')
      parts.push(repeated());
    return parts.length === 1 ? parts[0]! : { is: 'sequence', parts };
  };
  const repeated = (): Form => {
    let form = single();
    while (['?', '*', '+'].includes(words[at]!)) form = { is: words[at++] as '?', part: form };
    return form;
  };
  const single = (): Form => {
    const word = words[at++]!;
    if (word === '(') {
      const inner = choice();
      if (words[at++] !== ')') throw new Error('the grammar has an open bracket');
      return inner;
    }
    if (word.startsWith("'")) return { is: 'token', name: word.slice(1, -1) };
    return { is: /^[A-Z]+$/.test(word) ? 'token' : 'rule', name: word };
  };
  while (at < words.length) {
    const name = words[at]!;
    at += 2;
    rules.set(name, choice());
  }
  return rules;
}

/**
 * Parses a program by the grammar, statement by statement.
 * @throws SyntaxError where a statement does not belong to the language
 */
export function* parse(text: string): Generator<Tree> {
  const input = tokens(text);
  let at = 0;
  for (const rule of ['version', 'item']) {
    while (at < input.length) {
      const parser = new Parser(input);
      const found = parser.match({ is: 'rule', name: rule }, at);
      if (!found) {
        if (rule === 'version') break;
        const token = input[parser.furthest];
        throw new SyntaxError(`line ${token?.line ?? 'last'}: "${token?.text ?? 'the end'}" does not fit`);
      }
      yield found.trees[0]!;
      at = found.next;
      if (rule === 'version') break;
    }
  }
}

interface Match {
  readonly trees: readonly Tree[];
  readonly next: number;
}

class Parser {
  readonly #input: readonly Token[];
  furthest = 0;

  constructor(input: readonly Token[]) {
    this.#input = input;
  }

  match(form: Form, at: number): Match | null {
    switch (form.is) {
      case 'token': {
        const token = this.#input[at];
        this.furthest = Math.max(this.furthest, at);
        if (token?.kind !== form.name) return null;
        return {
          trees: [{ rule: form.name, children: [], text: token.text, line: token.line }],
          next: at + 1,
        };
      }
      case 'rule': {
        const rule = RULES.get(form.name);
        if (!rule) throw new Error(`the grammar has no rule ${form.name}`);
        const found = this.match(rule, at);
        if (!found) return null;
        const text = found.trees.map((tree) => tree.text).join(' ');
        const line = this.#input[at]?.line ?? 0;
        return { trees: [{ rule: form.name, children: found.trees, text, line }], next: found.next };
      }
      case 'choice':
        for (const part of form.parts) {
          const found = this.match(part, at);
          if (found) return found;
        }
        return null;
      case 'sequence': {
        const trees: Tree[] = [];
        let next = at;
        for (const part of form.parts) {
          const found = this.match(part, next);
          if (!found) return null;
          trees.push(...found.trees);
          next = found.next;
        }
        return { trees, next };
      }
      default: {
        const trees: Tree[] = [];
        let next = at;
        let times = 0;
        for (;;) {
          const found = this.match(form.part, next);
          if (!found || (form.is === '?' && times === 1)) break;
          trees.push(...found.trees);
          next = found.next;
          times++;
        }
        return form.is === '+' && times === 0 ? null : { trees, next };
      }
    }
  }
}
