/** Source, resistor, capacitor and an antiparallel pair of exponential diodes: test/references/10, and an independent integrator. */

import { describe, expect, test } from 'vitest';
import type { Component } from '../../solver/circuit.ts';
import { extremes } from '../../solver/waveform/extremes.ts';
import { integral, rms } from '../../solver/waveform/integrals.ts';
import { negativePart, positivePart } from '../../solver/waveform/parts.ts';
import type { Wave } from '../../solver/waves.ts';
import odex from '../odex.ts';
import {
  at,
  between,
  capacitor,
  circuit,
  diode,
  expectAudit,
  expectNear,
  exponential,
  quantity,
  ramp,
  reference,
  relativeError,
  resistor,
  sine,
  source,
  timeResponse,
  triangle,
  VT_300,
} from './circuits.ts';

interface Led {
  readonly Is: number;
  readonly n: number;
  readonly rs: number;
}
interface Set {
  readonly C: number;
  readonly R: number;
  readonly Vp: number;
  readonly f: number;
  readonly led_1: Led;
  readonly led_2: Led;
}
interface Case {
  readonly periodic: {
    readonly vC_at: Record<string, number>;
    readonly charge: number;
    readonly mean: number;
    readonly rms: number;
    readonly peak_1: number;
    readonly peak_2: number;
  };
  readonly start_up: readonly {
    readonly vC_at: Record<string, number>;
    readonly charge_1: number;
    readonly charge_2: number;
    readonly rms: number;
  }[];
  readonly start_up_peaks: readonly [number, number];
}

const references: { sets: Record<string, Set>; cases: Record<string, Case> } = reference(
  '10-capacitor-and-exponential-pair',
);

const drives: Record<string, (vp: number, f: number) => Wave> = {
  sine: (vp, f) => sine(vp, f),
  triangle: (vp, f) => triangle(-vp, vp, f),
  ramp: (vp, f) => ramp(0, vp, f, 0.1),
};

const law = ({ Is, n, rs }: Led) => exponential(Is, n * VT_300, rs);

function lamp({ C, R, led_1, led_2 }: Set, drive: Wave): Component[] {
  return [
    source('G1', 'in', 'gnd', drive),
    ...(R > 0 ? [resistor('R1', 'in', 'b', R)] : []),
    capacitor('C1', R > 0 ? 'b' : 'in', 'x', C),
    diode('D1', 'x', 'gnd', law(led_1)),
    diode('D2', 'gnd', 'x', law(led_2)),
  ];
}

const runs = Object.keys(references.cases).flatMap((name) => [1e-4, 1e-7].map((accuracy) => [name, accuracy] as const));

/**
 * With R = 0 the current is C dv/dt, a derivative of what the step's error is held by; at its crest one run misses the accuracy asked by up to this
 * factor (2.5 with set A under a sine at 1e-4). Figures of a note are refined until two runs agree.
 */
const PEAK = 3;

describe.each(runs)('%s at accuracy %d', (name, accuracy) => {
  const [set, shape] = name.split('/') as [string, string];
  const given = references.sets[set]!;
  const expected = references.cases[name]!;
  const period = 1 / given.f;
  const parts = lamp(given, drives[shape]!(given.Vp, given.f));

  test('start-up from rest: three periods', () => {
    const periods = [0, 1, 2].map((k) =>
      timeResponse(circuit(...parts), (k + 1) * period, accuracy, 'rest', k * period),
    );
    expected.start_up.forEach((row, k) => {
      const solution = periods[k]!;
      for (const [place, v] of Object.entries(row.vC_at)) {
        const t = Number.parseFloat(place) * period;
        // relative to the swing of the voltage, which is what the scale of a figure drawn from it is
        expect(Math.abs(at(solution, 'C1.v', Math.min(t, solution.grid.at(-1)!)) - v), place).toBeLessThan(
          accuracy * given.Vp,
        );
      }
      const current = quantity(solution, 'C1.i');
      expectNear(integral(positivePart(current)), row.charge_1, accuracy, `charge 1 of period ${k}`);
      expectNear(Math.abs(integral(negativePart(current))), row.charge_2, accuracy, `charge 2 of period ${k}`);
      expectNear(rms(current), row.rms, accuracy, `RMS of period ${k}`);
      // the stages' equations are solved to the accuracy asked, not to rounding
      expectAudit(solution, Math.max(1e-6, 5 * accuracy));
    });
    const [low, high] = extremes(quantity(periods[0]!, 'C1.i'));
    expectNear(high, expected.start_up_peaks[0], PEAK * accuracy, 'peak 1');
    expectNear(-low, expected.start_up_peaks[1], PEAK * accuracy, 'peak 2');
  });

  test('periodic state: started on it', () => {
    const start = { C1: expected.periodic.vC_at['0 T']! };
    const solution = timeResponse(circuit(...parts), period, accuracy, start);
    for (const [place, v] of Object.entries(expected.periodic.vC_at)) {
      const t = Number.parseFloat(place) * period;
      expect(Math.abs(at(solution, 'C1.v', t, t === 0 ? 'right' : 'left') - v), place).toBeLessThan(
        accuracy * given.Vp,
      );
    }
    const current = quantity(solution, 'C1.i');
    expectNear(integral(positivePart(current)), expected.periodic.charge, accuracy, 'charge');
    expectNear(integral(positivePart(current)) / period, expected.periodic.mean, accuracy, 'mean');
    expectNear(rms(current), expected.periodic.rms, accuracy, 'RMS');
    const [low, high] = extremes(current);
    expectNear(high, expected.periodic.peak_1, PEAK * accuracy, 'peak 1');
    expectNear(-low, expected.periodic.peak_2, PEAK * accuracy, 'peak 2');
    // the stages' equations are solved to the accuracy asked, not to rounding
    expectAudit(solution, Math.max(1e-6, 5 * accuracy));
  });
});

