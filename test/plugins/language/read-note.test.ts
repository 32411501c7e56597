import { readdirSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { readNote } from '../../../plugins/language/read-note.ts';
import { formatProblem, type Problem } from '../../../plugins/problems.ts';

const folder = fileURLToPath(new URL('./fixtures', import.meta.url));
const options = { file: 'note.md', projectRoot: folder, partsFolder: `${folder}/parts` };

/**
 * Fixtures: cases between lines of `====`, each a title, a note, and the problems that are due in it, between lines of
 * `----`. A problem is `line:column`, with the file before it where it is not the note, and words that its message or its
 * advice must hold, `|` between them.
 */
function cases(name: string): { title: string; note: string; due: string[] }[] {
  const text = readFileSync(`${folder}/${name}`, 'utf8');
  return text.split(/^====\n/m).map((part) => {
    const [title = '', note = '', due = ''] = part.split(/^----\n/m);
    return { title: title.trim(), note, due: due.split('\n').filter((line) => line !== '') };
  });
}

function matches(problem: Problem | undefined, due: string): boolean {
  if (!problem) return false;
  const [, file = 'note.md', line, column, words = ''] = /^(?:(\S+) )?(\d+):(\d+) (.*)$/.exec(due)!;
  const said = `${problem.message} ${problem.expected ?? ''} ${problem.example ?? ''}`;
  const placed = problem.file === file && problem.line === Number(line) && problem.column === Number(column);
  return placed && words.split(' | ').every((part) => said.includes(part));
}

for (const name of readdirSync(folder).filter((file) => file.endsWith('.txt'))) {
  describe(name, () => {
    test.each(cases(name))('$title', ({ note, due }) => {
      const { problems } = readNote(note, options);
      const shown = problems.map(formatProblem).join('\n\n');
      const unmatched = due.filter((line, index) => !matches(problems[index], line));
      expect(unmatched, shown).toEqual([]);
      expect(problems.length, shown).toBe(due.length);
    });
  });
}

describe('any text', () => {
  const pieces = [
    '```circuit\n',
    '```analysis\n',
    '```figures\n',
    '```plot\n',
    '```\n',
    'components:\n',
    '  R1: ',
    '{ ',
    ' }',
    'resistor: ',
    '47 Ω',
    'source: ',
    'sine: ',
    'switch: ',
    'diode: ',
    'zener: ',
    'curve: ',
    'controlled-source: ',
    'nodes: ',
    '[',
    ']',
    'a',
    'gnd',
    ', ',
    'find: ',
    'time response',
    'until: ',
    '1 ms',
    'start: ',
    'vary: ',
    'sweep: ',
    'lines: ',
    'mark: ',
    'vega: ',
    'is: ',
    'must: ',
    '< 3 V',
    'x: ',
    '\n',
    '"',
    ':val[',
    '---\n',
    'title: ',
    '~',
    '±5 %',
    'temperature: ',
    'points: ',
    'sum: ',
  ];
  const texts = fc.oneof(
    fc.array(fc.constantFrom(...pieces), { maxLength: 60 }).map((list) => list.join('')),
    fc.string({ unit: 'grapheme', maxLength: 100 }).map((text) => `\`\`\`circuit\ncomponents: ${text}\n\`\`\``),
    fc
      .json({ depthSize: 'medium' })
      .map((text) => `\`\`\`circuit\ncomponents: ${text}\n\`\`\`\n\n\`\`\`analysis\n${text}\n\`\`\``),
  );

  test('never throws, and every problem stands within the file', () => {
    fc.assert(
      fc.property(texts, (text) => {
        const { problems } = readNote(text, options);
        const lines = text.split(/\r\n|\n|\r/);
        for (const { line, column, length, sourceLine } of problems) {
          expect(line).toBeGreaterThanOrEqual(1);
          expect(line).toBeLessThanOrEqual(lines.length);
          expect(column).toBeGreaterThanOrEqual(1);
          expect(column).toBeLessThanOrEqual(sourceLine.length + 1);
          expect(length).toBeGreaterThanOrEqual(1);
        }
      }),
      { numRuns: 500 },
    );
  });
});
