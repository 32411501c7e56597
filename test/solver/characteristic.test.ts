/** Operating points along a swept source. */
import { describe, expect, test } from 'vitest';
import type { Solution } from '../../solver/analysis.ts';
import type { Circuit } from '../../solver/circuit.ts';
import { solve } from '../../solver/solve.ts';
import { valueAt } from '../../solver/waveform/value-at.ts';
import {
  capacitor,
  circuit,
  controlled,
  currentSource,
  curve,
  diode,
  expectAudit,
  exponential,
  number,
  operatingPoint,
  quantity,
  resistor,
  source,
  threshold,
  VT_300,
  voltageSwitch,
} from './circuits.ts';

function characteristic(of: Circuit, sweep: string, from: number, to: number, points = 201, accuracy = 1e-4): Solution {
  return solve(of, { find: 'characteristic', sweep, from, to, points }, accuracy);
}

describe('characteristic', () => {
  test('antiparallel LED pair: the closed law, everywhere', () => {
    // two junctions with 1.8 kT/q and 4 Ω each, the second of another slope; law: u = n Vt ln(1 + i / Is) + rs i
    const law = (is: number, n: number, rs: number) => ({ is, s: n * VT_300, rs });
    const [one, two] = [law(2.5e-20, 1.8, 4), law(1e-21, 2.1, 8)];
    const pair = circuit(
      source('G1', 'a', 'gnd', 0),
      diode('D1', 'a', 'gnd', exponential(one.is, one.s, one.rs)),
      diode('D2', 'gnd', 'a', exponential(two.is, two.s, two.rs)),
    );
    for (const [accuracy, points] of [
      [1e-4, 6],
      [1e-4, 201],
      [1e-7, 6],
    ] as const) {
      const solution = characteristic(pair, 'G1', -2.5, 2.5, points, accuracy);
      const current = quantity(solution, 'D1.i');
      const total = quantity(solution, 'G1.i');
      expect(solution.grid[0]).toBe(-2.5);
      expect(solution.grid.at(-1)).toBe(2.5);
      for (let milliampere = 0.01; milliampere < 100; milliampere *= 1.37) {
        const i = 1e-3 * milliampere;
        const [u1, u2] = [one, two].map(({ is, s, rs }) => s * Math.log1p(i / is) + rs * i) as [number, number];
        // what the other diode adds is below 1e-19 A
        // the cubic is checked at one place of each interval, where its error is half of the largest or more; 1 mA is a hundredth of the largest current
        const allowed = 4 * accuracy * (i + 1e-3);
        if (u1 < 2.5) expect(Math.abs(valueAt(current, u1) - i), `${i} A`).toBeLessThan(allowed);
        if (u2 < 2.5) expect(Math.abs(valueAt(total, -u2) - i), `${i} A`).toBeLessThan(allowed);
      }
      expectAudit(solution);
    }
  });

  test('a threshold’s kink is located exactly: 2 V, then 100 Ω', () => {
    const solution = characteristic(
      circuit(source('G1', 'a', 'gnd', 0), diode('D1', 'a', 'gnd', threshold(2, 100))),
      'G1',
      -1,
      5,
      13,
    );
    const current = quantity(solution, 'D1.i');
    const step = solution.modes.indexOf(1);
    expect(Math.abs(solution.grid[step]! - 2)).toBeLessThan(1e-8);
    for (const v of [-1, 0, 1.9, 1.9999999, 2.0000001, 2.5, 3.3, 5])
      expect(Math.abs(valueAt(current, v) - Math.max(0, (v - 2) / 100))).toBeLessThan(1e-9);
    expectAudit(solution);
  });

  test('two kinks in one interval: forward and breakdown', () => {
    const law = threshold(0.7, 1, { voltage: 6.7, resistance: 20 });
    const solution = characteristic(
      circuit(source('G1', 'in', 'gnd', 0), resistor('R1', 'in', 'a', 500), diode('Z1', 'a', 'gnd', law)),
      'G1',
      -10,
      10,
      2,
    );
    const current = quantity(solution, 'Z1.i');
    // the regulator of test/references/11: 10 V through 500 Ω into 6.7 V and 20 Ω
    expect(Math.abs(valueAt(current, -10) - -(10 - 6.7) / 520)).toBeLessThan(1e-12);
    expect(Math.abs(valueAt(current, -8) - -(8 - 6.7) / 520)).toBeLessThan(1e-9);
    expect(Math.abs(valueAt(current, -6.69))).toBeLessThan(1e-11);
    expect(Math.abs(valueAt(current, 0.69))).toBeLessThan(1e-11);
    expect(Math.abs(valueAt(current, 6) - (6 - 0.7) / 501)).toBeLessThan(1e-9);
  });

  test('a table is passed through', () => {
    const [v, i] = [
      [-1, 0, 1, 2, 3],
      [-2e-3, 0, 1e-3, 5e-3, 20e-3],
    ];
    const solution = characteristic(circuit(source('G1', 'a', 'gnd', 0), curve('X1', 'a', 'gnd', v!, i!)), 'G1', -1, 3);
    const current = quantity(solution, 'X1.i');
    v!.forEach((volt, k) => {
      expect(Math.abs(valueAt(current, volt) - i![k]!)).toBeLessThan(1e-4 * 20e-3);
    });
  });

  test('a current source swept: the junction’s logarithm', () => {
    const solution = characteristic(
      circuit(currentSource('G1', 'gnd', 'a', 0), diode('D1', 'a', 'gnd', exponential(1e-12, 0.05, 2))),
      'G1',
      1e-6,
      50e-3,
    );
    const voltage = quantity(solution, 'a');
    for (const i of [1e-6, 1e-5, 1e-4, 1e-3, 12.3e-3, 50e-3])
      expect(Math.abs(valueAt(voltage, i) - (0.05 * Math.log1p(i / 1e-12) + 2 * i))).toBeLessThan(1e-4 * 1.4);
  });

  test('a source that fixes no node by itself, and one that a controlled source senses', () => {
    const solution = characteristic(
      circuit(
        resistor('R1', 'a', 'gnd', 100),
        source('G1', 'a', 'b', 0),
        resistor('R2', 'b', 'gnd', 300),
        controlled('A1', 'c', 'gnd', 'voltage', 'G1', 1000),
        resistor('R3', 'c', 'gnd', 1),
      ),
      'G1',
      -4,
      4,
      5,
    );
    // i = -v / 400 Ω flows into the source's first node
    for (const v of [-4, -1.3, 0, 2, 4]) {
      expect(Math.abs(valueAt(quantity(solution, 'G1.i'), v) - -v / 400)).toBeLessThan(1e-13);
      expect(Math.abs(valueAt(quantity(solution, 'c'), v) - (-1000 * v) / 400)).toBeLessThan(1e-10);
    }
    expectAudit(solution);
  });

  test('capacitors carry nothing in a characteristic', () => {
    const solution = characteristic(
      circuit(source('G1', 'in', 'gnd', 0), resistor('R1', 'in', 'a', 1e3), capacitor('C1', 'a', 'gnd', 1e-6)),
      'G1',
      -5,
      5,
      11,
    );
    expect(quantity(solution, 'C1.i').values.every((value) => value === 0)).toBe(true);
    expect(valueAt(quantity(solution, 'C1.q'), 3)).toBeCloseTo(3e-6, 15);
    expectAudit(solution);
  });

  test('swept downwards or upwards, the ends are the operating points there', () => {
    const parts = (v: number) =>
      circuit(
        source('G1', 'in', 'gnd', v),
        resistor('R1', 'in', 'a', 1e3),
        diode('D1', 'a', 'gnd', exponential(1e-14, VT_300)),
      );
    const solution = characteristic(parts(0), 'G1', 5, -5);
    for (const v of [-5, -1, 0, 0.5, 2, 5])
      expect(Math.abs(valueAt(quantity(solution, 'a'), v) - number(operatingPoint(parts(v)), 'a'))).toBeLessThan(
        1e-4 * 5,
      );
  });

  test('a contact by voltage closes at its upper level on the way up', () => {
    const solution = characteristic(
      circuit(
        source('G1', 'in', 'gnd', 0),
        resistor('R1', 'in', 'gnd', 1e3),
        source('G2', 'b', 'gnd', 10),
        resistor('R2', 'b', 'c', 1e3),
        voltageSwitch('S1', 'c', 'gnd', ['in', 'gnd'], 3, 1),
      ),
      'G1',
      0,
      5,
      6,
    );
    const potential = quantity(solution, 'c');
    expect(valueAt(potential, 2.99)).toBeCloseTo(10, 9);
    expect(valueAt(potential, 3.01)).toBeCloseTo(0, 9);
  });
});
