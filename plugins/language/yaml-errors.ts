/** What the YAML reader found wrong, put for a reader of notes. */
import type { Words } from '../problems.ts';

/** Characters that YAML reserves at the start of a value. */
const RESERVED = /^[@`%&*!|>]/;

/** `reason` is the reader's own wording; `at` is where it stopped. */
export function yamlErrorWords(reason: string, text: string, at: number): Words {
  const here = text.slice(at).trimStart();
  const line = text.slice(text.lastIndexOf('\n', at - 1) + 1).split('\n', 1)[0]!;
  if (/unexpected end of the stream within a (single|double) quoted/.test(reason)) {
    return { message: 'a quotation mark is opened and not closed', expected: 'the same mark at the end of the value' };
  }
  const opened = count(text, /[[{]/g) - count(text, /[\]}]/g);
  if (/flow collection|deficient indentation/.test(reason) && opened > 0) {
    return { message: 'a `{` or `[` is opened and not closed', expected: 'the matching `}` or `]`' };
  }
  if (RESERVED.test(here)) {
    return {
      message: `a value cannot begin with \`${here[0]}\` in YAML`,
      expected: 'the value in quotes',
      example: `key: "${here.split('\n', 1)[0]!.trim().replaceAll('"', "'")}"`,
    };
  }
  if (/bad indentation of a mapping entry/.test(reason) && /:\s.*:\s/.test(line)) {
    return {
      message: 'a value holds a colon and a blank, which YAML reads as another key',
      expected: 'the value in quotes, or `{ }` around a mapping on one line',
      example: 'R1: { resistor: 47 Ω, nodes: [a, gnd] }',
    };
  }
  if (/bad indentation/.test(reason)) {
    return {
      message: 'this line is indented otherwise than its neighbours',
      expected: 'keys of one level in one column',
    };
  }
  if (/missed comma/.test(reason)) {
    return {
      message: 'a comma is missing between two entries',
      expected: 'a comma between the entries of `{ }` and `[ ]`',
    };
  }
  return { message: `this is not valid YAML: ${reason}`, expected: '`key: value`, one a line' };
}

function count(text: string, pattern: RegExp): number {
  return text.match(pattern)?.length ?? 0;
}
