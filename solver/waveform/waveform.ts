/**
 * A quantity over an axis (time in seconds, or a swept value): on every step of the grid a cubic polynomial through
 * four nodes. The nodes are those of the three-stage Radau IIA method and the step's start, so the values that the
 * integrator found are stored as they are, and `integral` has the method's own order five.
 */
const ROOT6 = Math.sqrt(6);

/** Positions within a step, as fractions of it (Hairer & Wanner, Solving ODEs II, table IV.5.6). */
export const COLLOCATION_NODES = [0, (4 - ROOT6) / 10, (4 + ROOT6) / 10, 1] as const;

/** Weights of the Radau quadrature at nodes 1 to 3, exact for polynomials up to degree 4. */
export const RADAU_WEIGHTS = [(16 - ROOT6) / 36, (16 + ROOT6) / 36, 1 / 9] as const;

/** Weights of the values at the four nodes in the step's cubic at the fraction `at` (Lagrange). */
export function lagrangeWeights(at: number): [number, number, number, number] {
  const weights = COLLOCATION_NODES.map((node) =>
    COLLOCATION_NODES.reduce(
      (product, other) => (other === node ? product : (product * (at - other)) / (node - other)),
      1,
    ),
  );
  return [weights[0]!, weights[1]!, weights[2]!, weights[3]!];
}

export interface Waveform {
  /** Ends of the steps, ascending, length N + 1. */
  readonly grid: Float64Array;
  /** Values at the four nodes of each step, length 4 N; the value may jump between steps. */
  readonly values: Float64Array;
}

/** Why a functional has no value for a waveform, in words that complete "no value: ...". */
export interface NoValue {
  readonly none: string;
}

/** A number, or the reason why there is none. */
export type Outcome = number | NoValue;
