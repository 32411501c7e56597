/**
 * Reading an expression's text. From loosest to tightest: `or`, `and`, `not`, a comparison, `+ -`, `* /`, unary `-`, `^`
 * (grouping from the right), and `@`, which follows the operand that it belongs to: `mean(D1.i) @ steady`.
 */
import { toSI } from '../language/units.ts';
import type { BinaryOperator, ExpressionNode, Fault, Span } from './expression.ts';
import { inWords, leftOver } from './parse-faults.ts';
import { clip, readTokens, type Token } from './tokens.ts';

/** Longest text, most operands and deepest brackets that are read: far beyond what a reader could follow. */
const LONGEST_TEXT = 10_000;
const MOST_OPERANDS = 1000;
const DEEPEST_NESTING = 60;

const LEVELS: { readonly [operator: string]: number } = {
  or: 1,
  and: 2,
  '<': 4,
  '<=': 4,
  '>': 4,
  '>=': 4,
  '==': 4,
  '!=': 4,
  '+': 5,
  '-': 5,
  '*': 6,
  '/': 6,
  '^': 8,
};
const NOT_LEVEL = 3;
const COMPARISON_LEVEL = 4;
const UNARY_LEVEL = 7;
/** Names of blocks may hold hyphens. */
const BLOCK_NAME = /[A-Za-z_][A-Za-z0-9_-]*/y;

/** Binding strength of a binary operator, for printing. */
export function levelOf(operator: BinaryOperator): number {
  return LEVELS[operator]!;
}

/** The tree of an expression, or what is wrong with it. Never throws. */
export function parseExpression(text: string): { root?: ExpressionNode; faults: Fault[] } {
  if (text.length > LONGEST_TEXT) {
    const message = `this expression has ${text.length} characters`;
    const expected = `at most ${LONGEST_TEXT}; intermediate results can be figures of their own`;
    return { faults: [{ span: { start: 0, end: 1 }, message, expected }] };
  }
  const { tokens, fault } = readTokens(text);
  if (tokens.length <= 1 && !fault) {
    return { faults: [{ span: { start: 0, end: 1 }, message: 'the expression is empty', example: 'mean(D1.i)' }] };
  }
  // A fault of a token stands where reading stops; what comes before may be wrong already.
  const end: Token = { type: 'end', span: fault?.span ?? { start: text.length, end: text.length + 1 } };
  const parser: Parser = { text, tokens: fault ? [...tokens, end] : tokens, at: 0, operands: 0, depth: 0, cut: fault };
  const root = readOperators(parser, 0);
  const first =
    parser.fault ??
    (parser.tokens[parser.at]!.type === 'end' ? fault : leftOver(parser.text, parser.tokens, parser.at));
  if (first) return { faults: [fault && first.span.start >= fault.span.start ? fault : first] };
  return { root: root!, faults: [] };
}

interface Parser {
  readonly text: string;
  readonly tokens: readonly Token[];
  at: number;
  operands: number;
  depth: number;
  /** A fault of a token, at which the tokens end. */
  readonly cut: Fault | undefined;
  /** The first fault; reading stops there, since the rest would be noise. */
  fault?: Fault;
}

function fail(parser: Parser, fault: Fault): undefined {
  parser.fault ??= fault;
  return undefined;
}

/** Precedence climbing: an operand, then every operator that binds at least as tightly as `level`. */
function readOperators(parser: Parser, level: number): ExpressionNode | undefined {
  let left = readOperand(parser, level);
  for (;;) {
    if (!left) return undefined;
    const token = parser.tokens[parser.at]!;
    const operator = token.type === 'sign' ? token.sign : token.type === 'name' ? token.name : '';
    const binding = Object.hasOwn(LEVELS, operator) ? LEVELS[operator]! : -1;
    if (binding < level || binding === -1) return left;
    if (binding === COMPARISON_LEVEL && left.type === 'binary' && LEVELS[left.operator] === COMPARISON_LEVEL) {
      if (!isBracketed(parser, left)) return chained(parser, left, token.span);
    }
    parser.at++;
    const right = readOperators(parser, operator === '^' ? UNARY_LEVEL : binding + 1);
    if (!right) return undefined;
    const span = { start: left.span.start, end: right.span.end };
    left = { type: 'binary', operator: operator as BinaryOperator, left, right, span };
  }
}

