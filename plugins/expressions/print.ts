/** An expression's tree as text, with as few brackets as it needs; reading that text gives the same tree. */
import { isDimensionless, siUnitText } from '../language/dimensions.ts';
import type { ExpressionNode } from './expression.ts';
import { levelOf } from './parse.ts';

const NOT_LEVEL = 3;
const COMPARISON_LEVEL = 4;
const UNARY_LEVEL = 7;
const PRIMARY_LEVEL = 10;

/** Numbers are printed in SI units. */
export function printExpression(node: ExpressionNode): string {
  switch (node.type) {
    case 'number':
      return isDimensionless(node.dimension) ? String(node.value) : `${node.value} ${siUnitText(node.dimension)}`;
    case 'name':
      return node.name;
    case 'member':
      return [node.object, ...node.path].join('.');
    case 'foreign':
      return `${node.note}#${node.figure}`;
    case 'call':
      return `${node.function}(${node.arguments.map(printExpression).join(', ')})`;
    case 'from':
      return `${within(node.operand, PRIMARY_LEVEL)} @ ${node.analysis}`;
    case 'unary':
      return node.operator === '-' ? `-${within(node.operand, UNARY_LEVEL)}` : `not ${within(node.operand, NOT_LEVEL)}`;
    case 'binary': {
      const level = levelOf(node.operator);
      // Comparisons do not chain; powers group from the right, and take a sign there.
      const left = within(node.left, node.operator === '^' || level === COMPARISON_LEVEL ? level + 1 : level);
      const right = within(node.right, node.operator === '^' ? UNARY_LEVEL : level + 1);
      return `${left} ${node.operator} ${right}`;
    }
  }
}

function within(node: ExpressionNode, least: number): string {
  const text = printExpression(node);
  return levelOfNode(node) < least ? `(${text})` : text;
}

function levelOfNode(node: ExpressionNode): number {
  switch (node.type) {
    case 'binary':
      return levelOf(node.operator);
    case 'unary':
      return node.operator === '-' ? UNARY_LEVEL : NOT_LEVEL;
    case 'from':
      return PRIMARY_LEVEL - 1;
    case 'number':
      // A negative point of a scale is written with its sign.
      return node.value < 0 || Object.is(node.value, -0) ? UNARY_LEVEL : PRIMARY_LEVEL;
    default:
      return PRIMARY_LEVEL;
  }
}
