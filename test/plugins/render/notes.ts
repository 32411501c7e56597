/** Small notes for the tests of the renderers, read and solved. */
import { fileURLToPath } from 'node:url';
import { readNote } from '../../../plugins/language/read-note.ts';
import type { SolvedNote } from '../../../plugins/results.ts';
import { solveNote } from '../../../plugins/solve-note.ts';

const projectRoot = fileURLToPath(new URL('../../../', import.meta.url));

/** A sine of 10 V peak and 50 Hz across 1 kΩ, over one period. */
export const RESISTOR = `\`\`\`circuit load
components:
  G1: { source: { sine: { peak: 10 V, frequency: 50 Hz } }, nodes: [a, gnd] }
  R1: { resistor: 1 kΩ ±5 %, nodes: [a, gnd] }
\`\`\`

\`\`\`analysis period
find: time response
until: 20 ms
\`\`\`
`;

export function solvedFrom(text: string, file = 'content/notes/example.md'): SolvedNote {
  return solveNote(readNote(text, { file, projectRoot }));
}

/** Every tag of a piece of HTML opens and closes in order, and no attribute is left open. */
export function unbalanced(html: string): string | undefined {
  const open: string[] = [];
  const empty = new Set(['br', 'hr', 'img', 'meta', 'link']);
  for (const [whole, closing, name, selfClosed] of html.matchAll(/<(\/?)([a-zA-Z][\w-]*)(?:\s[^<>]*?)?(\/?)>/g)) {
    if (closing) {
      if (open.pop() !== name) return `${whole} at ${html.indexOf(whole)}`;
    } else if (!selfClosed && !empty.has(name!)) open.push(name!);
  }
  return open.at(-1);
}
