import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { ExponentialLaw } from '../../../solver/circuit.ts';
import { thermalVoltage } from '../../../solver/devices/constants.ts';
import { evaluateJunction, junctionAt } from '../../../solver/devices/exponential-diode.ts';
import {
  circuit,
  diode,
  expectNear,
  exponential,
  number,
  operatingPoint,
  reference,
  resistor,
  source,
} from '../circuits.ts';

function currentAt(law: ExponentialLaw, voltage: number, kelvin = 298.15): number {
  const result = new Float64Array(2);
  evaluateJunction(junctionAt(law, kelvin), voltage, result);
  return result[0]!;
}

/** The terminal voltage at which the law carries `current`, by bisection. */
function voltageAt(law: ExponentialLaw, current: number, kelvin: number): number {
  let low = -20;
  let high = 20;
  for (let i = 0; i < 200; i++) {
    const middle = (low + high) / 2;
    if (currentAt(law, middle, kelvin) < current) low = middle;
    else high = middle;
  }
  return low;
}

interface Case {
  readonly tag: string;
  readonly V: number;
  readonly R: number;
  readonly Is: number;
  readonly n: number;
  readonly Vt: number;
  readonly I: number;
  readonly Vd: number;
}

// T. C. Banwell and A. Jayakumar, 2000, recomputed with 40 digits (test/references/04)
describe.each(reference('04-diode-and-resistor').cases as Case[])('diode and resistor, case $tag', (given) => {
  const { V, R, Is, n, Vt, I, Vd } = given;
  const near = (found: number): void => {
    if (V < 0) expect(Math.abs(found - I)).toBeLessThan(1e-9 * Is);
    else expectNear(found, I, 1e-12);
  };

  test('the resistance inside the law', () => {
    near(currentAt(exponential(Is, n * Vt, R), V));
  });

  test('half inside, half outside, as an operating point', () => {
    const solution = operatingPoint(
      circuit(
        source('G1', 'in', 'gnd', V),
        resistor('R1', 'in', 'a', R / 2),
        diode('D1', 'a', 'gnd', exponential(Is, n * Vt, R / 2)),
      ),
    );
    // the resistor's current is a difference of potentials, good to their rounding
    const rounding = (4 * Number.EPSILON * Math.abs(V)) / (R / 2);
    const found = number(solution, 'D1.i');
    expect(Math.abs(found - I)).toBeLessThanOrEqual(Math.max(1e-10 * Math.abs(I), V < 0 ? 1e-3 * Is : 0, rounding));
  });

  test('the resistance outside, as an operating point', () => {
    const solution = operatingPoint(
      circuit(
        source('G1', 'in', 'gnd', V),
        resistor('R1', 'in', 'a', R),
        diode('D1', 'a', 'gnd', exponential(Is, n * Vt)),
      ),
    );
    expectNear(number(solution, 'D1.v'), Vd, 1e-11);
    const rounding = (4 * Number.EPSILON * Math.abs(V)) / R;
    const found = number(solution, 'D1.i');
    expect(Math.abs(found - I)).toBeLessThanOrEqual(Math.max(1e-10 * Math.abs(I), V < 0 ? 1e-3 * Is : 0, rounding));
    expect(solution.remarks).toEqual([]);
  });
});

describe('the law', () => {
  const law = exponential(1e-12, 0.05);

  test('without resistance is Shockley’s, exact near the origin', () => {
    for (const v of [-1, -1e-9, 0, 1e-15, 1e-9, 0.1, 0.7])
      expectNear(currentAt(law, v), 1e-12 * Math.expm1(v / 0.05), 2e-15);
  });

  test('with resistance tends to the law without it', () => {
    for (const v of [-1, 0.3, 0.8]) expectNear(currentAt(exponential(1e-12, 0.05, 1e-9), v), currentAt(law, v), 1e-6);
  });

  test('the conductance is the derivative', () => {
    const laws = [law, exponential(1e-12, 0.05, 10), breakdownLaw(20), breakdownLaw(0)];
    fc.assert(
      fc.property(fc.constantFrom(...laws), fc.double({ min: -8, max: 1, noNaN: true }), (one, v) => {
        const result = new Float64Array(2);
        evaluateJunction(junctionAt(one, 298.15), v, result);
        const conductance = result[1]!;
        expect(conductance).toBeGreaterThanOrEqual(0);
        const h = 1e-5;
        const difference = (currentAt(one, v + h) - currentAt(one, v - h)) / (2 * h);
        const rounding = (1e-15 * Math.abs(currentAt(one, v))) / h;
        // third derivative at most conductance / slope² for the fastest slope, 2 mV
        expect(Math.abs(conductance - difference)).toBeLessThanOrEqual(1e-4 * conductance + 1e-20 + rounding);
      }),
      { numRuns: 1000, seed: 1 },
    );
  });

  test('continues as its tangent at 100 slopes, so that nothing overflows', () => {
    const low = currentAt(law, 100 * 0.05);
    const high = currentAt(law, 101 * 0.05);
    expectNear(high / low, 2, 1e-12);
    expect(Number.isFinite(currentAt(law, 1e9))).toBe(true);
    expect(Number.isFinite(currentAt(exponential(1e-12, 0.05, 1), 1e9))).toBe(true);
  });
});

