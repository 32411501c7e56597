/** Waveforms on other grids: finer, common, shorter. A cubic on part of its step is the same cubic, so nothing is lost. */
import { cubicOf, evaluateCubic } from './cubic.ts';
import { findStep } from './value-at.ts';
import { COLLOCATION_NODES, type Waveform } from './waveform.ts';

/** Grid points nearer than this fraction of the axis are one point, moved by rounding. */
const SAME_POINT = 1e-14;

/** The waveform on a grid that lies within its own; exact where every point of the old grid within is one of the new. */
export function resample(waveform: Waveform, grid: Float64Array): Waveform {
  if (waveform.grid === grid) return waveform;
  const values = new Float64Array(4 * (grid.length - 1));
  const cubic = new Float64Array(4);
  const from = waveform.grid;
  let step = grid.length > 1 ? findStep(from, (grid[0]! + grid[1]!) / 2) : 0;
  for (let k = 0; k + 1 < grid.length; k++) {
    const begin = grid[k]!;
    const end = grid[k + 1]!;
    const middle = (begin + end) / 2;
    while (step + 2 < from.length && from[step + 1]! < middle) step++;
    const oldBegin = from[step]!;
    const oldEnd = from[step + 1]!;
    if (oldBegin === begin && oldEnd === end) {
      for (let s = 0; s < 4; s++) values[4 * k + s] = waveform.values[4 * step + s]!;
      continue;
    }
    const width = oldEnd - oldBegin;
    cubicOf(waveform.values, 4 * step, cubic);
    for (let s = 0; s < 4; s++) {
      const x = begin + COLLOCATION_NODES[s]! * (end - begin);
      values[4 * k + s] = width === 0 ? waveform.values[4 * step + 3]! : evaluateCubic(cubic, (x - oldBegin) / width);
    }
    // The ends are taken over as they are, so that a value of exactly zero stays so.
    if (oldBegin === begin) values[4 * k] = waveform.values[4 * step]!;
    if (oldEnd === end) values[4 * k + 3] = waveform.values[4 * step + 3]!;
  }
  return { grid, values };
}

/** Points of both grids where both are defined; nothing where they do not overlap. */
export function unionGrid(left: Float64Array, right: Float64Array): Float64Array | undefined {
  if (left === right) return left;
  const from = Math.max(left[0]!, right[0]!);
  const to = Math.min(left.at(-1)!, right.at(-1)!);
  if (!(from < to)) return from === to && left.length === 2 && right.length === 2 ? left : undefined;
  const apart = SAME_POINT * Math.max(Math.abs(from), Math.abs(to));
  const points = new Float64Array(left.length + right.length);
  points[0] = from;
  let count = 1;
  let i = 0;
  let j = 0;
  while (i < left.length || j < right.length) {
    const next = j >= right.length || (i < left.length && left[i]! <= right[j]!) ? left[i++]! : right[j++]!;
    if (next - points[count - 1]! > apart && to - next > apart) points[count++] = next;
  }
  points[count++] = to;
  const grid = points.slice(0, count);
  return sameGrid(grid, left) ? left : sameGrid(grid, right) ? right : grid;
}

/** The grid with further points, which must be ascending and within it. */
export function refineGrid(grid: Float64Array, points: readonly number[]): Float64Array {
  if (points.length === 0) return grid;
  const result = new Float64Array(grid.length + points.length);
  let count = 0;
  let next = 0;
  for (const point of grid) {
    while (next < points.length && points[next]! <= point) {
      const added = points[next++]!;
      if (added < point && (count === 0 || added > result[count - 1]!)) result[count++] = added;
    }
    result[count++] = point;
  }
  return result.slice(0, count);
}

/** The part between two places of the axis; nothing where they hold no part of it. */
export function restrict(waveform: Waveform, from: number, to: number): Waveform | undefined {
  const { grid } = waveform;
  const begin = Math.max(from, grid[0]!);
  const end = Math.min(to, grid.at(-1)!);
  if (!(begin < end)) return undefined;
  if (begin === grid[0] && end === grid.at(-1)) return waveform;
  const inner = grid.filter((point) => point > begin && point < end);
  const cut = new Float64Array(inner.length + 2);
  cut[0] = begin;
  cut.set(inner, 1);
  cut[cut.length - 1] = end;
  return resample(waveform, cut);
}

/** Both on one grid; nothing where their axes do not overlap. */
export function onCommonGrid(left: Waveform, right: Waveform): [Waveform, Waveform] | undefined {
  const grid = unionGrid(left.grid, right.grid);
  return grid && [resample(left, grid), resample(right, grid)];
}

function sameGrid(one: Float64Array, other: Float64Array): boolean {
  return one.length === other.length && one.every((point, k) => point === other[k]);
}
