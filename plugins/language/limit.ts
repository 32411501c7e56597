/** The limits of a figure: `< x`, `<= x`, `> x`, `>= x`, or `a .. b` with both ends allowed. */
import { type Dimension, equal } from './dimensions.ts';
import type { Limit } from './model.ts';
import { report } from './passage.ts';
import { type NoteScope, readExpression, written } from './written-expression.ts';
import type { YamlNode } from './yaml-tree.ts';

const COMPARISON = /^\s*(<=|>=|<|>|≤|≥)/;

/** Reads a limit of a figure of this dimension; nothing if it has a problem, which is reported. */
export function readLimit(
  node: YamlNode,
  scope: NoteScope,
  from: string | undefined,
  dimension: Dimension | undefined,
): Limit | undefined {
  const complain = (message: string) => {
    report(node.passage, node.place, {
      message,
      expected: '`< x`, `<= x`, `> x`, `>= x` or `a .. b`',
      example: 'must: 2 mA .. 20 mA',
    });
    return undefined;
  };
  if (node.type !== 'scalar') return complain(`\`must\` holds a ${node.type === 'sequence' ? 'list' : 'mapping'}`);
  const due = { due: 'number', ...(dimension ? { dimension } : {}) } as const;
  const bound = (start: number, end: number) => readExpression(written(node, start, end), scope, from, due);
  const { text } = node;

  const comparison = COMPARISON.exec(text);
  if (comparison) {
    const read = bound(comparison[0].length, text.length);
    if (!read) return undefined;
    const sign = comparison[1]!;
    const side = { bound: read, inclusive: !['<', '>'].includes(sign) };
    return { text: text.trim(), ...(/^[<≤]/.test(sign) ? { upper: side } : { lower: side }) };
  }
  const dots = text.indexOf('..');
  if (dots === -1) return complain(`\`${text.trim()}\` is not a limit`);
  const lower = bound(0, dots);
  const upper = bound(dots + 2, text.length);
  if (!lower || !upper) return undefined;
  const { root: low } = lower;
  const { root: high } = upper;
  if (
    low.type === 'number' &&
    high.type === 'number' &&
    equal(low.dimension, high.dimension) &&
    low.value > high.value
  ) {
    return complain(`the lower limit of \`${text.trim()}\` is above the upper`);
  }
  return {
    text: text.trim(),
    lower: { bound: lower, inclusive: true },
    upper: { bound: upper, inclusive: true },
  };
}
