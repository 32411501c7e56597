/**
 * Evaluating waves. Between two neighbouring corners a wave is smooth, so the solver takes it there as the sum of a
 * straight line and sines (`WaveSegment`); a jump then never needs a decision about which side of it to take.
 */
import type { Wave } from './waves.ts';

/** offset + slope (t - origin) + Σ peak sin(angularFrequency t + phase) */
export interface WaveSegment {
  readonly origin: number;
  readonly offset: number;
  readonly slope: number;
  readonly sines: readonly { readonly peak: number; readonly angularFrequency: number; readonly phase: number }[];
}

export function evaluateSegment(segment: WaveSegment, t: number): number {
  let value = segment.offset + segment.slope * (t - segment.origin);
  for (const sine of segment.sines) value += sine.peak * Math.sin(sine.angularFrequency * t + sine.phase);
  return value;
}

/** The smooth piece of the wave that holds between the corners around `inside`, a time that is not itself a corner. */
export function segmentAt(wave: Wave, inside: number): WaveSegment {
  switch (wave.shape) {
    case 'constant':
      return { origin: 0, offset: wave.value, slope: 0, sines: [] };
    case 'sine': {
      if (inside < wave.delay)
        return { origin: 0, offset: wave.offset + wave.peak * Math.sin(wave.phase), slope: 0, sines: [] };
      const angularFrequency = 2 * Math.PI * wave.frequency;
      const phase = wave.phase - angularFrequency * wave.delay;
      return { origin: 0, offset: wave.offset, slope: 0, sines: [{ peak: wave.peak, angularFrequency, phase }] };
    }
    case 'sum': {
      let offset = 0;
      let slope = 0;
      const sines: { peak: number; angularFrequency: number; phase: number }[] = [];
      for (const part of wave.waves) {
        const segment = segmentAt(part, inside);
        // the sum is taken at the asked time, so that no part's origin is carried far
        offset += segment.offset + segment.slope * (inside - segment.origin);
        slope += segment.slope;
        sines.push(...segment.sines);
      }
      return { origin: inside, offset, slope, sines };
    }
    default:
      return straightSegment(breakpoints(wave), inside);
  }
}

/** Value of the wave at `t`; at a jump, the value just after it. */
export function waveValue(wave: Wave, t: number): number {
  const corners = waveCorners(wave, t, Number.POSITIVE_INFINITY, 1);
  const next = corners[0] ?? Number.POSITIVE_INFINITY;
  return evaluateSegment(
    segmentAt(wave, Number.isFinite(next) ? t + (next - t) / 2 : t + (Math.abs(t) || 1) * 1e-3),
    t,
  );
}

/** Times in (from, until) at which the wave or its slope jumps, ascending, at most `limit` of them. */
export function waveCorners(wave: Wave, from: number, until: number, limit = Number.POSITIVE_INFINITY): number[] {
  switch (wave.shape) {
    case 'constant':
      return [];
    case 'sine':
      return wave.delay > from && wave.delay < until ? [wave.delay] : [];
    case 'sum': {
      const all = wave.waves.flatMap((part) => waveCorners(part, from, until, limit));
      return [...new Set(all)].sort((a, b) => a - b).slice(0, limit);
    }
    default: {
      const { times, start, period } = breakpoints(wave);
      const corners: number[] = [];
      if (period === 0) {
        for (const time of times) if (start + time > from && start + time < until) corners.push(start + time);
      } else {
        let cycle = Math.max(0, Math.floor((from - start) / period) - 1);
        while (start + cycle * period < until && corners.length < limit) {
          for (const time of times) {
            // a cycle's end is the next one's beginning: computed in one way, so that both are the same number
            const corner = time === period ? start + (cycle + 1) * period : start + cycle * period + time;
            if (corner > from && corner < until && corner !== corners.at(-1)) corners.push(corner);
          }
          cycle++;
        }
      }
      return [...new Set(corners)].slice(0, limit);
    }
  }
}

/** Period of the wave in seconds; 0 for a constant; undefined for one that does not repeat. */
export function wavePeriod(wave: Wave): number | undefined {
  switch (wave.shape) {
    case 'constant':
      return 0;
    case 'sum':
      return undefined;
    case 'points':
      return wave.repeat ? (wave.times.at(-1) ?? 0) - (wave.times[0] ?? 0) : undefined;
    default:
      return wave.frequency > 0 ? 1 / wave.frequency : undefined;
  }
}

/** Highest angular frequency (rad/s) of the sines in a segment; 0 where it is a straight line. */
export function highestAngularFrequency(segment: WaveSegment): number {
  return segment.sines.reduce((highest, sine) => Math.max(highest, Math.abs(sine.angularFrequency)), 0);
}

/** A wave of straight lines: times within the cycle that begins at `start`, ascending, two alike being a jump. */
interface Breakpoints {
  readonly start: number;
  /** 0: the wave is held beyond its ends. */
  readonly period: number;
  readonly times: readonly number[];
  readonly values: readonly number[];
}

const compiled = new WeakMap<Wave, Breakpoints>();

function breakpoints(wave: Exclude<Wave, { shape: 'constant' | 'sine' | 'sum' }>): Breakpoints {
  let result = compiled.get(wave);
  if (!result) {
    result = layOut(wave);
    compiled.set(wave, result);
  }
  return result;
}

function layOut(wave: Exclude<Wave, { shape: 'constant' | 'sine' | 'sum' }>): Breakpoints {
  switch (wave.shape) {
    case 'triangle': {
      const period = 1 / wave.frequency;
      const middle = (wave.low + wave.high) / 2;
      const times = [0, period / 4, (3 * period) / 4, period];
      return { start: wave.delay, period, times, values: [middle, wave.high, wave.low, middle] };
    }
    case 'ramp': {
      const period = 1 / wave.frequency;
      const crest = (1 - wave.fall) * period;
      return { start: wave.delay, period, times: [0, crest, period], values: [wave.low, wave.high, wave.low] };
    }
    case 'pulse': {
      const period = wave.frequency > 0 ? 1 / wave.frequency : 0;
      const top = wave.rise + wave.width;
      const times = [0, wave.rise, top, top + wave.fall];
      const values = [wave.low, wave.high, wave.high, wave.low];
      if (period > 0 && top + wave.fall < period) {
        times.push(period);
        values.push(wave.low);
      }
      return { start: wave.delay, period, times, values };
    }
    case 'points': {
      const first = wave.times[0] ?? 0;
      const period = wave.repeat ? (wave.times.at(-1) ?? first) - first : 0;
      return { start: first, period, times: wave.times.map((time) => time - first), values: wave.values };
    }
  }
}

function straightSegment(line: Breakpoints, inside: number): WaveSegment {
  const { start, period, times, values } = line;
  let origin = start;
  if (inside < start) return { origin, offset: values[0] ?? 0, slope: 0, sines: [] };
  if (period > 0) origin = start + Math.floor((inside - start) / period) * period;
  const local = inside - origin;
  let k = 0;
  while (k + 1 < times.length && times[k + 1]! <= local) k++;
  if (k + 1 >= times.length) return { origin, offset: values.at(-1) ?? 0, slope: 0, sines: [] };
  const slope = (values[k + 1]! - values[k]!) / (times[k + 1]! - times[k]!);
  return { origin: origin + times[k]!, offset: values[k]!, slope, sines: [] };
}
