/**
 * Figures of the demonstration notes against closed forms. Values of components are those of the notes and parts; every
 * form is derived in the comment above it. Ideal thresholds and no resistance are written as such.
 */
import { describe, expect, test } from 'vitest';
import { figureOf } from './solved-notes.ts';

/** kT/q at 25 °C from the exact constants of the SI (brochure, 9th edition). */
const THERMAL_VOLTAGE = (1.380649e-23 * 298.15) / 1.602176634e-19;

interface Law {
  readonly saturation: number;
  readonly slope: number;
  readonly resistance: number;
}
const GREEN: Law = { saturation: 2.1e-21, slope: 1.9 * THERMAL_VOLTAGE, resistance: 8 };
const BLUE: Law = { saturation: 1.3e-25, slope: 2.2 * THERMAL_VOLTAGE, resistance: 12 };
const RECTIFIER: Law = { saturation: 2e-9, slope: 1.8 * THERMAL_VOLTAGE, resistance: 0.04 };

/** Forward voltage at a current: the exponential law solved for the voltage. */
function forwardVoltage(law: Law, current: number): number {
  return law.slope * Math.log1p(current / law.saturation) + law.resistance * current;
}

/** Current through a resistance and `count` diodes in series, by bisection. */
function currentThrough(law: Law, count: number, resistance: number, voltage: number): number {
  let low = 0;
  let high = voltage / resistance;
  for (let step = 0; step < 100; step++) {
    const middle = (low + high) / 2;
    if (resistance * middle + count * forwardVoltage(law, middle) < voltage) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

function expectWithin(value: number, expected: number, relative: number): void {
  expect(Math.abs(value / expected - 1), `${value} against ${expected}`).toBeLessThan(relative);
}

describe('line lamp: 34 V peak, 50 Hz, 680 Ω, 470 nF', () => {
  const C = 470e-9;
  const R = 680;
  const omega = 2 * Math.PI * 50;
  const of = (name: string) => figureOf('line-lamp', name);

  test('peak current on the sine: Û / √(R² + 1/(ωC)²), since a conducting LED is nearly a constant voltage', () => {
    expectWithin(of('lamp_peak'), 34 / Math.hypot(R, 1 / (omega * C)), 1e-3);
  });

  test('charge: C (2 Û - 2 V_F) for ideal thresholds and no resistance; the models differ by less than 2 %', () => {
    expectWithin(of('half_cycle_charge'), C * 2 * (34 - forwardVoltage(GREEN, of('lamp_peak'))), 0.02);
  });

  test('mean current: one such charge in every cycle', () => {
    expectWithin(of('lamp_mean'), of('half_cycle_charge') * 50, 1e-4);
    expectWithin(of('lamp_mean_other'), of('lamp_mean'), 1e-4);
  });

  // From a crest the line must run back by 2 V_F: Û (1 - cos ωt) = 2 V_F. The LED lights a little below V_F.
  test('conduction begins arccos(1 - 2 V_F/Û)/ω after a crest, less the model difference', () => {
    const ideal = Math.acos(1 - (2 * forwardVoltage(GREEN, of('lamp_peak'))) / 34) / omega;
    expect(of('first_light')).toBeLessThan(ideal);
    expectWithin(of('first_light'), ideal, 0.05);
    expectWithin(of('closed_form_dead'), ideal, 1e-3);
  });

  // Current begins to flow on the sine when v - v_C reaches the LED's voltage at 50 µA; v_C is then at its lowest.
  test('conduction begins where the law of the LED passes 50 µA', () => {
    const line = of('capacitor_peak') - forwardVoltage(GREEN, 50e-6) - R * 50e-6;
    expectWithin(of('first_light'), Math.acos(line / 34) / omega, 2e-3);
  });

  test('the current leads by a quarter of a period, 5 ms, but for the dead intervals and R1', () => {
    expectWithin(of('lead'), 5e-3, 0.1);
  });

  test('power from the line is that of the resistor and the LEDs', () => {
    expectWithin(of('source_power'), of('resistor_power') + of('led_power'), 1e-4);
    expectWithin(of('resistor_power'), of('line_rms') ** 2 * R, 1e-4);
  });

  test('height of the pulses under the triangle: C times its slope, 4 C Û f', () => {
    expectWithin(of('bench_peak'), 4 * C * 34 * 50, 1e-4);
  });

  // At the crest v_C = Û - V_F - R I with I = C s. Then s changes sign: i = 2 I exp(-t/RC) - I, zero at t = RC ln 2,
  // and its integral to there is R C I (1 - ln 2). So v_C ends at Û - V_F - R I ln 2, and Q is twice C times that.
  test('charge under the triangle: 2 C (Û - V_F - R I ln 2)', () => {
    const I = 4 * C * 34 * 50;
    expectWithin(of('bench_charge'), 2 * C * (34 - forwardVoltage(GREEN, I) - R * I * Math.LN2), 5e-3);
  });

  // The overrun RC ln 2 delays the end and the beginning of conduction alike, so the dead interval is 2 V / s. V lies
  // between the LED's voltages at 50 µA, where the interval is counted from, and at full current.
  test('dead interval under the triangle: 2 V_F / (4 Û f)', () => {
    const slope = 4 * 34 * 50;
    expect(of('bench_dead')).toBeLessThan((2 * forwardVoltage(GREEN, 4 * C * 34 * 50)) / slope);
    expect(of('bench_dead')).toBeGreaterThan((2 * forwardVoltage(GREEN, 50e-6)) / slope);
  });

  test('reconnection: 34 V + 32 V across R1 and one LED', () => {
    expectWithin(of('surge'), currentThrough(GREEN, 1, R, 66), 1e-6);
  });
});

describe('pair characteristic', () => {
  const of = (name: string) => figureOf('pair-characteristic', name);

  test.each([
    ['green_1mA', GREEN, 1e-3],
    ['green_10mA', GREEN, 10e-3],
    ['green_20mA', GREEN, 20e-3],
    ['blue_1mA', BLUE, 1e-3],
    ['blue_10mA', BLUE, 10e-3],
    ['blue_20mA', BLUE, 20e-3],
  ] as const)('%s: n kT/q ln(1 + I/I_S) + R_S I', (name, law, current) => {
    expectWithin(of(name), forwardVoltage(law, current), 1e-6);
  });

  // Common practice, no source.
  test('green turns on just over 2 V and blue near 3 V, at a few milliampere', () => {
    expect(forwardVoltage(GREEN, 3e-3)).toBeGreaterThan(2);
    expect(of('green_10mA')).toBeLessThan(2.3);
    expectWithin(of('blue_10mA'), 3, 0.05);
  });

  // The threshold law carries I at V_T + r I.
  test('difference of the threshold law', () => {
    const at = (current: number) => 2.05 + 13 * current - forwardVoltage(GREEN, current);
    expectWithin(of('threshold_2mA'), at(2e-3), 1e-5);
    expectWithin(of('threshold_20mA'), at(20e-3), 1e-5);
  });
});

describe('gate ramp: 10 V in 3.92 s, 680 µF, 82 Ω', () => {
  const C = 680e-6;
  const of = (name: string) => figureOf('gate-ramp', name);
  const plateau = (C * 10) / 3.92;

  test('current of green: C times the slope', () => {
    expectWithin(of('green_plateau'), plateau, 1e-3);
  });

  test('greatest voltage of C1: the crest less V_F and less R I, but for what still flows after the crest', () => {
    expectWithin(of('capacitor_high'), 10 - forwardVoltage(GREEN, plateau) - 82 * plateau, 1e-3);
  });

  // In later cycles C1 returns to where it was, in the first it keeps what it has risen by.
  test('charge is kept', () => {
    expectWithin(of('charge_up'), -of('charge_down'), 2e-4);
    expectWithin(of('charge_up'), C * (of('capacitor_high') - of('capacitor_low')), 2e-4);
    expect(of('first_charge')).toBeGreaterThan(0);
  });

  // With ideal thresholds the current of the first rise starts at V_1 and of later ones at V_1 + V_2. R1 draws the flash out
  // into the next rise, so C1 keeps more than V_2 and green lights later still.
  test('lit time: from the forward voltage of green in the first rise, from both in later ones', () => {
    const slope = 10 / 3.92;
    const green = forwardVoltage(GREEN, 1e-3);
    expectWithin(of('first_green'), (10 - green) / slope, 0.03);
    expect(of('later_green')).toBeLessThan((10 - green - forwardVoltage(BLUE, 1e-6)) / slope);
    expectWithin(of('later_green_at'), of('capacitor_low') + green + 82 * 1e-3, 0.03);
  });

  test('blue gives back what green brought', () => {
    expectWithin(of('blue_mean'), -of('charge_down') / 4, 2e-4);
  });
});

describe('panel supply', () => {
  const of = (name: string) => figureOf('panel-supply', name);

  test('each diode carries half the load current', () => {
    expectWithin(of('diode_mean'), of('load_current') / 2, 2e-4);
  });

  test('ripple is below I/(2 f C) and above what is lost while no diode conducts', () => {
    const bound = of('load_current') / (2 * 50 * 470e-6);
    expect(of('full_ripple')).toBeLessThan(bound);
    // The load current, at its mean, over the half cycle less the conduction.
    expect(of('full_ripple')).toBeGreaterThan(0.97 * bound * (1 - of('conduction') / 10e-3));
  });

  // Round the loop of the bridge: what D1 holds back is the output and the forward voltage of D3, which together are never
  // more than the peak of the winding.
  test('reverse voltage: below the peak of the winding, above the least output', () => {
    expect(of('diode_reverse')).toBeLessThan(34);
    expect(of('diode_reverse')).toBeGreaterThan(of('full_mean'));
  });

  test('surge: the crest across R1 and two diodes, the capacitor empty', () => {
    expectWithin(of('surge'), currentThrough(RECTIFIER, 2, 2.2, 34), 1e-4);
  });

  // Without storage the circuit is resistive: the current at every instant is that of two diodes and R1 + R2, and the
  // midpoint rule over a quarter period gives the mean.
  test('mean of the bridge without its capacitor', () => {
    const parts = 4000;
    let sum = 0;
    for (let part = 0; part < parts; part++) {
      const voltage = 34 * Math.sin(((part + 0.5) / parts) * (Math.PI / 2));
      sum += 390 * currentThrough(RECTIFIER, 2, 392.2, voltage);
    }
    expectWithin(of('bare_mean'), sum / parts, 1e-4);
    // 2 Û/π - 2 V_F, with V_F at its greatest, loses a little too much.
    expectWithin(of('bare_mean'), of('bare_form'), 1e-2);
  });
});

describe('level probe', () => {
  const of = (name: string) => figureOf('level-probe', name);
  const tau = (10e3 + 250) * 100e-9;

  test('rise time of a resistor and a capacitor: R C ln 9, about 2.2 R C', () => {
    expectWithin(of('rc_rise'), tau * Math.log(9), 1e-4);
  });

  test('what is left after 5 ms: exp(-t/RC)', () => {
    expectWithin(of('rc_error'), Math.exp(-5e-3 / tau), 2e-4);
  });

  // Series circuit: ω_0 = 1/√(LC), ζ = (R/2) √(C/L); overshoot exp(-π ζ/√(1 - ζ²)).
  test('overshoot of the choke and its capacitor', () => {
    const zeta = (318 / 2) * Math.sqrt(220e-9 / 22e-3);
    expectWithin(of('lc_overshoot'), Math.exp((-Math.PI * zeta) / Math.sqrt(1 - zeta * zeta)), 1e-4);
  });

  test('reading: half of 3 V, divided by R3 and R4', () => {
    expectWithin(of('reading'), (1.5 * 10e6) / (10e6 + 4.7e3), 1e-4);
  });
});
