/** Points of a waveform for drawing: few, with extremes, corners and jumps kept. */
import { cubicOf, cubicTurns, evaluateCubic } from './cubic.ts';
import type { Waveform } from './waveform.ts';

export interface Point {
  readonly x: number;
  /** NaN: the curve is interrupted here. */
  readonly y: number;
}

/** Straight pieces that a step is drawn in before thinning: as many as its curvature asks for, within these bounds. */
const FEWEST_PIECES = 4;
const MOST_PIECES = 64;
/** Where straight pieces may pass a curve by, as a fraction of the range. */
const CHORD_ERROR = 2e-4;
/** What lies below this fraction of the range is not seen: a jump, a distance from a straight line. */
const UNSEEN = 1e-4;

/**
 * About `count` points in ascending order of x. The axis is cut into buckets, and of each the first, the least, the
 * greatest and the last point are kept; both sides of every visible jump are kept on top. Where the waveform has fewer
 * points than that, all are kept that a straight line between their neighbours would miss.
 */
export function thin(waveform: Waveform, count: number): Point[] {
  const { points, jumps } = candidates(waveform);
  const straight = dropStraight(points, jumps);
  if (straight.length <= count) return straight.map((k) => points[k]!);
  const buckets = Math.max(1, Math.floor(count / 4));
  const from = points[0]!.x;
  const width = (points.at(-1)!.x - from) / buckets;
  const kept: Point[] = [];
  let at = 0;
  for (let bucket = 0; bucket < buckets && at < straight.length; bucket++) {
    const begin = at;
    const end = bucket === buckets - 1 ? Number.POSITIVE_INFINITY : from + (bucket + 1) * width;
    while (at < straight.length && points[straight[at]!]!.x < end) at++;
    if (at > begin) keepOfBucket(points, jumps, straight, begin, at, kept);
  }
  return kept;
}

function keepOfBucket(
  points: readonly Point[],
  jumps: ReadonlySet<number>,
  order: readonly number[],
  begin: number,
  end: number,
  kept: Point[],
): void {
  let low = begin;
  let high = begin;
  for (let k = begin; k < end; k++) {
    const y = points[order[k]!]!.y;
    if (y < points[order[low]!]!.y || Number.isNaN(points[order[low]!]!.y)) low = k;
    if (y > points[order[high]!]!.y || Number.isNaN(points[order[high]!]!.y)) high = k;
  }
  for (let k = begin; k < end; k++) {
    const point = points[order[k]!]!;
    const gap = Number.isNaN(point.y);
    if (k === begin || k === end - 1 || k === low || k === high || gap || jumps.has(order[k]!)) kept.push(point);
  }
}

/** The ends, turns and some inner points of every step. `jumps` holds the indices of both sides of every jump. */
function candidates({ grid, values }: Waveform): { points: Point[]; jumps: Set<number> } {
  const points: Point[] = [];
  const jumps = new Set<number>();
  const cubic = new Float64Array(4);
  const turns = new Float64Array(2);
  const range = rangeOf(values);
  const unseen = UNSEEN * range;
  const chordError = CHORD_ERROR * range;
  let interrupted = false;
  for (let k = 0; k + 1 < grid.length; k++) {
    const begin = grid[k]!;
    const width = grid[k + 1]! - begin;
    cubicOf(values, 4 * k, cubic);
    if (cubic.some((coefficient) => !Number.isFinite(coefficient))) {
      if (!interrupted) points.push({ x: begin, y: Number.NaN });
      interrupted = true;
      continue;
    }
    const startValue = values[4 * k]!;
    const previous = points.at(-1);
    const jump = previous !== undefined && !interrupted && Math.abs(startValue - previous.y) > unseen;
    if (jump) jumps.add(points.length - 1).add(points.length);
    if (previous === undefined || interrupted || jump) points.push({ x: begin, y: startValue });
    interrupted = false;
    const turnCount = cubicTurns(cubic, turns);
    const pieces = piecesFor(cubic, chordError);
    const places: number[] = Array.from(turns.subarray(0, turnCount));
    for (let piece = 1; piece < pieces; piece++) places.push(piece / pieces);
    places.sort((a, b) => a - b);
    for (const s of places) points.push({ x: begin + s * width, y: evaluateCubic(cubic, s) });
    points.push({ x: grid[k + 1]!, y: values[4 * k + 3]! });
  }
  return { points, jumps };
}

/** A chord over 1/n of a step misses a curve by at most max|f''| / (8 n²), the interpolation error of a straight line. */
function piecesFor(cubic: Float64Array, chordError: number): number {
  const [, , square = 0, cube = 0] = cubic;
  const bend = Math.max(Math.abs(2 * square), Math.abs(2 * square + 6 * cube));
  if (!(chordError > 0)) return FEWEST_PIECES;
  return Math.max(FEWEST_PIECES, Math.min(MOST_PIECES, Math.ceil(Math.sqrt(bend / (8 * chordError)))));
}

/**
 * Indices of the points without those that a straight line between their kept neighbours passes unseen. Ends, gaps, both
 * sides of jumps, and the greatest and the least point are kept.
 */
function dropStraight(points: readonly Point[], jumps: ReadonlySet<number>): number[] {
  const unseen = UNSEEN * rangeOf(points.map(({ y }) => y));
  const fixed = new Set(jumps);
  let low = 0;
  let high = 0;
  for (const [k, { y }] of points.entries()) {
    if (Number.isNaN(y)) fixed.add(k).add(k + 1);
    if (y < points[low]!.y || Number.isNaN(points[low]!.y)) low = k;
    if (y > points[high]!.y || Number.isNaN(points[high]!.y)) high = k;
  }
  fixed.add(low).add(high);
  fixed.add(points.length - 1);
  const kept = [0];
  // Slopes of the lines from the kept point that pass every point since unseen.
  let least = Number.NEGATIVE_INFINITY;
  let most = Number.POSITIVE_INFINITY;
  const keep = (k: number): void => {
    if (kept.at(-1)! < k) kept.push(k);
    least = Number.NEGATIVE_INFINITY;
    most = Number.POSITIVE_INFINITY;
  };
  for (let k = 1; k < points.length; k++) {
    const { x, y } = points[k]!;
    let from = points[kept.at(-1)!]!;
    const rate = (y - from.y) / (x - from.x);
    if (!(rate >= least && rate <= most)) {
      keep(k - 1);
      from = points[k - 1]!;
    }
    if (fixed.has(k)) keep(k);
    else {
      least = Math.max(least, (y - from.y - unseen) / (x - from.x));
      most = Math.min(most, (y - from.y + unseen) / (x - from.x));
    }
  }
  return kept;
}

function rangeOf(values: Iterable<number>): number {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  return high > low ? high - low : 0;
}
