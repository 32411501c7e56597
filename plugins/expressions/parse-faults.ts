/** Words for what the parser finds where it should not stand. */
import type { Fault } from './expression.ts';
import { clip, type Token } from './tokens.ts';

/** What is wrong with a token that continues nothing. */
export function leftOver(text: string, tokens: readonly Token[], at: number): Fault {
  const token = tokens[at]!;
  const before = tokens[at - 1];
  const { span } = token;
  if (token.type === 'sign' && token.sign === ')') {
    return { span, message: 'a `)` closes no bracket', expected: 'as many `(` as `)`' };
  }
  if (token.type === 'sign' && token.sign === ',') {
    const after = tokens[at + 1];
    if (before?.type === 'number' && after?.type === 'number' && after.span.start === span.end) {
      const written = text.slice(before.span.start, after.span.end);
      return {
        span: { start: before.span.start, end: after.span.end },
        message: `\`${clip(written)}\` has a comma`,
        expected: 'a decimal point',
        example: clip(written.replace(',', '.')),
      };
    }
    return { span, message: 'a comma stands outside a call', expected: 'one expression' };
  }
  if (token.type === 'sign' && token.sign === '.') {
    return { span, message: 'a point stands behind something that has no properties', expected: 'the form `D1.i`' };
  }
  if (before?.type === 'number' && token.type === 'name' && before.unit === undefined) {
    return {
      span,
      message: `\`${clip(token.name)}\` follows a number, and is no unit`,
      expected: 'a unit, or an operator between the two',
      example: `2 * ${clip(token.name)}`,
    };
  }
  return {
    span,
    message: `${inWords(text, token)} where an operator or the end is due`,
    expected: 'an operator such as `*` between two quantities',
    example: 'D1.v * D1.i',
  };
}

/** What was found, as the beginning of a sentence. */
export function inWords(text: string, token: Token): string {
  if (token.type === 'end') return 'the expression ends';
  return `\`${clip(text.slice(token.span.start, token.span.end))}\` stands`;
}
