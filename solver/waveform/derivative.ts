/** The rate of change of a waveform. */
import { cubicOf, cubicSlope } from './cubic.ts';
import { greatest, least } from './extremes.ts';
import { valueAt } from './value-at.ts';
import { COLLOCATION_NODES, type Outcome, type Waveform } from './waveform.ts';

/** The exact derivative of every step's cubic; a jump between steps has none and is left out. */
export function derivative(waveform: Waveform): Waveform {
  const { grid, values } = waveform;
  const result = new Float64Array(values.length);
  const cubic = new Float64Array(4);
  for (let k = 0; k + 1 < grid.length; k++) {
    const width = grid[k + 1]! - grid[k]!;
    if (width === 0) continue;
    cubicOf(values, 4 * k, cubic);
    for (let s = 0; s < 4; s++) result[4 * k + s] = cubicSlope(cubic, COLLOCATION_NODES[s]!) / width;
  }
  return { grid, values: result };
}

/** The rate of change of largest magnitude, with its sign; or the rate at x (after a corner there). */
export function slope(waveform: Waveform, x?: number): Outcome {
  const rate = derivative(waveform);
  if (x !== undefined) return valueAt(rate, x);
  const high = greatest(rate);
  const low = least(rate);
  return Math.abs(low) > Math.abs(high) ? low : high;
}
