/** Finding the instant within a step at which a threshold device or a switch changes its mode. */
import type { System } from '../equations/system.ts';
import { exitMargin } from '../equations/system.ts';
import { C1, C2 } from './radau-coefficients.ts';

/** An event is a crossing of more than this, relative to the scale of voltages or currents: what is below it is rounding. */
export const EVENT_TOLERANCE = 1e-12;

export interface FoundEvent {
  readonly device: number;
  readonly mode: number;
  /** Fraction of the step. */
  readonly at: number;
  readonly quantity: 'voltage' | 'current' | 'control';
}

/** The first exit that the step from y with increments z takes, or undefined. */
export function findEvent(
  system: System,
  y: Float64Array,
  z: readonly [Float64Array, Float64Array, Float64Array],
  scale: { readonly voltage: number; readonly current: number },
  scratch: Float64Array,
): FoundEvent | undefined {
  let first: FoundEvent | undefined;
  for (let device = 0; device < system.modal.length; device++) {
    const modal = system.modal[device]!;
    for (const exit of modal.modes[system.modes[device]!]!.exits) {
      const tolerance = EVENT_TOLERANCE * (exit.quantity === 'current' ? scale.current : scale.voltage);
      const at = (increment: Float64Array | undefined): number => {
        if (!increment) return exitMargin(exit, modal, y);
        for (let i = 0; i < system.vectorLength; i++) scratch[i] = y[i]! + increment[i]!;
        return exitMargin(exit, modal, scratch);
      };
      const margins = [at(undefined), at(z[0]), at(z[1]), at(z[2])] as const;
      const crossing = firstCrossing(margins, tolerance);
      if (crossing !== undefined && (!first || crossing < first.at)) {
        first = { device, mode: exit.to, at: crossing, quantity: exit.quantity };
      }
    }
  }
  return first;
}

/**
 * Where the cubic through the values at the step's start and stages first grows above zero. A value above zero at the start counts only if it
 * is more than rounding there.
 */
function firstCrossing(values: readonly [number, number, number, number], tolerance: number): number | undefined {
  const [v0, v1, v2, v3] = values;
  if (v0 <= tolerance && v1 <= tolerance && v2 <= tolerance && v3 <= tolerance) return undefined;
  if (v0 > tolerance) return 0;
  const cubic = (s: number): number => {
    const a = s;
    const b = s - C1;
    const c = s - C2;
    const d = s - 1;
    return (
      (v0 * b * c * d) / (-C1 * -C2 * -1) +
      (v1 * a * c * d) / (C1 * (C1 - C2) * (C1 - 1)) +
      (v2 * a * b * d) / (C2 * (C2 - C1) * (C2 - 1)) +
      (v3 * a * b * c) / ((1 - C1) * (1 - C2))
    );
  };
  // bracket: the first stretch whose end lies above zero
  const ends = [0, C1, C2, 1];
  let high = values.findIndex((value) => value > tolerance);
  let low = high - 1;
  if (high < 0) {
    high = 3;
    low = 2;
  }
  let left = ends[low]!;
  let right = ends[high]!;
  let below = values[low]!;
  let above = values[high]!;
  // regula falsi with bisection (Illinois variant), to the last bits
  for (let i = 0; i < 100 && right - left > 1e-15; i++) {
    let middle = left + ((right - left) * -below) / (above - below);
    if (!(middle > left && middle < right) || i % 4 === 3) middle = (left + right) / 2;
    const value = cubic(middle);
    if (value > 0) {
      right = middle;
      above = value;
      below /= 2;
    } else {
      left = middle;
      below = value;
      above /= 2;
    }
    if (value === 0) break;
  }
  return right;
}
