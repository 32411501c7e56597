/** Capacitor-input rectifiers in the periodic state, and a voltage doubler: test/references/06 and 07. */
import { describe, expect, test } from 'vitest';
import type { Solution } from '../../solver/analysis.ts';
import type { Component } from '../../solver/circuit.ts';
import { extremes, peak } from '../../solver/waveform/extremes.ts';
import { mean, rms } from '../../solver/waveform/integrals.ts';
import { absolute } from '../../solver/waveform/parts.ts';
import {
  capacitor,
  circuit,
  currentSource,
  diode,
  expectAudit,
  expectNear,
  exponential,
  quantity,
  reference,
  resistor,
  sine,
  source,
  threshold,
  timeResponse,
  VT_300,
} from './circuits.ts';

const references = reference('06-rectifiers');
const accuracies = [1e-4, 1e-7];
const ideal = threshold(0);

/** `Rs` in line with the source; for a bridge neither pole of the source is the reference: the load's lower end is not either. */
function rectifier(
  given: { Vp: number; f: number; R: number; C: number; Rs?: number },
  full: boolean,
  law: typeof ideal | ReturnType<typeof exponential>,
): Component[] {
  const { Vp, f, R, C, Rs = 0 } = given;
  const inner = Rs > 0 ? 'x' : 'a';
  return [
    source('G1', 'a', 'gnd', sine(Vp, f)),
    ...(Rs > 0 ? [resistor('RS', 'a', 'x', Rs)] : []),
    diode('D1', inner, 'p', law),
    ...(full ? [diode('D2', 'gnd', 'p', law), diode('D3', 'n', inner, law), diode('D4', 'n', 'gnd', law)] : []),
    capacitor('C1', 'p', full ? 'n' : 'gnd', C),
    resistor('R1', 'p', full ? 'n' : 'gnd', R),
  ];
}

/** The second period after a start on the periodic state. */
const secondPeriod = (parts: Component[], f: number, start: number, accuracy: number): Solution =>
  timeResponse(circuit(...parts), 2 / f, accuracy, { C1: start }, 1 / f);

describe.each(Object.keys(references.ideal))('ideal diodes, no source resistance, %s', (name) => {
  const given = references.ideal[name];
  const full: boolean = given.full_wave;
  // closed form: after turn-off at angle t2 the capacitor discharges alone; a source at phase 0 next finds this left
  const off = given.off_angle_deg / 360;
  const turnOff = given.Vp * Math.sin(2 * Math.PI * off);
  const until = full ? 0.5 : 1;
  const start = turnOff * Math.exp(-(until - off) / (given.f * given.R * given.C));

  test.each(accuracies)('accuracy %d', (accuracy) => {
    const solution = secondPeriod(rectifier(given, full, ideal), given.f, start, accuracy);
    const v = quantity(solution, 'C1.v');
    const [low, high] = extremes(v);
    expectNear(low, given.Vmin, accuracy, 'minimum');
    expectNear(high, given.Vp, accuracy, 'maximum');
    expectNear(high - low, given.ripple_pp, 10 * accuracy, 'ripple');
    expectNear(mean(v), given.mean_V, accuracy, 'mean');
    expectNear(rms(v), given.rms_V, accuracy, 'RMS');
    const [current, share] = [quantity(solution, 'D1.i'), full ? 2 : 1];
    expectNear(peak(current), given.diode_peak_A, accuracy, 'diode peak');
    expectNear(share * mean(current), given.mean_rectified_A, accuracy, 'mean current');
    expectNear(Math.sqrt(share) * rms(current), given.rms_rectified_A, accuracy, 'RMS current');
    expectAudit(solution);
  });
});

interface SourceResistance {
  readonly wCR: number;
  readonly Rs_over_R: number;
  readonly full_wave: boolean;
  readonly mean_over_Vp: number;
  readonly rms_over_mean_rectified_current: number;
  readonly peak_over_mean_rectified_current: number;
}
const halfWave = (references.source_resistance as SourceResistance[]).filter(({ full_wave }) => !full_wave);

