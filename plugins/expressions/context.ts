/** What an expression can name: the surroundings that the language stage gathers and the checker reads. */
import type { AnalysisRequest } from '../../solver/analysis.ts';
import type { Dimension } from '../language/dimensions.ts';
import type { ExpressionKind } from './expression.ts';

export interface CheckContext {
  /** Analyses that may be named after `@`, in the note's order. */
  readonly analyses: readonly AnalysisInScope[];
  /** The analysis of unqualified names: the block's `from:`, or the nearest above. */
  readonly from?: string;
  readonly circuits: readonly CircuitInScope[];
  /** The circuit of unqualified part data where there is no analysis; default the only circuit of the list. */
  readonly circuit?: string;
  /** Figures of this note that stand above, by name. */
  readonly figures: ReadonlyMap<string, FigureInScope>;
  /** A figure of another note; the words lead to a fault (`circle`: that note itself waits for this one). Default: every note is unknown. */
  readonly foreignFigure?: (
    note: string,
    figure: string,
  ) => FigureInScope | 'unknown note' | 'unknown figure' | 'circle';
  /** Names to suggest where another note is unknown. */
  readonly notes?: readonly string[];
  /**
   * What is due where the expression stands: a `number` (figure, limit, inline value), something to draw (`curve`: a
   * waveform, or a number as a level line), or something that holds or not over the axis (`condition`, a mark). Default:
   * anything.
   */
  readonly due?: 'number' | 'curve' | 'condition';
  /** The dimension that is due, where one is. */
  readonly dimension?: Dimension;
}

export interface AnalysisInScope {
  readonly name: string;
  readonly find: AnalysisRequest['find'];
  /** Name of the circuit block. */
  readonly circuit: string;
  /** Designator of a characteristic's swept source. */
  readonly sweep?: string;
}

export interface CircuitInScope {
  readonly name: string;
  readonly components: readonly ComponentInScope[];
}

export interface ComponentInScope {
  readonly designator: string;
  readonly kind: string;
  readonly nodes: readonly string[];
  /** By path: `value`, `rating.forward_current`. */
  readonly data?: ReadonlyMap<string, { readonly value: number; readonly dimension: Dimension }>;
}

export interface FigureInScope {
  readonly kind: ExpressionKind;
  readonly dimension: Dimension;
}