function readOperand(parser: Parser, level: number): ExpressionNode | undefined {
  const token = parser.tokens[parser.at]!;
  const isNot = token.type === 'name' && token.name === 'not';
  if (!isNot && !(token.type === 'sign' && (token.sign === '-' || token.sign === '+'))) return readFrom(parser);
  return nested(parser, token.span, () => {
    parser.at++;
    if (isNot) {
      if (level > NOT_LEVEL) {
        return fail(parser, {
          span: token.span,
          message: '`not` stands behind an operator that binds more tightly',
          expected: 'brackets around the negated condition',
          example: 'D1.i > 1 mA and (not C1.v > 5 V)',
        });
      }
      const operand = readOperators(parser, NOT_LEVEL);
      return operand && { type: 'unary', operator: 'not', operand, span: cover(token.span, operand.span) };
    }
    const next = parser.tokens[parser.at]!;
    const raised = parser.tokens[parser.at + 1];
    if (next.type === 'number' && isScale(next) && !(raised?.type === 'sign' && raised.sign === '^')) {
      // `-20 °C` and `-3 dB` are points of a scale, not the negative of 20 °C.
      parser.at++;
      parser.operands++;
      const value = toSI(token.type === 'sign' && token.sign === '-' ? -next.written : next.written, next.unit!);
      return { type: 'number', value, dimension: next.dimension, span: cover(token.span, next.span) };
    }
    const operand = readOperators(parser, UNARY_LEVEL);
    if (!operand || (token.type === 'sign' && token.sign === '+')) return operand;
    return { type: 'unary', operator: '-', operand, span: cover(token.span, operand.span) };
  });
}

function isScale(token: Token & { type: 'number' }): boolean {
  return token.unit !== undefined && (token.unit.offset !== 0 || token.unit.decibel === true);
}

/** An operand with the analyses after it: `x @ steady`. */
function readFrom(parser: Parser): ExpressionNode | undefined {
  let operand = readPrimary(parser);
  while (operand) {
    const token = parser.tokens[parser.at]!;
    if (token.type !== 'sign' || token.sign !== '@') return operand;
    if (operand.type === 'from') {
      return fail(parser, {
        span: token.span,
        message: 'a second `@` follows',
        expected: 'one analysis for a quantity',
      });
    }
    parser.at++;
    const name = parser.tokens[parser.at]!;
    if (name.type !== 'name') {
      return fail(parser, {
        span: name.span,
        message: `${inWords(parser.text, name)} where the name of an analysis is due`,
        expected: 'the name of an analysis block after `@`',
        example: 'mean(D1.i) @ steady',
      });
    }
    BLOCK_NAME.lastIndex = name.span.start;
    const analysis = BLOCK_NAME.exec(parser.text)![0];
    const end = name.span.start + analysis.length;
    while (parser.tokens[parser.at]!.span.start < end) parser.at++;
    operand = { type: 'from', operand, analysis, span: { start: operand.span.start, end } };
  }
  return undefined;
}

function readPrimary(parser: Parser): ExpressionNode | undefined {
  const token = parser.tokens[parser.at]!;
  if (++parser.operands > MOST_OPERANDS) {
    return fail(parser, {
      span: token.span,
      message: `this expression has more than ${MOST_OPERANDS} operands`,
      expected: 'intermediate results as figures of their own',
    });
  }
  if (token.type === 'number') {
    parser.at++;
    return { type: 'number', value: token.value, dimension: token.dimension, span: token.span };
  }
  if (token.type === 'foreign') {
    parser.at++;
    return { type: 'foreign', note: token.note, figure: token.figure, span: token.span };
  }
  if (token.type === 'name' && !Object.hasOwn(LEVELS, token.name)) {
    parser.at++;
    return readAfterName(parser, token.name, token.span);
  }
  if (token.type === 'sign' && token.sign === '(') {
    return nested(parser, token.span, () => {
      parser.at++;
      const inner = readOperators(parser, 0);
      return inner && closeBracket(parser, token.span, inner);
    });
  }
  return fail(parser, {
    span: token.span,
    message: `${inWords(parser.text, token)} where a quantity is due`,
    expected: 'a name, a number with its unit, a call or a bracket',
    example: 'mean(D1.i) / 2',
  });
}

