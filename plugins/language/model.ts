/** A note as the language stage leaves it: checked, plain data, every author's mistake already in `problems`. */
import type { AnalysisRequest } from '../../solver/analysis.ts';
import type { Circuit } from '../../solver/circuit.ts';
import type { CheckedExpression } from '../expressions/expression.ts';
import type { Problem } from '../problems.ts';
import type { Dimension } from './dimensions.ts';

/** Where something stands in the note's file: 1-based line and column, and its length in characters. */
export interface Place {
  readonly line: number;
  readonly column: number;
  readonly length: number;
}

export type NoteStatus = 'draft' | 'in review' | 'released';

export interface TitleBlock {
  readonly title: string;
  readonly number?: string;
  readonly revision?: string;
  readonly status: NoteStatus;
  readonly author?: string;
  readonly date?: string;
  readonly reviewers: readonly string[];
}

export interface Note {
  /** Path as messages name it. */
  readonly file: string;
  /** File name without `.md`; other notes refer to it by this. */
  readonly id: string;
  /** The whole file as read: messages quote its lines. */
  readonly text: string;
  readonly titleBlock: TitleBlock;
  /** The blocks that could be read, in the note's order. */
  readonly blocks: readonly Block[];
  readonly inlineValues: readonly InlineValue[];
  readonly problems: readonly Problem[];
  /** Absolute paths of the part and data files that were read, or looked for; sorted. */
  readonly dependencies: readonly string[];
}

interface BlockPlace {
  readonly name: string;
  /** 1-based line of the opening fence. */
  readonly line: number;
  /** 1-based line of the closing fence. */
  readonly endLine: number;
  /** The block's YAML as written. */
  readonly source: string;
}

export interface CircuitBlock extends BlockPlace {
  readonly kind: 'circuit';
  readonly caption?: string;
  readonly circuit: Circuit;
  /** For the component table, in the block's order. */
  readonly components: readonly ComponentDescription[];
}

export interface ComponentDescription {
  readonly designator: string;
  readonly kind: string;
  /** The value as the author wrote it, e.g. `47 Ω ±5 %`, or a short description of the model. */
  readonly value: string;
  readonly nodes: readonly string[];
  /** Relative deviations where a tolerance was stated: +0.05 and -0.05 for ±5 %. */
  readonly tolerance?: { readonly plus: number; readonly minus: number };
  /** Name of the part that the value comes from. */
  readonly part?: string;
  /** What expressions read as `C1.value`, `D1.rating.forward_current`: by the path after the designator, in SI. */
  readonly data?: {
    readonly [path: string]: { readonly value: number; readonly dimension: Dimension; readonly text: string };
  };
  readonly place: Place;
}

export interface AnalysisBlock extends BlockPlace {
  readonly kind: 'analysis';
  /** Name of the circuit block. */
  readonly circuit: string;
  readonly request: AnalysisRequest;
  /** Kelvin; one run for each. Empty: the circuit's own. */
  readonly temperatures: readonly number[];
  /** A family: one run for each combination. */
  readonly vary: readonly Variation[];
  /** Relative accuracy that every figure must meet. */
  readonly accuracy: number;
}

export interface Variation {
  readonly designator: string;
  /** SI values, with the text that the author wrote for each. */
  readonly values: readonly { readonly value: number; readonly text: string }[];
}

export interface PlotBlock extends BlockPlace {
  readonly kind: 'plot';
  readonly title?: string;
  readonly caption?: string;
  /** Name of the analysis. */
  readonly from: string;
  readonly lines: readonly PlotLine[];
  readonly right: readonly PlotLine[];
  /** Horizontal axis in place of time or the swept value. */
  readonly against?: CheckedExpression;
  /** Spans to be marked (where the condition holds), with a label. */
  readonly marks: readonly { readonly when: CheckedExpression; readonly label: string }[];
  /** Merged into the Vega-Lite specification. */
  readonly vega?: { readonly [key: string]: unknown };
}

export interface PlotLine {
  readonly expression: CheckedExpression;
  readonly label?: string;
  /** Unit shown, e.g. `mA`; default the SI unit with a fitting prefix. */
  readonly unit?: string;
}

export interface FiguresBlock extends BlockPlace {
  readonly kind: 'figures';
  readonly caption?: string;
  readonly figures: readonly Figure[];
}

export interface Figure {
  readonly name: string;
  readonly expression: CheckedExpression;
  readonly label?: string;
  readonly symbol?: string;
  /** Unit shown. */
  readonly unit?: string;
  readonly digits?: number;
  readonly must?: Limit;
  readonly requirement?: string;
  readonly hidden: boolean;
  readonly place: Place;
}

export interface Limit {
  /** As the author wrote it. */
  readonly text: string;
  readonly lower?: { readonly bound: CheckedExpression; readonly inclusive: boolean };
  readonly upper?: { readonly bound: CheckedExpression; readonly inclusive: boolean };
}

/** `:val[expression]{in=mA digits=3}` in the prose. */
export interface InlineValue {
  readonly expression: CheckedExpression;
  readonly unit?: string;
  readonly digits?: number;
  /** Counts the computed values of the note's prose from 0, those with problems included. */
  readonly index: number;
  readonly place: Place;
}

export type Block = CircuitBlock | AnalysisBlock | PlotBlock | FiguresBlock;
