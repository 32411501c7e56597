/** The expression that an author wrote, read and checked; what the evaluator takes. */
import type { Property } from '../../solver/quantities.ts';
import type { Dimension } from '../language/dimensions.ts';

/** Half-open range of characters within the expression's text, for carets. */
export interface Span {
  readonly start: number;
  readonly end: number;
}

/** What is wrong with an expression: words, and the range that the caret underlines. */
export interface Fault {
  readonly span: Span;
  readonly message: string;
  readonly expected?: string;
  readonly example?: string;
}

export type BinaryOperator = '+' | '-' | '*' | '/' | '^' | '<' | '<=' | '>' | '>=' | '==' | '!=' | 'and' | 'or';

export type ExpressionNode =
  | { readonly type: 'number'; readonly value: number; readonly dimension: Dimension; readonly span: Span }
  /** A node's potential (`lamp`), a figure's name, or a bare component is told apart by the checker. */
  | { readonly type: 'name'; readonly name: string; readonly span: Span }
  /** `D1.i`, `Q1.collector.i`, `C1.value`: path after the first name. */
  | { readonly type: 'member'; readonly object: string; readonly path: readonly string[]; readonly span: Span }
  /** `other-note#lamp_mean`: a figure of another note. */
  | { readonly type: 'foreign'; readonly note: string; readonly figure: string; readonly span: Span }
  | {
      readonly type: 'call';
      readonly function: string;
      readonly arguments: readonly ExpressionNode[];
      readonly span: Span;
    }
  | { readonly type: 'unary'; readonly operator: '-' | 'not'; readonly operand: ExpressionNode; readonly span: Span }
  | {
      readonly type: 'binary';
      readonly operator: BinaryOperator;
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
  /** The same with every name told apart and bound to its analysis. */
  readonly resolved: ResolvedNode;
  readonly uses: Uses;
}

/** What has to be there before an expression can be evaluated. */
export interface Uses {
  /** Names of analyses. */
  readonly analyses: readonly string[];
  /** Names of figures of the same note. */
  readonly figures: readonly string[];
  readonly foreignFigures: readonly { readonly note: string; readonly figure: string }[];
}

/** A name of a quantity, as `readQuantity` of the solver takes it. */
export type QuantityReference =
  | { readonly node: string }
  | { readonly designator: string; readonly property: Property }
  | { readonly axis: true };

/** An expression whose names have been told apart. Numbers are in SI. */
export type ResolvedNode = { readonly span: Span } & (
  | { readonly type: 'number'; readonly value: number }
  | { readonly type: 'quantity'; readonly analysis: string; readonly quantity: QuantityReference }
  /** A datum of a component: `value`, `rating.forward_current`. */
  | { readonly type: 'constant'; readonly circuit: string; readonly designator: string; readonly path: string }
  | { readonly type: 'figure'; readonly name: string; readonly note?: string }
  | {
      readonly type: 'call';
      readonly function: string;
      readonly arguments: readonly ResolvedNode[];
      /** Dimension of the first argument's axis. */
      readonly axis: Dimension;
    }
  | { readonly type: 'unary'; readonly operator: '-' | 'not'; readonly operand: ResolvedNode }
  | {
      readonly type: 'binary';
      readonly operator: BinaryOperator;
      readonly left: ResolvedNode;
      readonly right: ResolvedNode;
    }
);
