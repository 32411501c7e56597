/** Evaluating a checked expression against solved analyses. */

import type { IntervalSet } from '../../solver/waveform/interval-set.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import type { CheckedExpression, QuantityReference, Span } from './expression.ts';

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
  | { readonly ok: true; readonly value: number | Waveform | IntervalSet | boolean }
  /** There is no value, and why, in words. */
  | { readonly ok: false; readonly reason: string; readonly span: Span };

/** Evaluates a checked expression. A number that is returned is finite. */
export function evaluateExpression(_expression: CheckedExpression, _scope: Scope): Evaluation {
  return { ok: false, reason: 'not yet', span: { start: 0, end: 1 } };
}