describe.each(halfWave)('ideal diode, source resistance: ωCR $wCR, Rs/R $Rs_over_R', (given) => {
  test.each(accuracies)('accuracy %d', (accuracy) => {
    const [R, f, Vp] = [1e3, 50, 10];
    const C = given.wCR / (2 * Math.PI * f * R);
    const parts = rectifier({ Vp, f, R, C, Rs: given.Rs_over_R * R }, false, ideal);
    // the slowest approaches its periodic state by a factor of e every RC/6 or faster: 1e-8 of what the start lacks is left after 40 periods
    const periods = given.wCR > 50 ? 60 : 25;
    const solution = timeResponse(
      circuit(...parts),
      periods / f,
      accuracy,
      { C1: given.mean_over_Vp * Vp },
      (periods - 1) / f,
    );
    const current = quantity(solution, 'D1.i');
    expectNear(mean(quantity(solution, 'C1.v')), given.mean_over_Vp * Vp, accuracy, 'mean voltage');
    const through = mean(quantity(solution, 'R1.i'));
    expectNear(rms(current) / through, given.rms_over_mean_rectified_current, accuracy, 'RMS current');
    expectNear(peak(current) / through, given.peak_over_mean_rectified_current, 2 * accuracy, 'peak current');
    expectAudit(solution);
  });
});

describe.each(Object.keys(references.exponential))('exponential diodes, %s', (name) => {
  const given = references.exponential[name];
  const { results, full_wave: full } = given;
  test.each(accuracies)('accuracy %d', (accuracy) => {
    const law = exponential(given.Is, given.n * VT_300);
    const parts = rectifier({ ...given, Rs: given.Rs }, full, law);
    const solution = secondPeriod(parts, given.f, results.v0, accuracy);
    const v = quantity(solution, 'C1.v');
    const current = full ? absolute(quantity(solution, 'RS.i')) : quantity(solution, 'RS.i');
    const [low, high] = extremes(v);
    expectNear(mean(v), results.mean_V, accuracy, 'mean');
    expectNear(rms(v), results.rms_V, accuracy, 'RMS');
    expectNear(low, results.Vmin, accuracy, 'minimum');
    expectNear(high, results.Vmax, accuracy, 'maximum');
    expectNear(mean(current), results.mean_I, accuracy, 'mean current');
    expectNear(rms(current), results.rms_I, accuracy, 'RMS current');
    expectNear(peak(current), results.Ipeak, accuracy, 'peak current');
    expectAudit(solution, Math.max(1e-6, 5 * accuracy));
  });
});

describe('voltage doubler (one stage), constant load', () => {
  const [given] = references07().filter(({ N, Vp }) => N === 1 && Vp === 100);
  interface Run {
    readonly N: number;
    readonly Vp: number;
    readonly f: number;
    readonly C: number;
    readonly I: number;
    readonly Vmax: number;
    readonly Vmin: number;
    readonly ripple: number;
  }
  function references07(): Run[] {
    return reference('07-voltage-multiplier').runs;
  }

  test('settled near the recomputed run: peak within 0.2 V, ripple within 1 %', () => {
    const { Vp, f, C, I, Vmax, ripple } = given!;
    // the reference's diode: 1 nA, 4 mV
    const law = exponential(1e-9, 4e-3);
    const parts = [
      source('G1', 'in', 'gnd', sine(Vp, f)),
      capacitor('C1', 'in', 'a', C),
      diode('D1', 'gnd', 'a', law),
      diode('D2', 'a', 's', law),
      capacitor('C2', 's', 'gnd', C),
      currentSource('G2', 's', 'gnd', I),
    ];
    // started near the end: pump capacitor at -Vp, output at 2 Vp less the formula's drop
    const solution = timeResponse(circuit(...parts), 40 / f, 1e-4, { C1: -Vp, C2: 2 * Vp - 1 }, 39 / f);
    const [low, high] = extremes(quantity(solution, 's'));
    expect(Math.abs(high - Vmax)).toBeLessThan(0.2);
    expectNear(high - low, ripple, 0.01, 'ripple');
    expectAudit(solution, 1e-4);
  });
});
