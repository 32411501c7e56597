/**
 * How a response gets from its first value to its last. The step is the last value less the first, both as they stand
 * at the ends of the axis; the definitions are those of a transition between two states (IEC 60469).
 */
import { compare } from './comparison.ts';
import { greatest, least } from './extremes.ts';
import { first } from './interval-set.ts';
import type { NoValue, Outcome, Waveform } from './waveform.ts';

/** A step below this fraction of the largest value is rounding. */
const NO_STEP = 1e-9;

/** Time from the first instant at 10 % of the step to the first at 90 %. */
export function riseTime(waveform: Waveform): Outcome {
  const step = stepOf(waveform);
  if ('none' in step) return step;
  const reached = (fraction: number): Outcome => {
    const level = step.from + fraction * (step.to - step.from);
    const beyond = compare(waveform, step.to > step.from ? '>=' : '<=', level);
    return 'none' in beyond ? beyond : first(beyond);
  };
  const low = reached(0.1);
  const high = reached(0.9);
  if (typeof low !== 'number') return low;
  if (typeof high !== 'number') return high;
  return high - low;
}

/**
 * Time from the start of the axis after which the value stays within a band about the last value. The half-width of the
 * band is a fraction of the step, so it is defined for a decay to zero too.
 */
export function settlingTime(waveform: Waveform, band = 0.02): Outcome {
  if (!(band > 0)) return { none: 'the band is not above zero' };
  const step = stepOf(waveform);
  if ('none' in step) return step;
  const width = band * Math.abs(step.to - step.from);
  const above = compare(waveform, '>', step.to + width);
  const below = compare(waveform, '<', step.to - width);
  if ('none' in above) return above;
  if ('none' in below) return below;
  const start = waveform.grid[0]!;
  return Math.max(above.ends.at(-1) ?? start, below.ends.at(-1) ?? start) - start;
}

/** How far the value goes beyond the last one, relative to the step: 0 where it does not. */
export function overshoot(waveform: Waveform): Outcome {
  const step = stepOf(waveform);
  if ('none' in step) return step;
  const extreme = step.to > step.from ? greatest(waveform) : least(waveform);
  return (extreme - step.to) / (step.to - step.from);
}

function stepOf(waveform: Waveform): { readonly from: number; readonly to: number } | NoValue {
  const { values } = waveform;
  const from = values[0]!;
  const to = values.at(-1)!;
  const scale = Math.max(Math.abs(greatest(waveform)), Math.abs(least(waveform)));
  if (!Number.isFinite(scale)) return { none: 'the quantity is undefined somewhere on the axis' };
  if (!(Math.abs(to - from) > NO_STEP * scale)) return { none: 'the first and the last value are the same' };
  return { from, to };
}
