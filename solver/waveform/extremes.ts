/** Greatest and least values: of the cubics themselves, between their nodes too, and on both sides of every jump. */
import { cubicOf, cubicTurns, evaluateCubic } from './cubic.ts';
import type { Waveform } from './waveform.ts';

export function greatest(waveform: Waveform): number {
  return extremes(waveform)[1];
}

export function least(waveform: Waveform): number {
  return extremes(waveform)[0];
}

/** Greatest magnitude. */
export function peak(waveform: Waveform): number {
  const [low, high] = extremes(waveform);
  return Math.max(Math.abs(low), Math.abs(high));
}

/** Greatest less least value. */
export function span(waveform: Waveform): number {
  const [low, high] = extremes(waveform);
  return high - low;
}

/** Least and greatest value; NaN where the waveform is undefined anywhere. */
export function extremes(waveform: Waveform): [least: number, greatest: number] {
  const { grid, values } = waveform;
  const cubic = new Float64Array(4);
  const turns = new Float64Array(2);
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let k = 0; k + 1 < grid.length; k++) {
    const at = 4 * k;
    for (let s = 0; s < 4; s++) {
      const value = values[at + s]!;
      if (Number.isNaN(value)) return [Number.NaN, Number.NaN];
      if (value < low) low = value;
      if (value > high) high = value;
    }
    cubicOf(values, at, cubic);
    const count = cubicTurns(cubic, turns);
    for (let t = 0; t < count; t++) {
      const value = evaluateCubic(cubic, turns[t]!);
      if (value < low) low = value;
      if (value > high) high = value;
    }
  }
  return [low, high];
}
