/** Source, capacitor and an antiparallel pair of threshold diodes: closed forms of test/references/09, to 1e-9. */
import { describe, expect, test } from 'vitest';
import type { Solution } from '../../solver/analysis.ts';
import type { Component } from '../../solver/circuit.ts';
import { extremes, peak } from '../../solver/waveform/extremes.ts';
import { integral, mean, rms } from '../../solver/waveform/integrals.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import type { Wave } from '../../solver/waves.ts';
import {
  capacitor,
  circuit,
  diode,
  expectAudit,
  expectNear,
  quantity,
  ramp,
  reference,
  resistor,
  sine,
  source,
  threshold,
  timeResponse,
  triangle,
} from './circuits.ts';

const references = reference('09-capacitor-and-threshold-pair');

interface Pair {
  readonly C: number;
  readonly V1: number;
  readonly V2: number;
  readonly Vp: number;
  readonly f: number;
}

function pair({ C, V1, V2 }: Pair, drive: Wave, ohm = 0): Component[] {
  return [
    source('G1', 'in', 'gnd', drive),
    ...(ohm > 0 ? [resistor('R1', 'in', 'b', ohm)] : []),
    capacitor('C1', ohm > 0 ? 'b' : 'in', 'a', C),
    diode('D1', 'a', 'gnd', threshold(V1)),
    diode('D2', 'gnd', 'a', threshold(V2)),
  ];
}

/** The stretches in which the diode conducts, from the modes that were recorded with the steps. */
function conduction(solution: Solution, column: number): [start: number, end: number][] {
  const found: [number, number][] = [];
  const { grid, modes } = solution;
  for (let k = 0; k + 1 < grid.length; k++) {
    if (modes[2 * k + column] !== 1) continue;
    const last = found.at(-1);
    if (last && last[1] === grid[k]) last[1] = grid[k + 1]!;
    else found.push([grid[k]!, grid[k + 1]!]);
  }
  return found;
}

/** The steps of the waveform between two ends of steps. */
function during({ grid, values }: Waveform, [from, to]: readonly [number, number]): Waveform {
  const first = grid.indexOf(from);
  const last = grid.indexOf(to);
  return { grid: grid.slice(first, last + 1), values: values.slice(4 * first, 4 * last) };
}

const exact = 1e-9;
const instant = (found: number, expected: number, period: number): void => {
  expect(Math.abs(found - expected) / period, `instant ${found}, reference ${expected}`).toBeLessThan(exact);
};

/** Between its stretches of conduction a diode carries nothing: of its largest current, less than rounding. */
function expectSilence(solution: Solution, name: string, column: number): void {
  const current = quantity(solution, `${name}.i`);
  const largest = peak(current);
  for (let k = 0; k + 1 < solution.grid.length; k++) {
    if (solution.modes[2 * k + column] === 1) continue;
    for (let s = 0; s < 4; s++) expect(Math.abs(current.values[4 * k + s]!)).toBeLessThanOrEqual(1e-14 * largest);
  }
}

