/**
 * Fourier components. Each step's cubic times the sine and cosine is integrated by Gauss and Legendre's rule with ten
 * points on pieces so short that the error is below rounding (degree of exactness 19; the piece's phase below 1.5 rad).
 */
import { cubicOf, evaluateCubic } from './cubic.ts';
import { restrict } from './grids.ts';
import { lengthOf } from './integrals.ts';
import type { NoValue, Outcome, Waveform } from './waveform.ts';

/** Greatest phase of the component over one piece, rad. */
const LONGEST_PHASE = 1.5;
/** A period this little longer than the axis (relative) is the axis, by rounding. */
const SAME_PERIOD = 1e-9;
/** A fundamental below this fraction of the content is none. */
const NO_FUNDAMENTAL = 1e-12;

/**
 * Amplitude (peak value) of the component with n oscillations in a period; n = 0 is the mean. The period is the whole
 * axis, or the last full one of the length given.
 */
export function harmonic(waveform: Waveform, n: number, period?: number): Outcome {
  const cut = lastPeriod(waveform, period);
  if ('none' in cut) return cut;
  const [cosine, sine] = component(cut, n);
  return n === 0 ? cosine / 2 : Math.hypot(cosine, sine);
}

/** Total harmonic distortion: the RMS of all harmonics above the first, relative to the first's. */
export function distortion(waveform: Waveform, period?: number): Outcome {
  const cut = lastPeriod(waveform, period);
  if ('none' in cut) return cut;
  const average = component(cut, 0)[0] / 2;
  const [cosine, sine] = component(cut, 1);
  const fundamental = Math.hypot(cosine, sine) / Math.SQRT2;
  const start = cut.grid[0]!;
  const omega = (2 * Math.PI) / lengthOf(cut);
  // The rest squared, not a difference of squares: a small distortion keeps its digits.
  let squares = 0;
  let total = 0;
  eachPoint(cut, omega, (t, weight, value) => {
    const phase = omega * (t - start);
    const rest = value - average - cosine * Math.cos(phase) - sine * Math.sin(phase);
    squares += weight * rest * rest;
    total += weight * value * value;
  });
  const length = lengthOf(cut);
  if (!(fundamental > NO_FUNDAMENTAL * Math.sqrt(total / length))) {
    return { none: 'there is no component of one oscillation per period' };
  }
  return Math.sqrt(squares / length) / fundamental;
}

/** Coefficients of cos(n ω t) and sin(n ω t), t counted from the start of the axis; for n = 0 twice the mean, and 0. */
function component(waveform: Waveform, n: number): [cosine: number, sine: number] {
  const length = lengthOf(waveform);
  const start = waveform.grid[0]!;
  const omega = (2 * Math.PI * n) / length;
  let cosine = 0;
  let sine = 0;
  eachPoint(waveform, omega, (t, weight, value) => {
    const phase = omega * (t - start);
    cosine += weight * value * Math.cos(phase);
    sine += weight * value * Math.sin(phase);
  });
  return [(2 * cosine) / length, (2 * sine) / length];
}

function lastPeriod(waveform: Waveform, period: number | undefined): Waveform | NoValue {
  const length = lengthOf(waveform);
  if (length === 0) return { none: 'the axis has no length' };
  if (period === undefined || Math.abs(period - length) <= SAME_PERIOD * length) return waveform;
  if (!(period > 0)) return { none: 'the period is not above zero' };
  if (period > length) return { none: 'the period is longer than what is kept of the response' };
  const end = waveform.grid.at(-1)!;
  return restrict(waveform, end - period, end)!;
}

function eachPoint(
  { grid, values }: Waveform,
  omega: number,
  visit: (t: number, weight: number, value: number) => void,
): void {
  const cubic = new Float64Array(4);
  for (let k = 0; k + 1 < grid.length; k++) {
    const begin = grid[k]!;
    const width = grid[k + 1]! - begin;
    cubicOf(values, 4 * k, cubic);
    const pieces = Math.max(1, Math.ceil((omega * width) / LONGEST_PHASE));
    for (let piece = 0; piece < pieces; piece++) {
      for (let g = 0; g < GAUSS_POINTS.length; g++) {
        const s = (piece + GAUSS_POINTS[g]!) / pieces;
        visit(begin + s * width, (GAUSS_WEIGHTS[g]! * width) / pieces, evaluateCubic(cubic, s));
      }
    }
  }
}

const [GAUSS_POINTS, GAUSS_WEIGHTS] = gaussLegendre(10);

/** Points and weights on [0, 1]: Newton's method on Legendre's polynomial (Abramowitz & Stegun, 25.4.29 and 25.4.30). */
function gaussLegendre(count: number): [points: Float64Array, weights: Float64Array] {
  const points = new Float64Array(count);
  const weights = new Float64Array(count);
  for (let k = 0; k < count; k++) {
    let x = Math.cos((Math.PI * (k + 0.75)) / (count + 0.5));
    let slope = 1;
    for (let iteration = 0; iteration < 20; iteration++) {
      let previous = 1;
      let value = x;
      for (let degree = 2; degree <= count; degree++) {
        [previous, value] = [value, ((2 * degree - 1) * x * value - (degree - 1) * previous) / degree];
      }
      slope = (count * (x * value - previous)) / (x * x - 1);
      x -= value / slope;
    }
    points[k] = (1 + x) / 2;
    weights[k] = 1 / ((1 - x * x) * slope * slope);
  }
  return [points, weights];
}
