/** Cutting an expression's text into tokens. */
import { DIMENSIONLESS, type Dimension } from '../language/dimensions.ts';
import { readNumberAt } from '../language/scalar.ts';
import { suggestUnits } from '../language/unit-hints.ts';
import { readUnitAt, toSI, type Unit } from '../language/units.ts';
import type { Fault, Span } from './expression.ts';

export type Token =
  | {
      readonly type: 'number';
      /** SI. */
      readonly value: number;
      readonly dimension: Dimension;
      /** As written, before the unit. */
      readonly written: number;
      readonly unit?: Unit;
      readonly span: Span;
    }
  | { readonly type: 'name'; readonly name: string; readonly span: Span }
  | { readonly type: 'foreign'; readonly note: string; readonly figure: string; readonly span: Span }
  /** An operator, a bracket, a comma, `.` or `@`. */
  | { readonly type: 'sign'; readonly sign: string; readonly span: Span }
  | { readonly type: 'end'; readonly span: Span };

const BLANK = /\s/;
const NAME = /[A-Za-z_][A-Za-z0-9_]*/y;
/** `other-note#lamp_mean`; the length is bounded so that no text takes long to read. */
const FOREIGN = /([A-Za-z0-9_][A-Za-z0-9_.-]{0,199})#([A-Za-z_][A-Za-z0-9_]{0,199})/y;
const SIGNS = ['<=', '>=', '==', '!=', '<', '>', '+', '-', '*', '/', '^', '(', ')', ',', '.', '@'];
/** Typographic forms of signs. */
const SYNONYMS: { readonly [sign: string]: string } = { '−': '-', '×': '*', '·': '*', '≤': '<=', '≥': '>=', '≠': '!=' };

/** Signs of other languages, and what takes their place here. */
const FOREIGN_SIGNS: readonly (readonly [sign: string, expected: string])[] = [
  ['&&', '`and`'],
  ['||', '`or`'],
  ['&', '`and`'],
  ['|', '`or` between conditions, or `abs(...)` for a magnitude'],
  ['!', '`not`'],
  ['~', '`not`'],
  ['**', '`^` for a power'],
  ['=', '`==` to compare'],
  ['=>', '`>=`'],
  ['=<', '`<=`'],
  ['<>', '`!=`'],
  ['===', '`==`'],
  ['!==', '`!=`'],
  ['%', 'a number before `%`'],
  ['÷', '`/`'],
  ['√', '`sqrt(...)`'],
  ['[', 'round brackets'],
  [']', 'round brackets'],
  ['{', 'round brackets'],
  ['}', 'round brackets'],
  ['#', 'a figure of another note in the form `note#figure`'],
  [':', 'an expression without `:`'],
  [';', 'an expression without `;`'],
];

/** The tokens up to the first fault, an `end` last. */
export function readTokens(text: string): { readonly tokens: readonly Token[]; readonly fault?: Fault } {
  const tokens: Token[] = [];
  const mayBeForeign = text.includes('#');
  let at = 0;
  while (at < text.length) {
    if (BLANK.test(text[at]!)) {
      at++;
      continue;
    }
    const read =
      (mayBeForeign && readForeign(text, at)) || readNumber(text, at) || readName(text, at) || readSign(text, at);
    if ('message' in read) return { tokens, fault: read };
    tokens.push(read);
    at = read.span.end;
  }
  tokens.push({ type: 'end', span: { start: text.trimEnd().length, end: text.trimEnd().length + 1 } });
  return { tokens };
}

function readForeign(text: string, start: number): Token | undefined {
  FOREIGN.lastIndex = start;
  const found = FOREIGN.exec(text);
  return found
    ? { type: 'foreign', note: found[1]!, figure: found[2]!, span: { start, end: start + found[0].length } }
    : undefined;
}

function readNumber(text: string, start: number): Token | Fault | undefined {
  if (!/\d/.test(text[start]!) && !(text[start] === '.' && /\d/.test(text[start + 1] ?? ''))) return undefined;
  const number = readNumberAt(text, start);
  if (!number) {
    const span = { start, end: start + /^[\d.eE+-]+/.exec(text.slice(start, start + 400))![0].length };
    return { span, message: `\`${clip(text.slice(span.start, span.end))}\` is too large a number` };
  }
  let at = number.end;
  while (text[at] === ' ' || text[at] === '\u00a0' || text[at] === '\t') at++;
  const read = readUnitAt(text, at);
  // `5 min(x)`: what a bracket follows is a function.
  if (read && text[read.end] !== '(') {
    const { unit, end } = read;
    const value = toSI(number.value, unit);
    return { type: 'number', value, dimension: unit.dimension, written: number.value, unit, span: { start, end } };
  }
  const following = /^[A-Za-zµμΩ°%][A-Za-z0-9_µμΩ°%]*/.exec(text.slice(at, at + 60))?.[0];
  if (following !== undefined && !['and', 'or', 'not'].includes(following) && text[at + following.length] !== '(') {
    const suggested = suggestUnits(following);
    const isUnit = suggested.length > 0 || at === number.end;
    if (isUnit) {
      return {
        span: { start: at, end: at + following.length },
        message: `\`${following}\` is not a unit`,
        expected:
          suggested.length > 0 ? suggested.map((unit) => `\`${unit}\``).join(' or ') : 'a unit such as `mA` or `V`',
        example: `${text.slice(start, number.end)} ${suggested[0] ?? 'mA'}`,
      };
    }
  }
  const span = { start, end: number.end };
  return { type: 'number', value: number.value, dimension: DIMENSIONLESS, written: number.value, span };
}

function readName(text: string, start: number): Token | undefined {
  NAME.lastIndex = start;
  const found = NAME.exec(text);
  return found ? { type: 'name', name: found[0], span: { start, end: start + found[0].length } } : undefined;
}

function readSign(text: string, start: number): Token | Fault {
  const longest = FOREIGN_SIGNS.filter(([sign]) => text.startsWith(sign, start)).sort(
    (one, other) => other[0].length - one[0].length,
  )[0];
  const sign = SYNONYMS[text[start]!] ?? SIGNS.find((candidate) => text.startsWith(candidate, start));
  const length = text[start]! in SYNONYMS ? 1 : (sign?.length ?? 0);
  if (longest && longest[0].length > length) {
    const [found, expected] = longest;
    return {
      span: { start, end: start + found.length },
      message: `\`${found}\` is not a sign of expressions`,
      expected,
    };
  }
  if (sign !== undefined) return { type: 'sign', sign, span: { start, end: start + length } };
  const character = String.fromCodePoint(text.codePointAt(start)!);
  return {
    span: { start, end: start + character.length },
    message: `\`${character}\` has no meaning in an expression`,
    expected: 'names, numbers with units, `+ - * / ^`, comparisons, `and or not`, calls and brackets',
    example: 'mean(D1.i) * 2.1 V',
  };
}

/** A text short enough to be quoted. */
export function clip(text: string): string {
  return text.length <= 40 ? text : `${text.slice(0, 37)}...`;
}