describe.each(['T1', 'T2', 'T3_low_drive'])('%s', (name) => {
  const given: Pair = references[name];
  const period = 1 / given.f;

  describe.each([1e-4, 1e-7])('accuracy %d', (accuracy) => {
    test('sine from rest, then periodic from the first crest on', () => {
      const { sine: steady, sine_first_cycle_from_rest: first } = references[name].results;
      const solution = timeResponse(circuit(...pair(given, sine(given.Vp, given.f))), 2.5 * period, accuracy, 'rest');
      const [on1, on2] = [conduction(solution, 0), conduction(solution, 1)];
      const charge = quantity(solution, 'C1.q');
      const current = quantity(solution, 'C1.i');
      instant(on1[0]![0], first.first_on_s, period);
      instant(on1[0]![1], first.end_first_pulse_s, period);
      instant(on2[0]![0], first.second_on_s, period);
      expectNear(integral(during(current, on1[0]!)), first.Q_first_pulse_C, exact);
      expectNear(-integral(during(current, on2[0]!)), first.Q_second_pulse_C, exact);
      // the second pulse of D1 begins that long after the trough at 3/4 period, and ends at the crest
      instant(on1[1]![0] - 0.75 * period, steady.t_on_after_crest_s, period);
      instant(on1[1]![1], 1.25 * period, period);
      instant(on1[1]![1] - on1[1]![0], steady.conduction_s_per_half, period);
      expectNear(integral(during(current, on1[1]!)), steady.Q_half_C, exact);
      expectNear(integral(during(quantity(solution, 'D1.i'), on1[1]!)), steady.Q_half_C, exact);
      const [low, high] = extremes(quantity(solution, 'C1.v'));
      expectNear(high, steady.vC_max, exact);
      expectNear(low, steady.vC_min, exact);
      // the capacitor's charge is exactly what the diodes passed
      const q = (k: number): number => charge.values[4 * (charge.grid.indexOf(on1[1]![k]!) - k) + 3 * k]!;
      expectNear(q(1) - q(0), steady.Q_half_C, exact);
      // a current that is a derivative within a step, and its square: the accuracy asked, not better
      const pulse = during(current, on1[1]!);
      expectNear(peak(pulse), steady.peak_A, accuracy);
      expectNear(pulse.values[0]!, steady.i_at_turn_on_A, accuracy);
      const conducting = rms(pulse) * Math.sqrt(steady.conduction_s_per_half / (period / 2));
      expectNear(conducting, steady.rms_total_A, accuracy);
      expectSilence(solution, 'D1', 0);
      expectSilence(solution, 'D2', 1);
      expectAudit(solution);
    });

    test('triangle from rest: rectangular pulses', () => {
      const { triangle: steady, triangle_first_cycle_from_rest: first } = references[name].results;
      const drive = triangle(-given.Vp, given.Vp, given.f);
      const solution = timeResponse(circuit(...pair(given, drive)), 2.25 * period, accuracy, 'rest');
      const [on1, on2] = [conduction(solution, 0), conduction(solution, 1)];
      const current = quantity(solution, 'C1.i');
      instant(on1[0]![0], first.first_on_s, period);
      instant(on1[0]![1] - on1[0]![0], first.first_pulse_s, period);
      expectNear(integral(during(current, on1[0]!)), first.Q_first_pulse_C, exact);
      instant(on2[0]![0], first.second_on_s, period);
      instant(on2[0]![0] - 0.25 * period, steady.t_on_after_crest_s, period);
      instant(on2[0]![1] - on2[0]![0], steady.pulse_s, period);
      const pulse = during(current, on1[1]!);
      const [low, high] = extremes(pulse);
      expectNear(low, steady.I_pulse_A, exact);
      expectNear(high, steady.I_pulse_A, exact);
      expectNear(integral(pulse), steady.Q_half_C, exact);
      // one whole period between two turn-offs
      const whole = during(current, [on1[0]![1], on1[1]![1]]);
      expectNear(rms(whole), steady.rms_total_A, exact);
      expectNear(peak(whole) / rms(whole), steady.crest_factor, exact);
      expectNear(mean(during(quantity(solution, 'D1.i'), [on1[0]![1], on1[1]![1]])), steady.mean_each_LED_A, exact);
      expectNear(rms(during(quantity(solution, 'D2.i'), [on1[0]![1], on1[1]![1]])), steady.rms_each_LED_A, exact);
      expectSilence(solution, 'D1', 0);
      expectSilence(solution, 'D2', 1);
      expectAudit(solution);
    });
  });
});

