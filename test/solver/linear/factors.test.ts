import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { allocateComplexFactors, factoriseComplex, solveComplex } from '../../../solver/linear/complex-factors.ts';
import {
  allocateFactors,
  analyseAndFactorise,
  factorise,
  planElimination,
  type RealFactors,
  solveFactored,
} from '../../../solver/linear/factors.ts';
import { buildPattern, multiplyAdd, type Pattern, slotOf } from '../../../solver/linear/pattern.ts';
import { findPivotOrder } from '../../../solver/linear/pivot-order.ts';

type Entry = readonly [row: number, column: number, value: number];

function sparse(size: number, entries: readonly Entry[]): { pattern: Pattern; values: Float64Array } {
  const pattern = buildPattern(
    size,
    entries.map(([row, column]) => [row, column] as const),
  );
  const values = new Float64Array(pattern.column.length);
  for (const [row, column, value] of entries) values[slotOf(pattern, row, column)]! += value;
  return { pattern, values };
}

/** Gaussian elimination with partial pivoting, as in any textbook (G. H. Golub and C. F. Van Loan, Matrix Computations, algorithm 3.4.1). */
function solveDense(matrix: readonly number[][], right: readonly number[]): number[] {
  const n = right.length;
  const a = matrix.map((row, i) => [...row, right[i]!]);
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(a[i]![k]!) > Math.abs(a[pivot]![k]!)) pivot = i;
    [a[k], a[pivot]] = [a[pivot]!, a[k]!];
    for (let i = k + 1; i < n; i++) {
      const m = a[i]![k]! / a[k]![k]!;
      for (let j = k; j <= n; j++) a[i]![j]! -= m * a[k]![j]!;
    }
  }
  const x = new Array<number>(n).fill(0);
  for (let k = n - 1; k >= 0; k--) {
    let sum = a[k]![n]!;
    for (let j = k + 1; j < n; j++) sum -= a[k]![j]! * x[j]!;
    x[k] = sum / a[k]![k]!;
  }
  return x;
}

function dense(size: number, entries: readonly Entry[]): number[][] {
  const matrix = Array.from({ length: size }, () => new Array<number>(size).fill(0));
  for (const [row, column, value] of entries) matrix[row]![column]! += value;
  return matrix;
}

const norm = (values: Iterable<number>): number => {
  let largest = 0;
  for (const value of values) largest = Math.max(largest, Math.abs(value));
  return largest;
};

/** ‖b - A x‖ / (‖A‖ ‖x‖ + ‖b‖) in the maximum norm, in units of the rounding: a few for a backward stable solver. */
function normalisedResidual(
  { pattern, values }: { pattern: Pattern; values: Float64Array },
  x: Float64Array,
  b: Float64Array,
): number {
  const product = new Float64Array(pattern.size);
  multiplyAdd(pattern, values, x, product);
  let rowSum = 0;
  for (let i = 0; i < pattern.size; i++) {
    let sum = 0;
    for (let s = pattern.rowStart[i]!; s < pattern.rowStart[i + 1]!; s++) sum += Math.abs(values[s]!);
    rowSum = Math.max(rowSum, sum);
  }
  const residual = norm(product.map((value, i) => value - b[i]!));
  return residual / ((rowSum * norm(x) + norm(b)) * Number.EPSILON || 1);
}

function solved(factors: ReturnType<typeof analyseAndFactorise>, b: Float64Array): Float64Array {
  if ('singular' in factors) throw new Error('singular');
  const x = b.slice();
  solveFactored(factors, x);
  return x;
}