/** What follows a name: a path, the arguments of a call, or nothing. */
function readAfterName(parser: Parser, name: string, span: Span): ExpressionNode | undefined {
  const next = parser.tokens[parser.at]!;
  if (next.type !== 'sign') return { type: 'name', name, span };
  if (next.sign === '(') return nested(parser, next.span, () => readArguments(parser, name, span, next.span));
  if (next.sign !== '.') return { type: 'name', name, span };
  const path: string[] = [];
  let end = span.end;
  for (let dot: Token = next; dot.type === 'sign' && dot.sign === '.'; dot = parser.tokens[parser.at]!) {
    const step = parser.tokens[parser.at + 1]!;
    if (step.type !== 'name') {
      return fail(parser, {
        span: step.span,
        message: `${inWords(parser.text, step)} after \`${clip(parser.text.slice(span.start, dot.span.end))}\``,
        expected: 'the name of a property',
        example: `${name}.v`,
      });
    }
    path.push(step.name);
    end = step.span.end;
    parser.at += 2;
  }
  const opening = parser.tokens[parser.at]!;
  if (opening.type === 'sign' && opening.sign === '(') {
    const written = parser.text.slice(span.start, end);
    return fail(parser, {
      span: { start: span.start, end },
      message: `\`${clip(written)}\` is followed by a bracket, but a property is not called`,
      expected: 'the function first, the quantity within its brackets',
      example: `mean(${name}.i)`,
    });
  }
  return { type: 'member', object: name, path, span: { start: span.start, end } };
}

function readArguments(parser: Parser, name: string, span: Span, opening: Span): ExpressionNode | undefined {
  parser.at++;
  const operands: ExpressionNode[] = [];
  const first = parser.tokens[parser.at]!;
  if (first.type === 'sign' && first.sign === ')') {
    parser.at++;
    return { type: 'call', function: name, arguments: [], span: cover(span, first.span) };
  }
  for (;;) {
    const operand = readOperators(parser, 0);
    if (!operand) return undefined;
    operands.push(operand);
    const token = parser.tokens[parser.at]!;
    if (token.type === 'sign' && token.sign === ',') {
      parser.at++;
      continue;
    }
    const call: ExpressionNode = { type: 'call', function: name, arguments: operands, span };
    return closeBracket(parser, opening, call, span.start);
  }
}

/** Expects `)`; the node's span then takes in the brackets. */
function closeBracket(
  parser: Parser,
  opening: Span,
  inner: ExpressionNode,
  start = opening.start,
): ExpressionNode | undefined {
  const token = parser.tokens[parser.at]!;
  if (token.type === 'sign' && token.sign === ')') {
    parser.at++;
    return { ...inner, span: { start, end: token.span.end } };
  }
  if (token.type === 'end') {
    return fail(parser, parser.cut ?? { span: opening, message: 'this bracket is not closed', expected: 'a `)`' });
  }
  return fail(parser, leftOver(parser.text, parser.tokens, parser.at));
}

/** `a < b < c`: the fault shows how it is written with `and`. */
function chained(parser: Parser, left: ExpressionNode & { type: 'binary' }, second: Span): undefined {
  const { text } = parser;
  parser.at++;
  const right = readOperators(parser, COMPARISON_LEVEL + 1);
  const textOf = ({ span }: ExpressionNode): string => text.slice(span.start, span.end);
  const end = right ? textOf(right) : '...';
  const operator = text.slice(second.start, second.end);
  return fail(parser, {
    span: second,
    message: 'a comparison follows a comparison',
    expected: 'two comparisons joined by `and`',
    example: clip(`${textOf(left)} and ${textOf(left.right)} ${operator} ${end}`),
  });
}

function isBracketed({ text }: Parser, node: ExpressionNode): boolean {
  return (
    text[node.span.start] === '(' &&
    text[node.span.end - 1] === ')' &&
    node.type === 'binary' &&
    node.left.span.start > node.span.start
  );
}

function nested(parser: Parser, span: Span, read: () => ExpressionNode | undefined): ExpressionNode | undefined {
  if (++parser.depth > DEEPEST_NESTING) {
    return fail(parser, {
      span,
      message: `this is nested more than ${DEEPEST_NESTING} levels deep`,
      expected: 'intermediate results as figures of their own',
    });
  }
  const node = read();
  parser.depth--;
  return node;
}

function cover(first: Span, last: Span): Span {
  return { start: first.start, end: last.end };
}
