/** The factorisation of factors.ts for complex matrices: real and imaginary parts in separate flat arrays. */
import type { Elimination } from './factors.ts';

export interface ComplexFactors {
  readonly elimination: Elimination;
  readonly lowerReal: Float64Array;
  readonly lowerImaginary: Float64Array;
  readonly upperReal: Float64Array;
  readonly upperImaginary: Float64Array;
  readonly inverseReal: Float64Array;
  readonly inverseImaginary: Float64Array;
  readonly workReal: Float64Array;
  readonly workImaginary: Float64Array;
}

export function allocateComplexFactors(elimination: Elimination): ComplexFactors {
  const { order } = elimination;
  const lower = order.lowerColumn.length;
  const upper = order.upperColumn.length;
  return {
    elimination,
    lowerReal: new Float64Array(lower),
    lowerImaginary: new Float64Array(lower),
    upperReal: new Float64Array(upper),
    upperImaginary: new Float64Array(upper),
    inverseReal: new Float64Array(order.size),
    inverseImaginary: new Float64Array(order.size),
    workReal: new Float64Array(order.size),
    workImaginary: new Float64Array(order.size),
  };
}

/** Factorises in place; false where a pivot vanished. */
export function factoriseComplex(factors: ComplexFactors, real: Float64Array, imaginary: Float64Array): boolean {
  const { elimination, lowerReal, lowerImaginary, upperReal, upperImaginary, inverseReal, inverseImaginary } = factors;
  const { workReal, workImaginary } = factors;
  const { entryStart, entrySlot, entryStep, order } = elimination;
  const { size, lowerStart, lowerColumn, upperStart, upperColumn } = order;
  for (let k = 0; k < size; k++) {
    const lowerEnd = lowerStart[k + 1]!;
    const upperEnd = upperStart[k + 1]!;
    for (let p = lowerStart[k]!; p < lowerEnd; p++) {
      workReal[lowerColumn[p]!] = 0;
      workImaginary[lowerColumn[p]!] = 0;
    }
    for (let p = upperStart[k]!; p < upperEnd; p++) {
      workReal[upperColumn[p]!] = 0;
      workImaginary[upperColumn[p]!] = 0;
    }
    workReal[k] = 0;
    workImaginary[k] = 0;
    for (let e = entryStart[k]!; e < entryStart[k + 1]!; e++) {
      workReal[entryStep[e]!] = real[entrySlot[e]!]!;
      workImaginary[entryStep[e]!] = imaginary[entrySlot[e]!]!;
    }
    for (let p = lowerStart[k]!; p < lowerEnd; p++) {
      const j = lowerColumn[p]!;
      const a = workReal[j]!;
      const b = workImaginary[j]!;
      const multiplierReal = a * inverseReal[j]! - b * inverseImaginary[j]!;
      const multiplierImaginary = a * inverseImaginary[j]! + b * inverseReal[j]!;
      lowerReal[p] = multiplierReal;
      lowerImaginary[p] = multiplierImaginary;
      for (let u = upperStart[j]!; u < upperStart[j + 1]!; u++) {
        const column = upperColumn[u]!;
        const c = upperReal[u]!;
        const d = upperImaginary[u]!;
        workReal[column]! -= multiplierReal * c - multiplierImaginary * d;
        workImaginary[column]! -= multiplierReal * d + multiplierImaginary * c;
      }
    }
    for (let p = upperStart[k]!; p < upperEnd; p++) {
      upperReal[p] = workReal[upperColumn[p]!]!;
      upperImaginary[p] = workImaginary[upperColumn[p]!]!;
    }
    const a = workReal[k]!;
    const b = workImaginary[k]!;
    const square = a * a + b * b;
    if (!(square > 0)) return false;
    inverseReal[k] = a / square;
    inverseImaginary[k] = -b / square;
  }
  return true;
}

/** Solves in place. */
export function solveComplex(factors: ComplexFactors, real: Float64Array, imaginary: Float64Array): void {
  const { elimination, lowerReal, lowerImaginary, upperReal, upperImaginary, inverseReal, inverseImaginary } = factors;
  const { workReal, workImaginary } = factors;
  const { size, rowOf, columnOf, lowerStart, lowerColumn, upperStart, upperColumn } = elimination.order;
  for (let k = 0; k < size; k++) {
    let sumReal = real[rowOf[k]!]!;
    let sumImaginary = imaginary[rowOf[k]!]!;
    for (let p = lowerStart[k]!; p < lowerStart[k + 1]!; p++) {
      const a = workReal[lowerColumn[p]!]!;
      const b = workImaginary[lowerColumn[p]!]!;
      sumReal -= lowerReal[p]! * a - lowerImaginary[p]! * b;
      sumImaginary -= lowerReal[p]! * b + lowerImaginary[p]! * a;
    }
    workReal[k] = sumReal;
    workImaginary[k] = sumImaginary;
  }
  for (let k = size - 1; k >= 0; k--) {
    let sumReal = workReal[k]!;
    let sumImaginary = workImaginary[k]!;
    for (let p = upperStart[k]!; p < upperStart[k + 1]!; p++) {
      const a = workReal[upperColumn[p]!]!;
      const b = workImaginary[upperColumn[p]!]!;
      sumReal -= upperReal[p]! * a - upperImaginary[p]! * b;
      sumImaginary -= upperReal[p]! * b + upperImaginary[p]! * a;
    }
    workReal[k] = sumReal * inverseReal[k]! - sumImaginary * inverseImaginary[k]!;
    workImaginary[k] = sumReal * inverseImaginary[k]! + sumImaginary * inverseReal[k]!;
  }
  for (let k = 0; k < size; k++) {
    real[columnOf[k]!] = workReal[k]!;
    imaginary[columnOf[k]!] = workImaginary[k]!;
  }
}
