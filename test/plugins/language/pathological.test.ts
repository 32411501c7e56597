import { describe, expect, test } from 'vitest';
import { readNote } from '../../../plugins/language/read-note.ts';

/** Texts on which a careless pattern or search would take minutes; each must be dealt with in seconds. */
const N = 100_000;
const value = (text: string) => `\`\`\`circuit\ncomponents:\n  R1: { resistor: ${text}, nodes: [a, gnd] }\n\`\`\``;
const chain = (count: number, component: (index: number) => string) =>
  `\`\`\`circuit\ncomponents:\n${Array.from({ length: count }, (_, index) => `  ${component(index)}\n`).join('')}\`\`\``;

describe('texts of a hundred thousand characters', () => {
  test.each([
    ['digits', value(`${'1'.repeat(N)} Ω`)],
    ['a tolerance', value(`1 Ω +${'1'.repeat(N)} -`)],
    ['units', value(`1 ${'V/'.repeat(N / 2)}`)],
    ['brackets', value(`${'('.repeat(N / 2)}${')'.repeat(N / 2)}`)],
    ['comparisons', value('> '.repeat(N / 2))],
    ['nesting', `\`\`\`circuit\n${'{a: '.repeat(N / 4)}\n\`\`\``],
    ['open values', ':val['.repeat(N / 5)],
    ['open attributes', ':val[a]{'.repeat(N / 8)],
    ['front matter', `---\n${'a: 1\n'.repeat(N / 5)}---\n`],
    [
      'a loop',
      chain(
        2000,
        (index) => `L${index}: { inductor: 1 H, nodes: [n${index}, ${index === 1999 ? 'n0' : `n${index + 1}`}] }`,
      ),
    ],
  ])('%s', { timeout: 10_000 }, (_, text) => {
    const { problems } = readNote(text, { file: 'note.md', projectRoot: '/' });
    expect(problems.length).toBeGreaterThan(0);
    for (const { message } of problems.slice(0, 5)) expect(message.length).toBeLessThan(40_000);
  });
});
