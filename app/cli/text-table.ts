/** Columns a text takes on a terminal: combining marks take none; everything else we print takes one. */
export function width(text: string): number {
  return [...text].filter((c) => !/\p{Mark}/u.test(c)).length;
}

export const padEnd = (text: string, columns: number): string =>
  text + ' '.repeat(Math.max(0, columns - width(text)));
export const padStart = (text: string, columns: number): string =>
  ' '.repeat(Math.max(0, columns - width(text))) + text;

export interface TextColumn {
  readonly head: string;
  readonly align: 'left' | 'right';
}

/** A plain table: a head line, a rule, the rows; columns two spaces apart. Returns lines. */
export function textTable(columns: readonly TextColumn[], rows: readonly (readonly string[])[]): string[] {
  const widths = columns.map(({ head }, c) =>
    Math.max(width(head), ...rows.map((row) => width(row[c] ?? ''))),
  );
  const line = (cells: readonly string[]): string =>
    columns
      .map(({ align }, c) => (align === 'left' ? padEnd : padStart)(cells[c] ?? '', widths[c]!))
      .join('  ')
      .trimEnd();
  return [
    line(columns.map(({ head }) => head)),
    widths.map((w) => '─'.repeat(w)).join('──'),
    ...rows.map(line),
  ];
}

/** Breaks words to lines of at most `columns`, later lines indented. */
export function wrap(text: string, columns: number, indent = ''): string[] {
  const lines: string[] = [];
  let line = '';
  for (const word of text.split(' ')) {
    if (line !== '' && width(line) + 1 + width(word) > columns) {
      lines.push(line);
      line = indent + word;
    } else line = line === '' ? word : `${line} ${word}`;
  }
  return line === '' ? lines : [...lines, line];
}
