/**
 * The lamp circuit for a general-purpose library of explicit methods (odex, extrapolation of the midpoint rule after E. Hairer and G. Wanner): one
 * differential equation for the capacitor's voltage, the current of the loop solved for by bisection and Newton steps of its own.
 */

import { waveCorners, waveValue } from '../../solver/wave-evaluation.ts';
import odex from '../odex.ts';
import {
  type LampCase,
  LED_RESISTANCE,
  PERIODS,
  SATURATION_CURRENT,
  SLOPE_VOLTAGE,
  SOURCE_RESISTANCE,
} from './lamp.ts';

/** Current for a voltage across resistor and pair in series: (R + r) i + slope · asinh-like junction drop. */
function loopCurrent(voltage: number): number {
  const resistance = SOURCE_RESISTANCE + LED_RESISTANCE;
  const magnitude = Math.abs(voltage);
  // u + resistance · Is (exp(u / slope) - 1) = |v|, u the junction's voltage; the other LED's reverse current is below 1e-17 A
  let low = 0;
  let high = Math.min(magnitude, SLOPE_VOLTAGE * Math.log1p(magnitude / (resistance * SATURATION_CURRENT)));
  let u = high;
  for (let k = 0; k < 100; k++) {
    const e = SATURATION_CURRENT * Math.exp(u / SLOPE_VOLTAGE);
    const residual = u + resistance * (e - SATURATION_CURRENT) - magnitude;
    if (residual > 0) high = u;
    else low = u;
    const step = residual / (1 + (resistance * e) / SLOPE_VOLTAGE);
    const next = u - step;
    const taken = next > low && next < high ? next : (low + high) / 2;
    if (Math.abs(taken - u) <= 1e-15 * u + 1e-18) break;
    u = taken;
  }
  return Math.sign(voltage) * SATURATION_CURRENT * Math.expm1(u / SLOPE_VOLTAGE);
}

export interface ExplicitOutcome {
  readonly charges: [number, number];
  readonly steps: number;
  readonly evaluations: number;
}

export function solveLampExplicitly(lamp: LampCase, tolerance: number): ExplicitOutcome {
  const end = PERIODS * lamp.period;
  const keep = end - lamp.period;
  const corners = [...new Set([...waveCorners(lamp.wave, 0, end), keep, end])].sort((a, b) => a - b);
  let state = [0, 0, 0];
  let steps = 0;
  let evaluations = 0;
  let from = 0;
  for (const to of corners) {
    const middle = (from + to) / 2;
    const slope =
      lamp.wave.shape === 'sine'
        ? undefined
        : (waveValue(lamp.wave, middle) - waveValue(lamp.wave, middle - (to - from) / 4)) / ((to - from) / 4);
    const base = waveValue(lamp.wave, middle);
    const drive = (t: number): number => (slope === undefined ? waveValue(lamp.wave, t) : base + slope * (t - middle));
    const solver = new odex.Solver(3);
    solver.relativeTolerance = tolerance;
    // the voltage to the same absolute tolerance, the charges relative to the charge of one volt
    solver.absoluteTolerance = [tolerance, tolerance * lamp.capacitance, tolerance * lamp.capacitance];
    solver.maxSteps = 1_000_000;
    solver.initialStepSize = 1e-5 * lamp.period;
    if (from === keep) state = [state[0]!, 0, 0];
    const result = solver.solve(
      (t, y) => {
        const current = loopCurrent(drive(t) - y[0]!);
        return [current / lamp.capacitance, Math.max(current, 0), Math.max(-current, 0)];
      },
      from,
      state,
      to,
    );
    state = result.y;
    steps += result.nStep;
    evaluations += result.nEval;
    from = to;
  }
  return { charges: [state[1]!, state[2]!], steps, evaluations };
}
