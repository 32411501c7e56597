/**
 * Numeric LU factorisation on a fixed pivot order, row by row (Doolittle) on flat arrays: L has a unit diagonal, the
 * inverse pivots are kept apart. The same order serves every later matrix of the pattern until a pivot fades.
 */
import type { Pattern } from './pattern.ts';
import { findPivotOrder, type PivotOrder, type Singular } from './pivot-order.ts';

/** A pivot below this fraction of its row means that the order no longer suits the values. */
const FADED_PIVOT = 1e-6;

export interface Elimination {
  readonly order: PivotOrder;
  /** For step k: positions in the matrix' values, and the step of each one's column, at [entryStart[k], entryStart[k + 1]). */
  readonly entryStart: Int32Array;
  readonly entrySlot: Int32Array;
  readonly entryStep: Int32Array;
}

export interface RealFactors {
  readonly elimination: Elimination;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  readonly inversePivot: Float64Array;
  readonly work: Float64Array;
}

/** The part of the analysis that depends on the pattern and the order only. */
export function planElimination(pattern: Pattern, order: PivotOrder): Elimination {
  const n = pattern.size;
  const stepOfColumn = new Int32Array(n);
  for (let k = 0; k < n; k++) stepOfColumn[order.columnOf[k]!] = k;
  const entryStart = new Int32Array(n + 1);
  const entrySlot = new Int32Array(pattern.column.length);
  const entryStep = new Int32Array(pattern.column.length);
  let next = 0;
  for (let k = 0; k < n; k++) {
    const row = order.rowOf[k]!;
    for (let s = pattern.rowStart[row]!; s < pattern.rowStart[row + 1]!; s++) {
      entrySlot[next] = s;
      entryStep[next++] = stepOfColumn[pattern.column[s]!]!;
    }
    entryStart[k + 1] = next;
  }
  return { order, entryStart, entrySlot, entryStep };
}

/** Room for the factors of real matrices under this elimination. */
export function allocateFactors(elimination: Elimination): RealFactors {
  const { order } = elimination;
  return {
    elimination,
    lower: new Float64Array(order.lowerColumn.length),
    upper: new Float64Array(order.upperColumn.length),
    inversePivot: new Float64Array(order.size),
    work: new Float64Array(order.size),
  };
}

/** Factorises in place; false where a pivot vanished or faded, and a new pivot order is due. */
export function factorise(factors: RealFactors, values: Float64Array): boolean {
  const { elimination, lower, upper, inversePivot, work } = factors;
  const { entryStart, entrySlot, entryStep, order } = elimination;
  const { size, lowerStart, lowerColumn, upperStart, upperColumn } = order;
  for (let k = 0; k < size; k++) {
    // the row's pattern is cleared, the matrix' row laid into it, then the rows above are taken away
    const lowerEnd = lowerStart[k + 1]!;
    const upperEnd = upperStart[k + 1]!;
    for (let p = lowerStart[k]!; p < lowerEnd; p++) work[lowerColumn[p]!] = 0;
    for (let p = upperStart[k]!; p < upperEnd; p++) work[upperColumn[p]!] = 0;
    work[k] = 0;
    for (let e = entryStart[k]!; e < entryStart[k + 1]!; e++) work[entryStep[e]!] = values[entrySlot[e]!]!;
    for (let p = lowerStart[k]!; p < lowerEnd; p++) {
      const j = lowerColumn[p]!;
      const multiplier = work[j]! * inversePivot[j]!;
      lower[p] = multiplier;
      if (multiplier === 0) continue;
      for (let u = upperStart[j]!; u < upperStart[j + 1]!; u++) work[upperColumn[u]!]! -= multiplier * upper[u]!;
    }
    const pivot = work[k]!;
    let largest = 0;
    for (let p = upperStart[k]!; p < upperEnd; p++) {
      const value = work[upperColumn[p]!]!;
      upper[p] = value;
      const size = value < 0 ? -value : value;
      if (size > largest) largest = size;
    }
    const pivotSize = pivot < 0 ? -pivot : pivot;
    if (!(pivotSize > FADED_PIVOT * largest) || pivotSize === 0) return false;
    inversePivot[k] = 1 / pivot;
  }
  return true;
}

/** Solves in place: `x` holds the right-hand side before and the solution after. */
export function solveFactored(factors: RealFactors, x: Float64Array): void {
  const { elimination, lower, upper, inversePivot, work } = factors;
  const { size, rowOf, columnOf, lowerStart, lowerColumn, upperStart, upperColumn } = elimination.order;
  for (let k = 0; k < size; k++) {
    let sum = x[rowOf[k]!]!;
    for (let p = lowerStart[k]!; p < lowerStart[k + 1]!; p++) sum -= lower[p]! * work[lowerColumn[p]!]!;
    work[k] = sum;
  }
  for (let k = size - 1; k >= 0; k--) {
    let sum = work[k]!;
    for (let p = upperStart[k]!; p < upperStart[k + 1]!; p++) sum -= upper[p]! * work[upperColumn[p]!]!;
    work[k] = sum * inversePivot[k]!;
  }
  for (let k = 0; k < size; k++) x[columnOf[k]!] = work[k]!;
}

/** Analyses and factorises in one go; the singular rows and columns where there is no solution. */
export function analyseAndFactorise(pattern: Pattern, values: Float64Array): RealFactors | Singular {
  const order = findPivotOrder(pattern, values);
  if ('singular' in order) return order;
  const factors = allocateFactors(planElimination(pattern, order));
  // the values that chose the order cannot fade under it, unless the matrix is singular to working precision
  return factorise(factors, values) ? factors : { singular: true, rows: [], columns: [] };
}