/** Random patterns whose diagonal is strong enough that the matrix is regular (row diagonally dominant). */
const dominantMatrix = fc
  .integer({ min: 1, max: 30 })
  .chain((size) =>
    fc.record({
      size: fc.constant(size),
      off: fc.array(fc.tuple(fc.nat(size - 1), fc.nat(size - 1), fc.double({ min: -1, max: 1, noNaN: true })), {
        maxLength: 4 * size,
      }),
      sign: fc.array(fc.boolean(), { minLength: size, maxLength: size }),
      right: fc.array(fc.double({ min: -10, max: 10, noNaN: true }), { minLength: size, maxLength: size }),
      /** Rows and columns are scaled by powers of ten: a conductance in siemens stands beside one in picosiemens. */
      decades: fc.array(fc.integer({ min: -6, max: 6 }), { minLength: size, maxLength: size }),
      shift: fc.nat(size - 1),
    }),
  )
  .map(({ size, off, sign, right, decades, shift }) => {
    const sums = new Array<number>(size).fill(1e-3);
    for (const [row, column, value] of off) if (row !== column) sums[row]! += Math.abs(value);
    const entries: Entry[] = off.filter(([row, column]) => row !== column);
    for (let i = 0; i < size; i++) entries.push([i, i, (sign[i] ? 1 : -1) * sums[i]!]);
    // rotating the columns takes the large entries off the diagonal
    return {
      size,
      right: Float64Array.from(right),
      entries: entries.map(
        ([row, column, value]): Entry => [row, (column + shift) % size, value * 10 ** decades[row]!],
      ),
    };
  });

