/** Stretches of an axis on which a condition holds. */

export interface IntervalSet {
  /** Ends of the stretches, ascending and apart: starts[k] <= ends[k] < starts[k + 1]. Equal ends: a single instant. */
  readonly starts: Float64Array;
  readonly ends: Float64Array;
  /** The axis over which the condition was asked. */
  readonly from: number;
  readonly to: number;
}
