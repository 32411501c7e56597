/**
 * Positive part, negative part and magnitude, on a grid that is split where the waveform changes sign: within a step the
 * result is a cubic again, so integrals lose no order.
 */
import { signChanges } from './comparison.ts';
import { refineGrid, resample } from './grids.ts';
import type { Waveform } from './waveform.ts';

/** max(x, 0) */
export function positivePart(waveform: Waveform): Waveform {
  return bySign(waveform, (value, above) => (above ? Math.max(value, 0) : 0));
}

/** min(x, 0): zero or below, so that x is the sum of its two parts. */
export function negativePart(waveform: Waveform): Waveform {
  return bySign(waveform, (value, above) => (above ? 0 : Math.min(value, 0)));
}

/** |x| */
export function absolute(waveform: Waveform): Waveform {
  return bySign(waveform, (value) => Math.abs(value));
}

function bySign(waveform: Waveform, of: (value: number, above: boolean) => number): Waveform {
  const { grid, values } = resample(waveform, refineGrid(waveform.grid, signChanges(waveform)));
  const result = new Float64Array(values.length);
  for (let k = 0; k < values.length; k += 4) {
    // The inner nodes tell the sign: the ends may be zero.
    const above = values[k + 1]! + values[k + 2]! > 0;
    for (let s = 0; s < 4; s++) {
      const value = values[k + s]!;
      result[k + s] = Number.isNaN(value) ? Number.NaN : of(value, above);
    }
  }
  return { grid, values: result };
}