describe('real factorisation', () => {
  test('random sparse matrices agree with dense elimination', () => {
    fc.assert(
      fc.property(dominantMatrix, ({ size, entries, right }) => {
        const matrix = sparse(size, entries);
        const b = right;
        const x = solved(analyseAndFactorise(matrix.pattern, matrix.values), b);
        // row scaling by up to 12 decades makes the norm of A mislead: each row is judged by itself
        const expected = solveDense(dense(size, entries), [...b]);
        for (let i = 0; i < size; i++) {
          let sum = -b[i]!;
          let size1 = Math.abs(b[i]!);
          for (let s = matrix.pattern.rowStart[i]!; s < matrix.pattern.rowStart[i + 1]!; s++) {
            const term = matrix.values[s]! * x[matrix.pattern.column[s]!]!;
            sum += term;
            size1 += Math.abs(matrix.values[s]!) * norm(x);
          }
          expect(Math.abs(sum)).toBeLessThanOrEqual(200 * Number.EPSILON * size1 + 1e-300);
        }
        // the diagonal excess of 1e-3 bounds the condition of the scaled matrix
        expect(norm(x.map((value, i) => value - expected[i]!))).toBeLessThanOrEqual(1e-8 * (norm(expected) + 1e-300));
      }),
      { numRuns: 300, seed: 1 },
    );
  });

  test('permuted triangular and saddle-point matrices, which no diagonal pivot solves', () => {
    // a source between two nodes: [G 1; 1 0]
    const entries: Entry[] = [
      [0, 0, 1e-3],
      [0, 1, -1e-3],
      [1, 0, -1e-3],
      [1, 1, 1e-3],
      [0, 2, 1],
      [2, 0, 1],
      [1, 3, 1],
      [3, 1, 1],
      [2, 2, 0],
      [3, 3, 0],
    ];
    const matrix = sparse(4, entries);
    const b = Float64Array.of(0, 0, 5, 3);
    const x = solved(analyseAndFactorise(matrix.pattern, matrix.values), b);
    expect([...x]).toEqual([5, 3, -0.002, 0.002]);
  });

  test('structurally singular: an empty column and its row are named', () => {
    const { pattern, values } = sparse(3, [
      [0, 0, 1],
      [1, 0, 1],
      [1, 1, 1],
      [2, 1, 2],
      [2, 2, 0],
    ]);
    const result = findPivotOrder(pattern, values);
    expect(result).toMatchObject({ singular: true, columns: [2] });
  });

  test('numerically singular: a loose network (conductances that sum to zero)', () => {
    // two nodes tied to each other and to nothing else
    const { pattern, values } = sparse(3, [
      [0, 0, 1],
      [1, 1, 2],
      [1, 2, -2],
      [2, 1, -2],
      [2, 2, 2],
    ]);
    expect(analyseAndFactorise(pattern, values)).toMatchObject({ singular: true });
    // also where rounding hides it: 0.1 + 0.2 is not 0.3
    const rounded = sparse(3, [
      [0, 0, 0.1 + 0.2],
      [0, 1, -0.1],
      [0, 2, -0.2],
      [1, 0, -0.1],
      [1, 1, 0.1 + 0.7],
      [1, 2, -0.7],
      [2, 0, -0.2],
      [2, 1, -0.7],
      [2, 2, 0.2 + 0.7],
    ]);
    const result = analyseAndFactorise(rounded.pattern, rounded.values);
    if ('singular' in result) return;
    // if it is factorised at all, the last pivot is rounding
    const smallest = Math.min(...result.inversePivot.map((pivot) => 1 / Math.abs(pivot)));
    expect(smallest).toBeLessThan(1e-15);
  });

  test('one order serves changed values; a faded pivot is refused and a new order solves', () => {
    const pattern = buildPattern(2, [
      [0, 0],
      [0, 1],
      [1, 0],
      [1, 1],
    ]);
    const first = Float64Array.of(4, 1, 1, 3);
    const factors = analyseAndFactorise(pattern, first) as RealFactors;
    for (const values of [first, Float64Array.of(1e3, 2, -7, 5), Float64Array.of(1, 0, 0, 1e-9)]) {
      expect(factorise(factors, values)).toBe(true);
      const x = Float64Array.of(1, 2);
      solveFactored(factors, x);
      expect(normalisedResidual({ pattern, values }, x, Float64Array.of(1, 2))).toBeLessThan(10);
    }
    const { rowOf, columnOf } = factors.elimination.order;
    const faded = Float64Array.of(1, 1, 1, 1);
    faded[2 * rowOf[0]! + columnOf[0]!] = 1e-12;
    expect(factorise(factors, faded)).toBe(false);
    const x = solved(analyseAndFactorise(pattern, faded), Float64Array.of(1, 2));
    expect(normalisedResidual({ pattern, values: faded }, x, Float64Array.of(1, 2))).toBeLessThan(10);
  });

  test('refactorisation under changed values equals a fresh factorisation', () => {
    fc.assert(
      fc.property(dominantMatrix, fc.double({ min: 0.5, max: 2, noNaN: true }), ({ size, entries, right }, factor) => {
        const { pattern, values } = sparse(size, entries);
        const factors = analyseAndFactorise(pattern, values) as RealFactors;
        const changed = values.map((value, k) => value * (k % 3 === 0 ? 1 : factor));
        if (!factorise(factors, changed)) return;
        const x = right.slice();
        solveFactored(factors, x);
        const fresh = analyseAndFactorise(pattern, changed);
        if ('singular' in fresh) return;
        const y = right.slice();
        solveFactored(fresh, y);
        // pivots kept down to 1e-6 of their row may lose six digits; a fresh order loses none
        expect(normalisedResidual({ pattern, values: changed }, x, right)).toBeLessThan(1e7);
        expect(normalisedResidual({ pattern, values: changed }, y, right)).toBeLessThan(1e3);
      }),
      { numRuns: 200, seed: 2 },
    );
  });
});

