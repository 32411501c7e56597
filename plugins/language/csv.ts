/** Tables of numbers: commas, semicolons or tabs between the columns, an optional line of headings, `#` comments. */
export interface CsvTable {
  readonly headings?: readonly string[];
  /** Rows of texts, each with the 1-based line that it came from. */
  readonly rows: readonly { readonly line: number; readonly cells: readonly string[] }[];
}

export function readCsv(text: string): CsvTable {
  const lines = text.replace(/^\ufeff/, '').split(/\r\n|\n|\r/);
  const kept = lines
    .map((content, index) => ({ content, line: index + 1 }))
    .filter(({ content }) => content.trim() !== '' && !content.trimStart().startsWith('#'));
  const separator = separatorOf(kept[0]?.content ?? '');
  const rows = kept.map(({ content, line }) => ({ line, cells: splitRow(content, separator) }));
  const first = rows[0];
  if (!first || first.cells.every((cell) => cell === '' || numberOf(cell, separator) !== undefined)) return { rows };
  return { headings: first.cells, rows: rows.slice(1) };
}

/** The number in a cell; a decimal comma is understood where commas do not separate columns. */
export function numberOf(cell: string, separator = ';'): number | undefined {
  const text = separator === ',' ? cell : cell.replace(',', '.');
  if (!/^[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?$/.test(text)) return undefined;
  const value = Number(text);
  return Number.isFinite(value) ? value : undefined;
}

function separatorOf(line: string): string {
  return ['\t', ';', ','].find((candidate) => line.includes(candidate)) ?? ',';
}

function splitRow(line: string, separator: string): string[] {
  const cells: string[] = [];
  let cell = '';
  let quoted = false;
  for (let at = 0; at < line.length; at++) {
    const character = line[at]!;
    if (character === '"' && quoted && line[at + 1] === '"') cell += line[++at];
    else if (character === '"') quoted = !quoted;
    else if (character === separator && !quoted) {
      cells.push(cell.trim());
      cell = '';
    } else cell += character;
  }
  cells.push(cell.trim());
  return cells;
}
