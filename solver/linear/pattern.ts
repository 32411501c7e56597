/** Compressed sparse rows: the entries of row i are at [rowStart[i], rowStart[i + 1]), their columns ascending. */
export interface Pattern {
  readonly size: number;
  readonly rowStart: Int32Array;
  readonly column: Int32Array;
}

/** The pattern that holds every position that was asked for. */
export function buildPattern(size: number, positions: Iterable<readonly [row: number, column: number]>): Pattern {
  const rows = Array.from({ length: size }, () => new Set<number>());
  for (const [row, column] of positions) rows[row]!.add(column);
  const rowStart = new Int32Array(size + 1);
  for (let i = 0; i < size; i++) rowStart[i + 1] = rowStart[i]! + rows[i]!.size;
  const column = new Int32Array(rowStart[size]!);
  for (let i = 0; i < size; i++)
    column.set(
      [...rows[i]!].sort((a, b) => a - b),
      rowStart[i]!,
    );
  return { size, rowStart, column };
}

/** Where the entry (row, column) stands in the array of values; throws where the pattern has no such entry. */
export function slotOf(pattern: Pattern, row: number, column: number): number {
  let low = pattern.rowStart[row]!;
  let high = pattern.rowStart[row + 1]! - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const found = pattern.column[middle]!;
    if (found === column) return middle;
    if (found < column) low = middle + 1;
    else high = middle - 1;
  }
  throw new Error(`Internal error: the sparsity pattern has no entry (${row}, ${column})`);
}

/** result += matrix · x, with the matrix given by its values on the pattern. */
export function multiplyAdd(pattern: Pattern, values: Float64Array, x: Float64Array, result: Float64Array): void {
  const { size, rowStart, column } = pattern;
  let slot = 0;
  for (let i = 0; i < size; i++) {
    const end = rowStart[i + 1]!;
    let sum = 0;
    for (; slot < end; slot++) sum += values[slot]! * x[column[slot]!]!;
    result[i]! += sum;
  }
}
