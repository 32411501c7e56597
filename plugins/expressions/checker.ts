/** What the parts of the checker share: the surroundings, the list of faults, and words for messages. */
import { type Dimension, isDimensionless, nameOf, siUnitText } from '../language/dimensions.ts';
import type { AnalysisInScope, CheckContext } from './context.ts';
import type { ExpressionNode, Span } from './expression.ts';
import type { FaultWords, Typed } from './names.ts';
import { clip } from './tokens.ts';

export interface Checker {
  readonly text: string;
  readonly context: CheckContext;
  /** What a node yields; nothing where it has a fault, which is reported. */
  readonly check: (node: ExpressionNode, analysis: AnalysisInScope | undefined) => Typed | undefined;
  readonly report: (span: Span, words: FaultWords) => undefined;
}

/** A part of the text as messages quote it. */
export function quote(checker: Checker, { start, end }: Span): string {
  return `\`${clip(checker.text.slice(start, end))}\``;
}

/** Where a bare number stands for a quantity: how it is written with its unit. */
export function unitHint(checker: Checker, node: ExpressionNode, dimension: Dimension): Partial<FaultWords> {
  const unit = siUnitText(dimension);
  if (node.type !== 'number' || !isDimensionless(node.dimension) || unit === '') return {};
  const written = clip(checker.text.slice(node.span.start, node.span.end));
  return { expected: `a unit of ${nameOf(dimension).replace(/^an? /, '')}`, example: `${written} ${unit}` };
}
