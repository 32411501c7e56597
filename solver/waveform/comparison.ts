/** Where one quantity is above, below or equal to another: exact on the cubics, by their roots. */
import { subtract } from './arithmetic.ts';
import { cubicOf, cubicRoots, evaluateCubic } from './cubic.ts';
import { constantSet, type IntervalSet, joinIntervals } from './interval-set.ts';
import type { NoValue, Waveform } from './waveform.ts';

export type Comparison = '<' | '<=' | '>' | '>=' | '==' | '!=';

/** Differences below this fraction of the largest magnitude compared are rounding errors, and count as equality. */
const ROUNDING = 1e-13;

/** The stretches on which the comparison holds. Where the waveform is undefined, it does not. */
export function compare(
  left: Waveform | number,
  comparison: Comparison,
  right: Waveform | number,
): IntervalSet | NoValue {
  const difference = subtract(left, right);
  if ('none' in difference) return difference;
  const tolerance = ROUNDING * Math.max(magnitude(left), magnitude(right));
  const { grid, values } = difference;
  const from = grid[0]!;
  const to = grid.at(-1)!;
  if (from === to) return constantSet(holds(Math.sign(values[3]!), comparison), from, to);
  const touches = comparison === '==' || comparison === '<=' || comparison === '>=';
  const cubic = new Float64Array(4);
  const roots = new Float64Array(4);
  const starts: number[] = [];
  const ends: number[] = [];
  const keep = (start: number, end: number): void => {
    starts.push(start);
    ends.push(end);
  };
  for (let k = 0; k + 1 < grid.length; k++) {
    const begin = grid[k]!;
    const end = grid[k + 1]!;
    cubicOf(values, 4 * k, cubic);
    if (cubic.some(Number.isNaN)) continue;
    const count = cubicRoots(cubic, tolerance, roots);
    const place = (s: number): number => (s === 0 ? begin : s === 1 ? end : begin + s * (end - begin));
    let s = 0;
    for (let r = 0; r <= count; r++) {
      const next = r < count ? roots[r]! : 1;
      if (next > s) {
        const middle = evaluateCubic(cubic, (s + next) / 2);
        if (holds(Math.abs(middle) <= tolerance ? 0 : Math.sign(middle), comparison)) keep(place(s), place(next));
      }
      if (r < count && touches) keep(place(next), place(next));
      s = next;
    }
  }
  if (touches) addCrossedJumps(difference, keep, starts, ends);
  return joinIntervals(starts, ends, from, to);
}

/** Stretches between sign changes: the points within steps at which the waveform changes sign, ascending. */
export function signChanges(waveform: Waveform): number[] {
  const { grid, values } = waveform;
  const tolerance = ROUNDING * magnitude(waveform);
  const cubic = new Float64Array(4);
  const roots = new Float64Array(4);
  const points: number[] = [];
  for (let k = 0; k + 1 < grid.length; k++) {
    const begin = grid[k]!;
    const width = grid[k + 1]! - begin;
    const count = cubicRoots(cubicOf(values, 4 * k, cubic), tolerance, roots);
    for (let r = 0; r < count; r++) {
      const at = begin + roots[r]! * width;
      if (at > begin && at < grid[k + 1]! && at !== points.at(-1)) points.push(at);
    }
  }
  return points;
}

function holds(sign: number, comparison: Comparison): boolean {
  switch (comparison) {
    case '<':
      return sign < 0;
    case '<=':
      return sign <= 0;
    case '>':
      return sign > 0;
    case '>=':
      return sign >= 0;
    case '==':
      return sign === 0;
    case '!=':
      return sign === -1 || sign === 1;
  }
}

/** A jump through equality passes it at that instant. */
function addCrossedJumps(
  { grid, values }: Waveform,
  keep: (start: number, end: number) => void,
  starts: number[],
  ends: number[],
): void {
  let added = false;
  for (let k = 1; k + 1 < grid.length; k++) {
    if (values[4 * k - 1]! * values[4 * k]! >= 0) continue;
    keep(grid[k]!, grid[k]!);
    added = true;
  }
  if (!added) return;
  const order = starts.map((_, k) => k).sort((a, b) => starts[a]! - starts[b]! || ends[a]! - ends[b]!);
  const sorted = order.map((k) => [starts[k]!, ends[k]!] as const);
  for (const [k, [start, end]] of sorted.entries()) {
    starts[k] = start;
    ends[k] = end;
  }
}

function magnitude(operand: Waveform | number): number {
  if (typeof operand === 'number') return Math.abs(operand);
  let largest = 0;
  for (const value of operand.values) if (Math.abs(value) > largest) largest = Math.abs(value);
  return Number.isFinite(largest) ? largest : 0;
}