describe('complex factorisation', () => {
  test('agrees with the dense real system [[A, -B], [B, A]]', () => {
    fc.assert(
      fc.property(dominantMatrix, dominantMatrix, ({ size, entries, right }, other) => {
        const { pattern, values } = sparse(size, entries);
        const order = findPivotOrder(pattern, values);
        if ('singular' in order) throw new Error('singular');
        const factors = allocateComplexFactors(planElimination(pattern, order));
        // an imaginary part smaller than the diagonal's excess leaves the matrix regular
        const imaginary = values.map((value, k) => value * 1e-4 * (other.right[k % other.size]! / 10));
        expect(factoriseComplex(factors, values, imaginary)).toBe(true);
        const real = right.slice();
        const imag = right.map((value, k) => value * ((k % 3) - 1));
        const [b, c] = [real.slice(), imag.slice()];
        solveComplex(factors, real, imag);
        for (let i = 0; i < size; i++) {
          let sumReal = -b[i]!;
          let sumImaginary = -c[i]!;
          let magnitude = Math.abs(b[i]!) + Math.abs(c[i]!);
          for (let s = pattern.rowStart[i]!; s < pattern.rowStart[i + 1]!; s++) {
            const j = pattern.column[s]!;
            sumReal += values[s]! * real[j]! - imaginary[s]! * imag[j]!;
            sumImaginary += values[s]! * imag[j]! + imaginary[s]! * real[j]!;
            magnitude += Math.abs(values[s]!) * (norm(real) + norm(imag));
          }
          expect(Math.hypot(sumReal, sumImaginary)).toBeLessThanOrEqual(400 * Number.EPSILON * magnitude + 1e-300);
        }
      }),
      { numRuns: 200, seed: 3 },
    );
  });

  test('a purely imaginary pivot, and a vanished one', () => {
    const pattern = buildPattern(1, [[0, 0]]);
    const order = findPivotOrder(pattern, Float64Array.of(1));
    if ('singular' in order) throw new Error('singular');
    const factors = allocateComplexFactors(planElimination(pattern, order));
    expect(factoriseComplex(factors, Float64Array.of(0), Float64Array.of(2))).toBe(true);
    const [real, imaginary] = [Float64Array.of(1), Float64Array.of(0)];
    solveComplex(factors, real, imaginary);
    expect([real[0], imaginary[0]]).toEqual([0, -0.5]);
    expect(factoriseComplex(factors, Float64Array.of(0), Float64Array.of(0))).toBe(false);
  });
});

describe('fill', () => {
  const laplacian = (edges: readonly (readonly [number, number])[], size: number): Entry[] => [
    ...edges.flatMap(([a, b]): Entry[] => [
      [a, a, 1],
      [b, b, 1],
      [a, b, -1],
      [b, a, -1],
    ]),
    ...Array.from({ length: size }, (_, i): Entry => [i, i, 1e-3]),
  ];
  const fill = (size: number, entries: readonly Entry[]): number => {
    const { pattern, values } = sparse(size, entries);
    const order = findPivotOrder(pattern, values);
    if ('singular' in order) throw new Error('singular');
    return (order.lowerColumn.length + order.upperColumn.length + size) / pattern.column.length;
  };

  test('a ladder has none', () => {
    for (const size of [10, 100, 1000]) {
      const edges = Array.from({ length: size - 1 }, (_, i) => [i, i + 1] as const);
      expect(fill(size, laplacian(edges, size))).toBe(1);
    }
  });

  test('a star with its centre first has none', () => {
    const edges = Array.from({ length: 199 }, (_, i) => [0, i + 1] as const);
    expect(fill(200, laplacian(edges, 200))).toBe(1);
  });

  test('a square grid grows like N log N, as the best orders do (A. George, 1973)', () => {
    const grid = (side: number): number => {
      const edges: [number, number][] = [];
      for (let i = 0; i < side; i++)
        for (let j = 0; j < side; j++) {
          if (j + 1 < side) edges.push([side * i + j, side * i + j + 1]);
          if (i + 1 < side) edges.push([side * i + j, side * i + j + side]);
        }
      return fill(side * side, laplacian(edges, side * side));
    };
    // (31/4) N log2 N entries of L and U over the 5 N of A, less a constant: about 1.55 log2 N at the most
    for (const side of [8, 16, 32]) expect(grid(side)).toBeLessThan(1.55 * Math.log2(side * side));
    // with natural order the factors of the 32 x 32 grid would have 2 · 32 · N entries, 13 times as many as the matrix
    expect(grid(32)).toBeLessThan(9);
  });
});

test('allocated factors are reused without growing', () => {
  const { pattern, values } = sparse(2, [
    [0, 0, 2],
    [1, 1, 3],
    [0, 1, 1],
  ]);
  const order = findPivotOrder(pattern, values);
  if ('singular' in order) throw new Error('singular');
  const factors = allocateFactors(planElimination(pattern, order));
  expect(factors.lower.length + factors.upper.length).toBe(1);
  expect(factorise(factors, values)).toBe(true);
});