const kelvins = [233.15, 298.15, 333.15, 398.15];

describe('temperature', () => {
  test('kT/q at 300 K is 25.852 mV (from the SI’s exact constants)', () => {
    expectNear(thermalVoltage(300), 0.025851999786435532, 1e-15);
  });

  test.each(kelvins)('saturation current of a junction with an energy gap, at %d K', (kelvin) => {
    // S. M. Sze, Physics of Semiconductor Devices, ch. 2 (from memory): I_S ∝ T^(3/n) exp(-E_g / (n k T))
    const law = exponential(1e-14, 0, 0, { slope: { ideality: 1.5 }, at: 300, temperature: { energyGap: 1.12 } });
    const saturation = (t: number): number =>
      (t / 300) ** (3 / 1.5) * Math.exp((-1.12 * 11604.51812155008) / (1.5 * t));
    const expected = (1e-14 * saturation(kelvin)) / saturation(300);
    // far in reverse the current is the saturation current; 11604.518... K/eV is e / k
    expectNear(-currentAt(law, -5, kelvin), expected, 1e-12);
    const u = 0.5;
    expectNear(currentAt(law, u, kelvin), expected * Math.expm1((u * 11604.51812155008) / (1.5 * kelvin)), 1e-11);
  });

  test('silicon at 1 mA loses about 2 mV/K (common practice, no source)', () => {
    const law = exponential(1e-14, 0, 0, { slope: { ideality: 1 }, at: 300, temperature: { energyGap: 1.12 } });
    const shift = (voltageAt(law, 1e-3, 310) - voltageAt(law, 1e-3, 300)) / 10;
    expect(shift).toBeLessThan(-1.5e-3);
    expect(shift).toBeGreaterThan(-2.2e-3);
  });

  test.each(kelvins)('a stated coefficient moves the forward voltage at every current, at %d K', (kelvin) => {
    const law = exponential(1e-18, 0, 4, { slope: { ideality: 1.8 }, temperature: { forwardVoltage: -2e-3 } });
    for (const current of [1e-6, 1e-3, 2e-2]) {
      const shift = voltageAt(law, current, kelvin) - voltageAt(law, current, 298.15);
      expect(Math.abs(shift - -2e-3 * (kelvin - 298.15))).toBeLessThan(1e-13);
    }
  });

  test('a fixed slope voltage stays', () => {
    const law = exponential(1e-12, 0.05, 0, { temperature: { energyGap: 1.12 } });
    const ratio = currentAt(law, 0.5, 350) / currentAt(law, 0.45, 350);
    expectNear(ratio, Math.E, 1e-4);
  });
});

/** Zener 6.8 V at 5 mA with 20 Ω in all, of which `resistance` is ohmic. */
function breakdownLaw(resistance: number): ExponentialLaw {
  return exponential(1e-14, 0.026, 0, {
    breakdown: { voltage: 6.8, current: 5e-3, resistance, slopeVoltage: resistance > 0 ? 2e-3 : 20 * 5e-3 },
  });
}

describe('breakdown', () => {
  test('carries its current at its voltage', () => {
    for (const resistance of [0, 20]) expectNear(currentAt(breakdownLaw(resistance), -6.8), -5e-3, 1e-9);
  });

  test('its slope there is slopeVoltage / current + resistance', () => {
    for (const [law, slope] of [
      [breakdownLaw(0), 20],
      [breakdownLaw(20), 20 + 2e-3 / 5e-3],
    ] as const) {
      const result = new Float64Array(2);
      evaluateJunction(junctionAt(law, 298.15), -6.8, result);
      expectNear(1 / result[1]!, slope, 1e-9);
    }
  });

  test('moves with its own coefficient', () => {
    const law = exponential(1e-14, 0.026, 0, {
      breakdown: { voltage: 6.8, current: 5e-3, resistance: 10, slopeVoltage: 0.01, temperatureCoefficient: 3e-3 },
    });
    expectNear(currentAt(law, -(6.8 + 3e-3 * 40), 298.15 + 40), -5e-3, 1e-8);
  });
});
