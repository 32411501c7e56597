/** The value of a waveform at one place of its axis. */
import { cubicOf, evaluateCubic } from './cubic.ts';
import type { Waveform } from './waveform.ts';

/** At a jump: the value before it, or after it. */
export type Side = 'left' | 'right';

const cubic = new Float64Array(4);

/** Value at x; at a jump that of the side asked for. NaN outside the grid. */
export function valueAt(waveform: Waveform, x: number, side: Side = 'right'): number {
  const { grid, values } = waveform;
  const last = grid.length - 2;
  if (!(x >= grid[0]! && x <= grid[last + 1]!)) return Number.NaN;
  const step = findStep(grid, x, side);
  const width = grid[step + 1]! - grid[step]!;
  if (width === 0) return values[4 * step + 3]!;
  if (x === grid[step]) return values[4 * step]!;
  if (x === grid[step + 1]) return values[4 * step + 3]!;
  return evaluateCubic(cubicOf(values, 4 * step, cubic), (x - grid[step]!) / width);
}

/** Index of the step that holds x; of the two that meet at a grid point, the one on the side asked for. */
export function findStep(grid: Float64Array, x: number, side: Side = 'right'): number {
  let low = 0;
  let high = grid.length - 1;
  // grid[low] <= x < grid[high] for the right side, grid[low] < x <= grid[high] for the left.
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (side === 'right' ? grid[middle]! <= x : grid[middle]! < x) low = middle;
    else high = middle;
  }
  return low;
}
