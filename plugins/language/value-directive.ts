/**
 * `:val[expression]{in=mA digits=3}` in the prose (the generic-directive form of CommonMark's community): its text, and
 * the markdown-it rule that finds it. The rule is shared by the reader of notes and by the page renderer, so both see the
 * same directives in the same order; code spans and fences are left alone because markdown-it never calls it there.
 */
import type MarkdownIt from 'markdown-it';
import type { StateCore, StateInline, Token } from 'markdown-it';

export interface DirectiveFault {
  readonly message: string;
  readonly expected: string;
  /** Range within the text that was read. */
  readonly start: number;
  readonly end: number;
}

export interface ValueDirective {
  readonly start: number;
  /** Index after the directive's last character. */
  readonly end: number;
  readonly expression: string;
  readonly expressionStart: number;
  /** Unit asked for, and where it is written. */
  readonly unit?: { readonly text: string; readonly start: number; readonly end: number };
  readonly digits?: number;
  readonly faults: readonly DirectiveFault[];
}

/** `meta` of the tokens of type `VALUE_TOKEN`. */
export interface ValueTokenMeta {
  readonly directive: ValueDirective;
  /** Counts the directives of a note from 0; `InlineValue.index` is the same number. */
  index: number;
}

export const VALUE_TOKEN = 'computed_value';

const OPENING = ':val[';
const LARGEST_DIGITS = 15;
/** In characters: text with many open brackets is read once, not once from each. */
const LONGEST_EXPRESSION = 2000;

/**
 * Reads the directive that begins at `start`; nothing if none does. Square brackets within the expression nest. A
 * directive whose bracket is never closed is plain text.
 */
export function readValueDirective(text: string, start: number): ValueDirective | undefined {
  if (!text.startsWith(OPENING, start) || text[start - 1] === ':') return undefined;
  const expressionStart = start + OPENING.length;
  const close = closingBracket(text, expressionStart);
  if (close === -1) return undefined;
  const expression = text.slice(expressionStart, close);
  const directive = { start, end: close + 1, expression, expressionStart };
  if (text[close + 1] !== '{') return { ...directive, faults: [] };
  const closeBrace = text.indexOf('}', close + 2);
  if (closeBrace === -1) {
    const fault = { message: 'the `{` after a computed value is not closed', expected: '`{in=mA digits=3}`' };
    return { ...directive, faults: [{ ...fault, start: close + 1, end: close + 2 }] };
  }
  return { ...directive, end: closeBrace + 1, ...readAttributes(text, close + 2, closeBrace) };
}

/** Registers the inline rule and the numbering of its tokens. */
export function valueDirectivePlugin(markdown: MarkdownIt): void {
  markdown.inline.ruler.after('escape', 'computed_value', valueRule);
  markdown.core.ruler.after('inline', 'computed_value_numbers', numberValues);
}

function valueRule(state: StateInline, silent: boolean): boolean {
  if (state.src.charCodeAt(state.pos) !== 0x3a) return false;
  const directive = readValueDirective(state.src, state.pos);
  if (!directive || directive.end > state.posMax) return false;
  if (!silent) {
    const token = state.push(VALUE_TOKEN, '', 0);
    token.content = state.src.slice(directive.start, directive.end);
    token.meta = { directive, index: -1 } satisfies ValueTokenMeta;
  }
  state.pos = directive.end;
  return true;
}

function numberValues(state: StateCore): void {
  let index = 0;
  for (const block of state.tokens) {
    for (const token of block.children ?? []) {
      if (token.type === VALUE_TOKEN) metaOf(token).index = index++;
    }
  }
}

export function metaOf(token: Token): ValueTokenMeta {
  return token.meta as ValueTokenMeta;
}

function closingBracket(text: string, from: number): number {
  let depth = 1;
  const limit = Math.min(text.length, from + LONGEST_EXPRESSION);
  for (let at = from; at < limit; at++) {
    if (text[at] === '[') depth++;
    else if (text[at] === ']' && --depth === 0) return at;
  }
  return -1;
}

const ATTRIBUTE = /([^\s=]+)\s*=\s*(?:"([^"]*)"|'([^']*)'|(\S*))|(\S+)/g;

function readAttributes(text: string, start: number, end: number): Pick<ValueDirective, 'unit' | 'digits' | 'faults'> {
  const faults: DirectiveFault[] = [];
  let unit: ValueDirective['unit'];
  let digits: number | undefined;
  for (const found of text.slice(start, end).matchAll(ATTRIBUTE)) {
    const at = start + found.index;
    const range = { start: at, end: at + found[0].length };
    const key = found[1] ?? found[5]!;
    const quoted = found[2] ?? found[3];
    const value = quoted ?? found[4];
    if (value === undefined || (key !== 'in' && key !== 'digits')) {
      faults.push({
        message: `\`${found[0]}\` is not an option of a computed value`,
        expected: '`in=` and a unit, `digits=` and a number',
        ...range,
      });
    } else if (key === 'in') {
      const valueEnd = range.end - (quoted === undefined ? 0 : 1);
      unit = { text: value, start: valueEnd - value.length, end: valueEnd };
    } else if (/^\d+$/.test(value) && Number(value) >= 1 && Number(value) <= LARGEST_DIGITS) {
      digits = Number(value);
    } else {
      faults.push({
        message: `\`${value}\` is not a number of significant digits`,
        expected: `a whole number from 1 to ${LARGEST_DIGITS}`,
        ...range,
      });
    }
  }
  return { ...(unit ? { unit } : {}), ...(digits === undefined ? {} : { digits }), faults };
}