describe.each(['R1', 'R2'])('%s: unipolar ramp', (name) => {
  const given: Pair & { rise_fraction: number } = references[name];
  const period = 1 / given.f;
  const { results } = references[name];

  test.each([1e-4, 1e-7])('accuracy %d', (accuracy) => {
    const drive = ramp(0, given.Vp, given.f, 1 - given.rise_fraction);
    const solution = timeResponse(circuit(...pair(given, drive)), 3 * period, accuracy, 'rest');
    const [on1, on2] = [conduction(solution, 0), conduction(solution, 1)];
    const current = quantity(solution, 'C1.i');
    const crest = given.rise_fraction * period;
    const { first_ramp, first_fall, later_ramps } = results;
    instant(on1[0]![0], first_ramp.on_s, period);
    instant(on1[0]![1] - on1[0]![0], first_ramp.pulse_s, period);
    expectNear(integral(during(current, on1[0]!)), first_ramp.Q_C, exact);
    expectNear(peak(during(current, on1[0]!)), first_ramp.I_A, exact);
    instant(on2[0]![0] - crest, first_fall.on_after_crest_s, period);
    instant(on2[0]![1] - on2[0]![0], first_fall.pulse_s, period);
    expectNear(integral(during(current, on2[0]!)), first_fall.Q_C, exact);
    instant(on1[1]![0] - period, later_ramps.on_after_zero_s, period);
    expectNear(integral(during(current, on1[1]!)), later_ramps.Q_C, exact);
    const ends = [0, 1, 2].map((k) => on2[k]![1]) as [number, number, number];
    const firstPeriod = during(current, [solution.grid[0]!, ends[0]]);
    expectNear(integral(firstPeriod), results.net_charge_first_cycle_C, 1e-8);
    const steady = [ends[0], ends[1]] as const;
    expectNear(mean(during(quantity(solution, 'C1.v'), steady)), results.mean_vC_steady, exact);
    expectNear(mean(during(quantity(solution, 'D2.i'), steady)), results.mean_each_LED_A, exact);
    expectNear(rms(during(quantity(solution, 'D1.i'), steady)), results.rms_LED1_A, exact);
    expectNear(rms(during(quantity(solution, 'D2.i'), steady)), results.rms_LED2_A, exact);
    expectSilence(solution, 'D1', 0);
    expectSilence(solution, 'D2', 1);
    expectAudit(solution);
  });
});

describe.each(['TR1', 'TR2'])('%s: with a series resistor, triangle', (name) => {
  const raw = references[name];
  const given: Pair = { ...raw, V1: raw['V*'], V2: raw['V*'] };
  const period = 1 / given.f;
  const { first_pulse, ...steady } = raw.results;
  const drive = triangle(-given.Vp, given.Vp, given.f);

  // with a resistor the current is an exponential: exact to the accuracy of the steps
  test.each([1e-4, 1e-7])('first pulse from rest, accuracy %d', (accuracy) => {
    const solution = timeResponse(circuit(...pair(given, drive, raw.R)), 0.6 * period, accuracy, 'rest');
    const on = conduction(solution, 0)[0]!;
    const current = quantity(solution, 'C1.i');
    instant(on[0], first_pulse.on_s, period);
    expect(Math.abs(on[1] - 0.25 * period - first_pulse.overrun_s) / period).toBeLessThan(accuracy);
    expectNear(peak(during(current, on)), first_pulse.peak_A, accuracy);
    expectNear(integral(during(current, on)), first_pulse.Q_C, accuracy);
    expectNear(extremes(quantity(solution, 'C1.v'))[1], first_pulse.vC_after, accuracy);
    expectSilence(solution, 'D1', 0);
    expectAudit(solution);
  });

  test.each([1e-4, 1e-7])('periodic state, accuracy %d', (accuracy) => {
    // each half period shrinks the distance to the periodic state by exp(-(T/2 - t_on) / RC) or more: 1e-9 after a few
    const solution = timeResponse(circuit(...pair(given, drive, raw.R)), 12.2 * period, accuracy, 'rest', 10 * period);
    const on1 = conduction(solution, 0);
    const [last, before] = [on1.at(-1)!, on1.at(-2)!];
    const current = quantity(solution, 'C1.i');
    const whole = during(current, [before[0], last[0]]);
    expectNear(peak(whole), steady.peak_A, accuracy);
    expectNear(integral(during(current, before)), steady.Q_half_C, accuracy);
    expectNear(rms(whole), steady.rms_total_A, accuracy);
    expectNear(extremes(quantity(solution, 'C1.v'))[1], steady.vC_peak, accuracy);
    const cycles = Math.floor(before[1] / period);
    expect(Math.abs(before[1] - (cycles + 0.25) * period - steady.overrun_after_crest_s) / period).toBeLessThan(
      accuracy,
    );
    expect(
      Math.abs(last[0] - (Math.floor(last[0] / period - 0.75) + 0.75) * period - steady.t_on_after_crest_s) / period,
    ).toBeLessThan(accuracy);
    expectAudit(solution);
  });
});
