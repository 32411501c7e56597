/** Evaluating a checked expression against solved analyses. */
import { add, divide, firstUndefined, multiply, negate, power, subtract } from '../../solver/waveform/arithmetic.ts';
import { compare } from '../../solver/waveform/comparison.ts';
import { complement, constantSet, type IntervalSet, intersection, union } from '../../solver/waveform/interval-set.ts';
import type { NoValue, Waveform } from '../../solver/waveform/waveform.ts';
import { formatQuantity } from '../language/format.ts';
import type { BinaryOperator, CheckedExpression, QuantityReference, ResolvedNode, Span } from './expression.ts';
import { functionNamed, type Value } from './functions.ts';

/** Where values come from: one run of each analysis. */
export interface Scope {
  /** SI. A number for an operating point, else a waveform; all those of one analysis share their grid array. */
  readonly read: (analysis: string, quantity: QuantityReference) => number | Waveform;
  /** A datum of a component by its path (`value`, `rating.forward_current`), SI. */
  readonly constant: (circuit: string, designator: string, path: string) => number;
  /** A figure of this note or another; nothing where it has no value. */
  readonly figure: (name: string, note?: string) => number | undefined;
}

export type Evaluation =
  /** A number is finite. A waveform may be NaN throughout some steps (not all): it is undefined there. */
  | { readonly ok: true; readonly value: Value }
  /** There is no value, and why, in words; the span is that of the part that has none. */
  | { readonly ok: false; readonly reason: string; readonly span: Span };

/** Evaluates a checked expression. */
export function evaluateExpression(expression: CheckedExpression, scope: Scope): Evaluation {
  return evaluate(expression.resolved, scope);
}

function evaluate(node: ResolvedNode, scope: Scope): Evaluation {
  switch (node.type) {
    case 'number':
      return settle(node, node.value);
    case 'quantity':
      return settle(node, scope.read(node.analysis, node.quantity));
    case 'constant':
      return settle(node, scope.constant(node.circuit, node.designator, node.path));
    case 'figure': {
      const name = node.note === undefined ? node.name : `${node.note}#${node.name}`;
      return settle(node, scope.figure(node.name, node.note) ?? { none: `figure \`${name}\` has no value` });
    }
    case 'call':
      return evaluateCall(node, scope);
    case 'unary': {
      const operand = evaluate(node.operand, scope);
      if (!operand.ok) return operand;
      return settle(node, node.operator === '-' ? negative(operand.value) : inverse(operand.value));
    }
    case 'binary': {
      const left = evaluate(node.left, scope);
      if (!left.ok) return left;
      const right = evaluate(node.right, scope);
      if (!right.ok) return right;
      return settle(node, combine(node.operator, left.value, right.value));
    }
  }
}

function evaluateCall(node: ResolvedNode & { type: 'call' }, scope: Scope): Evaluation {
  const entry = functionNamed(node.function)!;
  const values: Value[] = [];
  for (const argument of node.arguments) {
    const outcome = evaluate(argument, scope);
    if (!outcome.ok) return outcome;
    values.push(outcome.value);
    if (entry.takesGaps || !isWaveform(outcome.value)) continue;
    const gap = firstUndefined(outcome.value);
    if (gap === undefined) continue;
    const where = formatQuantity(gap, node.axis, 4);
    const reason = `the quantity is undefined from ${where} on for at least one step: a divisor passes through zero, or a root or logarithm has no real value`;
    return { ok: false, reason, span: argument.span };
  }
  if (entry.ofNumbers && values.length > 1) return settle(node, entry.ofNumbers(values as number[]));
  return settle(node, entry.evaluate(values, node.axis));
}

/** A value that can be passed on, or the reason why there is none. */
function settle({ span }: ResolvedNode, value: Value | NoValue): Evaluation {
  const none = (reason: string): Evaluation => ({ ok: false, reason, span });
  if (typeof value === 'boolean') return { ok: true, value };
  if (typeof value === 'number') {
    if (Number.isNaN(value)) return none('the result is not a number');
    return Number.isFinite(value) ? { ok: true, value } : none('the result is infinite');
  }
  if ('none' in value) return none(value.none);
  if (isWaveform(value) && value.values.length > 0 && value.values.every((each) => !Number.isFinite(each))) {
    return none('the quantity is undefined on the whole axis');
  }
  return { ok: true, value };
}

function combine(operator: BinaryOperator, left: Value, right: Value): Value | NoValue {
  if (operator === 'and' || operator === 'or') return join(operator, left as Truth, right as Truth);
  const one = left as Quantity;
  const other = right as Quantity;
  if (typeof one === 'number' && typeof other === 'number') return ofNumbers(operator, one, other);
  switch (operator) {
    case '+':
      return add(one, other);
    case '-':
      return subtract(one, other);
    case '*':
      return multiply(one, other);
    case '/':
      return divide(one, other);
    case '^':
      return power(one, other);
    default:
      return compare(one, operator, other);
  }
}

type Quantity = number | Waveform;
type Truth = boolean | IntervalSet;

function ofNumbers(operator: BinaryOperator, left: number, right: number): number | boolean | NoValue {
  switch (operator) {
    case '+':
      return left + right;
    case '-':
      return left - right;
    case '*':
      return left * right;
    case '/':
      return right === 0 ? { none: 'a division by zero' } : left / right;
    case '^':
      if (left === 0 && right < 0) return { none: 'a division by zero' };
      if (left < 0 && !Number.isInteger(right)) return { none: 'a root of a negative number' };
      return left ** right;
    case '<':
      return left < right;
    case '<=':
      return left <= right;
    case '>':
      return left > right;
    case '>=':
      return left >= right;
    case '==':
      return left === right;
    default:
      return left !== right;
  }
}

function join(operator: 'and' | 'or', left: Truth, right: Truth): Truth {
  if (typeof left === 'boolean' && typeof right === 'boolean')
    return operator === 'and' ? left && right : left || right;
  const axis = (typeof left === 'boolean' ? right : left) as IntervalSet;
  const one = typeof left === 'boolean' ? constantSet(left, axis.from, axis.to) : left;
  const other = typeof right === 'boolean' ? constantSet(right, axis.from, axis.to) : right;
  return operator === 'and' ? intersection(one, other) : union(one, other);
}

function negative(value: Value): Value {
  return typeof value === 'number' ? -value : negate(value as Waveform);
}

function inverse(value: Value): Value {
  return typeof value === 'boolean' ? !value : complement(value as IntervalSet);
}

function isWaveform(value: Value): value is Waveform {
  return typeof value === 'object' && 'values' in value;
}
