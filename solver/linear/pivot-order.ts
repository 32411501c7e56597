/**
 * Symbolic analysis: a pivot order that keeps the factors sparse and the elimination stable, and the pattern that the
 * factors then have. Markowitz's criterion with threshold pivoting (H. M. Markowitz, 1957; I. S. Duff, A. M. Erisman,
 * J. K. Reid, Direct Methods for Sparse Matrices, 1986, ch. 7), searching the shortest rows and columns first (Z. Zlatev, 1980).
 */
import type { Pattern } from './pattern.ts';

/** A pivot is at least this fraction of the largest entry left in its row. */
const PIVOT_THRESHOLD = 0.1;

/** Rows and columns looked at before the best pivot so far is taken. */
const SEARCH_LINES = 4;

export interface PivotOrder {
  readonly size: number;
  /** Original row eliminated at step k. */
  readonly rowOf: Int32Array;
  /** Original column eliminated at step k. */
  readonly columnOf: Int32Array;
  /** Row k of the strictly lower factor: columns (as steps, ascending) at [lowerStart[k], lowerStart[k + 1]). */
  readonly lowerStart: Int32Array;
  readonly lowerColumn: Int32Array;
  /** Row k of the strictly upper factor, likewise. */
  readonly upperStart: Int32Array;
  readonly upperColumn: Int32Array;
}

/** Where the elimination found no pivot: the rows and columns (original numbers) that are left linearly dependent. */
export interface Singular {
  readonly singular: true;
  readonly rows: readonly number[];
  readonly columns: readonly number[];
}

/** Finds the order for a matrix with these values; entries that are exactly zero keep their place in the pattern. */
export function findPivotOrder(pattern: Pattern, values: Float64Array): PivotOrder | Singular {
  const n = pattern.size;
  const rows: Map<number, number>[] = [];
  const columnRows: Set<number>[] = Array.from({ length: n }, () => new Set());
  let largest = 0;
  for (let i = 0; i < n; i++) {
    const row = new Map<number, number>();
    for (let s = pattern.rowStart[i]!; s < pattern.rowStart[i + 1]!; s++) {
      row.set(pattern.column[s]!, values[s]!);
      columnRows[pattern.column[s]!]!.add(i);
      largest = Math.max(largest, Math.abs(values[s]!));
    }
    rows.push(row);
  }
  const rowQueue = new CountQueue(n, (i) => rows[i]!.size);
  const columnQueue = new CountQueue(n, (j) => columnRows[j]!.size);
  const rowOf = new Int32Array(n);
  const columnOf = new Int32Array(n);
  const lowerRows: number[][] = Array.from({ length: n }, () => []);
  const upperRows: number[][] = [];
  for (let k = 0; k < n; k++) {
    const pivot = choosePivot(rows, columnRows, rowQueue, columnQueue);
    if (!pivot) return { singular: true, rows: rowQueue.remaining(), columns: columnQueue.remaining() };
    const { row, column } = pivot;
    rowOf[k] = row;
    columnOf[k] = column;
    rowQueue.remove(row);
    columnQueue.remove(column);
    const pivotRow = rows[row]!;
    const pivotValue = pivotRow.get(column)!;
    pivotRow.delete(column);
    for (const j of pivotRow.keys()) columnRows[j]!.delete(row);
    columnRows[column]!.delete(row);
    for (const i of columnRows[column]!) {
      const target = rows[i]!;
      const multiplier = target.get(column)! / pivotValue;
      target.delete(column);
      lowerRows[i]!.push(k);
      for (const [j, value] of pivotRow) {
        const before = target.get(j);
        if (before === undefined) columnRows[j]!.add(i);
        target.set(j, (before ?? 0) - multiplier * value);
      }
      rowQueue.update(i, target.size);
    }
    for (const j of pivotRow.keys()) columnQueue.update(j, columnRows[j]!.size);
    upperRows.push([...pivotRow.keys()]);
  }
  const stepOfColumn = new Int32Array(n);
  for (let k = 0; k < n; k++) stepOfColumn[columnOf[k]!] = k;
  const lower = compress(Array.from(rowOf, (row) => lowerRows[row]!));
  const upper = compress(upperRows.map((columns) => columns.map((j) => stepOfColumn[j]!)));
  return {
    size: n,
    rowOf,
    columnOf,
    lowerStart: lower.start,
    lowerColumn: lower.index,
    upperStart: upper.start,
    upperColumn: upper.index,
  };
}

function choosePivot(
  rows: readonly Map<number, number>[],
  columnRows: readonly Set<number>[],
  rowQueue: CountQueue,
  columnQueue: CountQueue,
): { row: number; column: number } | undefined {
  let best: { row: number; column: number } | undefined;
  let bestCost = Number.POSITIVE_INFINITY;
  let bestSize = 0;
  let looked = 0;
  const consider = (row: number, column: number): void => {
    const entries = rows[row]!;
    const size = Math.abs(entries.get(column)!);
    if (!(size > 0)) return;
    const cost = (entries.size - 1) * (columnRows[column]!.size - 1);
    if (cost > bestCost || (cost === bestCost && size <= bestSize)) return;
    let rowMaximum = 0;
    for (const value of entries.values()) rowMaximum = Math.max(rowMaximum, Math.abs(value));
    if (size < PIVOT_THRESHOLD * rowMaximum) return;
    best = { row, column };
    bestCost = cost;
    bestSize = size;
  };
  const largestCount = Math.max(rowQueue.largest(), columnQueue.largest());
  for (let count = 1; count <= largestCount; count++) {
    for (const column of columnQueue.withCount(count)) {
      for (const row of columnRows[column]!) consider(row, column);
      if (best && (bestCost <= (count - 1) ** 2 || ++looked >= SEARCH_LINES)) return best;
    }
    for (const row of rowQueue.withCount(count)) {
      for (const column of rows[row]!.keys()) consider(row, column);
      if (best && (bestCost <= count * (count - 1) || ++looked >= SEARCH_LINES)) return best;
    }
  }
  return best;
}

/** Lines (rows or columns) by their number of entries; taking one out or moving it is constant work. */
class CountQueue {
  readonly #count: Int32Array;
  readonly #buckets: Set<number>[];

  constructor(size: number, countOf: (line: number) => number) {
    this.#count = new Int32Array(size);
    this.#buckets = Array.from({ length: size + 2 }, () => new Set());
    for (let line = 0; line < size; line++) {
      this.#count[line] = countOf(line);
      this.#buckets[this.#count[line]!]!.add(line);
    }
  }

  update(line: number, count: number): void {
    this.#buckets[this.#count[line]!]!.delete(line);
    this.#count[line] = count;
    this.#buckets[count]!.add(line);
  }

  remove(line: number): void {
    this.#buckets[this.#count[line]!]!.delete(line);
  }

  withCount(count: number): Iterable<number> {
    return this.#buckets[count] ?? [];
  }

  largest(): number {
    let count = this.#buckets.length - 1;
    while (count > 0 && this.#buckets[count]!.size === 0) count--;
    return count;
  }

  remaining(): number[] {
    return this.#buckets.flatMap((bucket) => [...bucket]).sort((a, b) => a - b);
  }
}

function compress(lists: readonly number[][]): { start: Int32Array; index: Int32Array } {
  const start = new Int32Array(lists.length + 1);
  for (let i = 0; i < lists.length; i++) start[i + 1] = start[i]! + lists[i]!.length;
  const index = new Int32Array(start[lists.length]!);
  for (let i = 0; i < lists.length; i++)
    index.set(
      lists[i]!.slice().sort((a, b) => a - b),
      start[i]!,
    );
  return { start, index };
}
