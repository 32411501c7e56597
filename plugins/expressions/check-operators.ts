/** Kinds and dimensions of operators. */
import {
  DIMENSIONLESS,
  type Dimension,
  divide,
  equal,
  isDimensionless,
  multiply,
  nameOf,
  power,
} from '../language/dimensions.ts';
import { type Checker, quote, unitHint } from './checker.ts';
import type { ExpressionKind, ExpressionNode, ResolvedNode } from './expression.ts';
import type { Typed } from './names.ts';

type Binary = ExpressionNode & { type: 'binary' };

/** `-x` and `not x`. */
export function checkNegation(
  checker: Checker,
  node: ExpressionNode & { type: 'unary' },
  operand: Typed,
): Typed | undefined {
  const { operator, span } = node;
  const fits = operator === '-' ? isQuantity(operand.kind) : !isQuantity(operand.kind);
  if (!fits) {
    return checker.report(node.operand.span, {
      message: `${quote(checker, node.operand.span)} is ${kindInWords(operand)}, and \`${operator}\` takes ${operator === '-' ? 'a quantity' : 'a condition'}`,
      expected: operator === '-' ? '`not` before a condition' : 'a comparison',
      example: operator === '-' ? 'not D1.i > 1 mA' : 'not D1.i > 1 mA',
    });
  }
  return { ...operand, node: { type: 'unary', operator, operand: operand.node, span } };
}

export function checkBinary(checker: Checker, node: Binary, left: Typed, right: Typed): Typed | undefined {
  const { operator, span } = node;
  const joins = operator === 'and' || operator === 'or';
  let fits = true;
  for (const [operand, typed] of [
    [node.left, left],
    [node.right, right],
  ] as const) {
    if (isQuantity(typed.kind) !== joins) continue;
    fits = false;
    checker.report(operand.span, {
      message: `${quote(checker, operand.span)} is ${kindInWords(typed)}, and \`${operator}\` takes ${joins ? 'conditions' : 'quantities'}`,
      expected: joins ? 'a comparison on either side' : '`and` and `or` between conditions',
      example: joins ? 'D1.i > 1 mA and C1.v > 2 V' : 'share(D1.i > 1 mA)',
    });
  }
  if (!fits) return undefined;
  if (left.axis && right.axis && !equal(left.axis, right.axis)) {
    return checker.report(span, {
      message: `${quote(checker, node.left.span)} runs over ${nameOf(left.axis)}, ${quote(checker, node.right.span)} over ${nameOf(right.axis)}`,
      expected: 'quantities of analyses with the same axis',
    });
  }
  const dimension = dimensionOf(checker, node, left, right);
  if (!dimension) return undefined;
  const resolved: ResolvedNode = { type: 'binary', operator, left: left.node, right: right.node, span };
  const axis = left.axis ?? right.axis;
  if (!axis) return { kind: isArithmetic(operator) ? 'number' : 'truth', dimension, node: resolved };
  return { kind: isArithmetic(operator) ? 'waveform' : 'condition', dimension, axis, node: resolved };
}

function dimensionOf(checker: Checker, node: Binary, left: Typed, right: Typed): Dimension | undefined {
  switch (node.operator) {
    case '*':
      return multiply(left.dimension, right.dimension);
    case '/':
      return divide(left.dimension, right.dimension);
    case '^':
      return dimensionOfPower(checker, node, left, right);
    case 'and':
    case 'or':
      return DIMENSIONLESS;
    default:
      break;
  }
  if (!equal(left.dimension, right.dimension)) {
    const does = node.operator === '+' ? 'added' : node.operator === '-' ? 'subtracted' : 'compared';
    const hint = { ...unitHint(checker, node.left, right.dimension), ...unitHint(checker, node.right, left.dimension) };
    const { start } = hint.example === undefined ? node.span : barePlace(node);
    const end = hint.example === undefined ? node.span.end : barePlace(node).end;
    return checker.report(
      { start, end },
      {
        message: `${quote(checker, node.left.span)} is ${nameOf(left.dimension)} and ${quote(checker, node.right.span)} is ${nameOf(right.dimension)}: they cannot be ${does}`,
        expected: 'quantities of the same dimension',
        ...hint,
      },
    );
  }
  return isArithmetic(node.operator) ? left.dimension : DIMENSIONLESS;
}

/** Of a number without a unit and a quantity: where the number stands. */
function barePlace({ left, right }: Binary): ExpressionNode['span'] {
  return right.type === 'number' && isDimensionless(right.dimension) ? right.span : left.span;
}

function dimensionOfPower(checker: Checker, node: Binary, base: Typed, exponent: Typed): Dimension | undefined {
  if (!isDimensionless(exponent.dimension)) {
    return checker.report(node.right.span, {
      message: `the exponent ${quote(checker, node.right.span)} is ${nameOf(exponent.dimension)}`,
      expected: 'a plain number as exponent',
    });
  }
  if (isDimensionless(base.dimension)) return DIMENSIONLESS;
  const value = constantOf(node.right);
  if (value === undefined) {
    return checker.report(node.right.span, {
      message: `${quote(checker, node.left.span)} is ${nameOf(base.dimension)}, and its exponent is not written out`,
      expected: 'a number as exponent, since the dimension of the result depends on it',
      example: 'D1.i ^ 2',
    });
  }
  return power(base.dimension, value);
}

/** The value of an exponent made of numbers alone: `2`, `-1`, `(1/2)`. */
function constantOf(node: ExpressionNode): number | undefined {
  if (node.type === 'number') return node.value;
  if (node.type === 'unary' && node.operator === '-') {
    const operand = constantOf(node.operand);
    return operand === undefined ? undefined : -operand;
  }
  if (node.type !== 'binary' || node.operator !== '/') return undefined;
  const left = constantOf(node.left);
  const right = constantOf(node.right);
  return left === undefined || right === undefined || right === 0 ? undefined : left / right;
}

export function isQuantity(kind: ExpressionKind): boolean {
  return kind === 'number' || kind === 'waveform';
}

export function kindInWords({ kind, dimension }: Typed): string {
  if (kind === 'condition') return 'a condition';
  if (kind === 'truth') return 'true or false';
  return kind === 'waveform' ? `${nameOf(dimension)} over an axis` : nameOf(dimension);
}

function isArithmetic(operator: Binary['operator']): boolean {
  return ['+', '-', '*', '/', '^'].includes(operator);
}
