/** The expression that an author wrote, read and checked; what the evaluator takes. */
import type { Dimension } from '../language/dimensions.ts';

/** Half-open range of characters within the expression's text, for carets. */
export interface Span {
  readonly start: number;
  readonly end: number;
}

export type ExpressionNode =
  | { readonly type: 'number'; readonly value: number; readonly dimension: Dimension; readonly span: Span }
  /** A node's potential (`lamp`), a figure's name, or a bare component is told apart by the checker. */
  | { readonly type: 'name'; readonly name: string; readonly span: Span }
  /** `D1.i`, `Q1.collector.i`, `C1.value`: path after the first name. */
  | { readonly type: 'member'; readonly object: string; readonly path: readonly string[]; readonly span: Span }
  | {
      readonly type: 'call';
      readonly function: string;
      readonly arguments: readonly ExpressionNode[];
      readonly span: Span;
    }
  | { readonly type: 'unary'; readonly operator: '-' | 'not'; readonly operand: ExpressionNode; readonly span: Span }
  | {
      readonly type: 'binary';
      readonly operator: '+' | '-' | '*' | '/' | '^' | '<' | '<=' | '>' | '>=' | '==' | '!=' | 'and' | 'or';
      readonly left: ExpressionNode;
      readonly right: ExpressionNode;
      readonly span: Span;
    }
  /** `x @ steady` */
  | { readonly type: 'from'; readonly operand: ExpressionNode; readonly analysis: string; readonly span: Span };

/** What an expression yields: one number, a number over the analysis axis, or a truth value of either sort. */
export type ExpressionKind = 'number' | 'waveform' | 'condition' | 'truth';

export interface CheckedExpression {
  readonly text: string;
  readonly root: ExpressionNode;
  readonly kind: ExpressionKind;
  readonly dimension: Dimension;
  /** The analysis that unqualified names are read from. */
  readonly analysis?: string;
}
