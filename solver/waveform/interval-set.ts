/** Stretches of an axis on which a condition holds, and what can be asked of them. */
import type { Outcome } from './waveform.ts';

/**
 * A stretch is taken without its ends (their measure is zero, and so neighbouring conditions do not overlap); where the
 * two ends are equal it is a single instant, such as that at which two curves are equal.
 */
export interface IntervalSet {
  /** Ends of the stretches, ascending and apart: starts[k] <= ends[k] < starts[k + 1]. */
  readonly starts: Float64Array;
  readonly ends: Float64Array;
  /** The axis over which the condition was asked. */
  readonly from: number;
  readonly to: number;
}

/** Total length. */
export function when({ starts, ends }: IntervalSet): number {
  let sum = 0;
  for (let k = 0; k < starts.length; k++) sum += ends[k]! - starts[k]!;
  return sum;
}

/** Total length as a fraction of the axis. */
export function share(set: IntervalSet): number {
  return when(set) / (set.to - set.from);
}

/** The first place at which the condition holds. */
export function first({ starts }: IntervalSet): Outcome {
  return starts[0] ?? { none: 'the condition never holds' };
}

/** The last place at which the condition holds. */
export function last({ ends }: IntervalSet): Outcome {
  return ends.at(-1) ?? { none: 'the condition never holds' };
}

/** The stretches one by one. */
export function intervals({ starts, ends }: IntervalSet): { readonly from: number; readonly to: number }[] {
  return Array.from(starts, (from, k) => ({ from, to: ends[k]! }));
}

/** Everywhere on the axis, or nowhere. */
export function constantSet(holds: boolean, from: number, to: number): IntervalSet {
  const ends = holds ? [[from], [to]] : [[], []];
  return { starts: Float64Array.from(ends[0]!), ends: Float64Array.from(ends[1]!), from, to };
}

/** A set from stretches in ascending order; those that meet are joined. */
export function joinIntervals(
  starts: readonly number[],
  ends: readonly number[],
  from: number,
  to: number,
): IntervalSet {
  const joinedStarts: number[] = [];
  const joinedEnds: number[] = [];
  for (let k = 0; k < starts.length; k++) {
    const start = starts[k]!;
    const end = ends[k]!;
    const previous = joinedEnds.length - 1;
    if (previous >= 0 && start <= joinedEnds[previous]!) joinedEnds[previous] = Math.max(joinedEnds[previous]!, end);
    else {
      joinedStarts.push(start);
      joinedEnds.push(end);
    }
  }
  return { starts: Float64Array.from(joinedStarts), ends: Float64Array.from(joinedEnds), from, to };
}

/** Where the condition does not hold. */
export function complement({ starts, ends, from, to }: IntervalSet): IntervalSet {
  const outsideStarts: number[] = [];
  const outsideEnds: number[] = [];
  let at = from;
  for (let k = 0; k < starts.length; k++) {
    if (starts[k] === ends[k]) continue;
    if (starts[k]! > at) {
      outsideStarts.push(at);
      outsideEnds.push(starts[k]!);
    }
    at = ends[k]!;
  }
  if (at < to) {
    outsideStarts.push(at);
    outsideEnds.push(to);
  }
  return joinIntervals(outsideStarts, outsideEnds, from, to);
}

/** Where both hold, on the part of the axis that both were asked over. */
export function intersection(one: IntervalSet, other: IntervalSet): IntervalSet {
  const from = Math.max(one.from, other.from);
  const to = Math.min(one.to, other.to);
  const starts: number[] = [];
  const ends: number[] = [];
  let i = 0;
  let j = 0;
  while (i < one.starts.length && j < other.starts.length) {
    const oneStart = one.starts[i]!;
    const oneEnd = one.ends[i]!;
    const otherStart = other.starts[j]!;
    const otherEnd = other.ends[j]!;
    const start = Math.max(oneStart, otherStart);
    const end = Math.min(oneEnd, otherEnd);
    const instant =
      (oneStart === oneEnd && within(oneStart, otherStart, otherEnd)) ||
      (otherStart === otherEnd && within(otherStart, oneStart, oneEnd));
    if (start < end || (start === end && instant)) {
      starts.push(start);
      ends.push(end);
    }
    if (oneEnd < otherEnd) i++;
    else j++;
  }
  return joinIntervals(starts, ends, from, to);
}

/** Where either holds, on the part of the axis that both were asked over. */
export function union(one: IntervalSet, other: IntervalSet): IntervalSet {
  const from = Math.max(one.from, other.from);
  const to = Math.min(one.to, other.to);
  const all = [...intervals(one), ...intervals(other)]
    .filter((stretch) => stretch.to >= from && stretch.from <= to)
    .sort((a, b) => a.from - b.from || a.to - b.to);
  const starts = all.map((stretch) => Math.max(from, stretch.from));
  const ends = all.map((stretch) => Math.min(to, stretch.to));
  return joinIntervals(starts, ends, from, to);
}

/** An instant lies within a stretch, or is the same instant. */
function within(instant: number, start: number, end: number): boolean {
  return (start < instant && instant < end) || (start === instant && end === instant);
}