test('errors fall with the accuracy asked: charge and RMS of the second period, set A, sine', () => {
  const given = references.sets.A!;
  const row = references.cases['A/sine']!.start_up[1]!;
  const period = 1 / given.f;
  const accuracies = [1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-9];
  const errors = accuracies.map((accuracy) => {
    const solution = timeResponse(
      circuit(...lamp(given, sine(given.Vp, given.f))),
      2 * period,
      accuracy,
      'rest',
      period,
    );
    const current = quantity(solution, 'C1.i');
    return Math.max(relativeError(integral(positivePart(current)), row.charge_1), relativeError(rms(current), row.rms));
  });
  errors.forEach((error, k) => {
    // the references are good to 2e-13, the rounding of thousands of steps to a little less
    expect(error, `at accuracy ${accuracies[k]}`).toBeLessThan(Math.max(accuracies[k]!, 1e-11));
  });
});

describe('a general-purpose integrator beside the solver: odex, an extrapolation method (E. Hairer and G. Wanner)', () => {
  // Set B with a resistor makes the lamp an ordinary differential equation C dv/dt = i, where i is the root of
  // v_source(t) - R i - v = v_pair(i); the pair's voltage by Newton's method on the two junctions' laws, without any of the solver's code.
  const given = references.sets.B!;
  const { C, R, led_1, led_2, Vp, f } = given;

  /** Current of one junction with series resistance at terminal voltage u: root of u = n Vt ln(1 + i / Is) + rs i, by bisection and Newton. */
  const junction = (u: number, { Is, n, rs }: Led): number => {
    const slope = n * VT_300;
    if (u <= 0) return Is * Math.expm1(u / slope);
    // in the variable w = ln(1 + i / Is) the equation is smooth: slope w + rs Is (e^w - 1) = u
    let w = Math.min(u / slope, Math.log(1 + u / (rs * Is)));
    for (let k = 0; k < 60; k++) {
      const e = rs * Is * Math.exp(w);
      const step = (slope * w + e - rs * Is - u) / (slope + e);
      w -= step;
      if (Math.abs(step) < 1e-15 * (1 + Math.abs(w))) break;
    }
    return Is * Math.expm1(w);
  };
  const pair = (u: number): number => junction(u, led_1) - junction(-u, led_2);
  /** i = (drop - u) / R = pair(u), by bisection then secant: the left side falls and the right side rises with u. */
  const currentAt = (drop: number): number => {
    let low = Math.min(0, drop);
    let high = Math.max(0, drop);
    for (let k = 0; k < 200 && high - low > 1e-16 * Math.abs(drop); k++) {
      const middle = (low + high) / 2;
      if ((drop - middle) / R > pair(middle)) low = middle;
      else high = middle;
    }
    return (drop - (low + high) / 2) / R;
  };

  test.each(['sine', 'ramp'])('%s: capacitor voltages over a period from rest', (shape) => {
    const period = 1 / f;
    const corners = shape === 'sine' ? [0, period / 4, period / 2, period] : [0, period / 2, 0.9 * period, period];
    const drive = (t: number): number =>
      shape === 'sine'
        ? Vp * Math.sin(2 * Math.PI * f * t)
        : t < 0.9 * period
          ? (Vp * t) / (0.9 * period)
          : (Vp * (period - t)) / (0.1 * period);
    const solver = new odex.Solver(1);
    solver.absoluteTolerance = 1e-11;
    solver.relativeTolerance = 1e-11;
    solver.maxSteps = 100_000;
    const solution = timeResponse(circuit(...lamp(given, drives[shape]!(Vp, f))), period, 1e-8, 'rest');
    let v = 0;
    for (let k = 0; k + 1 < corners.length; k++) {
      const [from, to] = [corners[k]!, corners[k + 1]!];
      // the end of a stretch belongs to it
      const inside = (t: number): number => drive(Math.min(Math.max(t, from + 1e-15), to - 1e-15));
      const result = solver.solve((t: number, y: number[]) => [currentAt(inside(t) - y[0]!) / C], from, [v], to);
      expect(result.outcome).toBe(odex.Outcome.Converged);
      v = result.y[0]!;
      expect(Math.abs(at(solution, 'C1.v', to) - v)).toBeLessThan(1e-7 * Vp);
    }
    expectNear(v, references.cases[`B/${shape}`]!.start_up[0]!.vC_at['1 T']!, 1e-8);
    expect(between(quantity(solution, 'C1.v'), 0, period).grid.length).toBeGreaterThan(10);
  });
});
