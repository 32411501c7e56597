/**
 * Integrals by the quadrature of the Radau IIA method on the nodes of every step: order five, and the same sums that the
 * integrator itself takes, so a charge drawn from a current is the charge that the capacitor holds.
 */
import { RADAU_WEIGHTS, type Waveform } from './waveform.ts';

const [W1, W2, W3] = RADAU_WEIGHTS;

/** Over the whole axis. */
export function integral(waveform: Waveform): number {
  return quadrature(waveform, (value) => value);
}

/** Average over the axis; the value itself where the axis has no length. */
export function mean(waveform: Waveform): number {
  const length = lengthOf(waveform);
  return length === 0 ? waveform.values[3]! : integral(waveform) / length;
}

/** Root of the mean square. */
export function rms(waveform: Waveform): number {
  const length = lengthOf(waveform);
  if (length === 0) return Math.abs(waveform.values[3]!);
  // Scaled by the largest value, so that squares neither overflow nor vanish.
  let scale = 0;
  for (const value of waveform.values) scale = Math.max(scale, Math.abs(value));
  if (!(scale > 0)) return scale;
  return scale * Math.sqrt(quadrature(waveform, (value) => (value / scale) ** 2) / length);
}

export function lengthOf({ grid }: Waveform): number {
  return grid[grid.length - 1]! - grid[0]!;
}

function quadrature({ grid, values }: Waveform, integrand: (value: number) => number): number {
  let sum = 0;
  // Compensated summation (W. Kahan, 1965): thousands of steps lose no digit.
  let lost = 0;
  for (let k = 0; k + 1 < grid.length; k++) {
    const at = 4 * k;
    const step = W1 * integrand(values[at + 1]!) + W2 * integrand(values[at + 2]!) + W3 * integrand(values[at + 3]!);
    const term = (grid[k + 1]! - grid[k]!) * step - lost;
    const next = sum + term;
    lost = next - sum - term;
    sum = next;
  }
  return sum;
}
