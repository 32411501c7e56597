/** The two-stage transistor amplifier of the test set for initial value problems (test/references/01), from diodes and controlled sources. */
import { describe, expect, test } from 'vitest';
import { peak } from '../../solver/waveform/extremes.ts';
import {
  at,
  capacitor,
  circuit,
  controlled,
  diode,
  expectAudit,
  exponential,
  quantity,
  reference,
  resistor,
  sine,
  source,
  timeResponse,
} from './circuits.ts';

const published: { end: number[]; until: number; course: Record<string, number[]> } =
  reference('01-transistor-amplifier');

const law = exponential(1e-6, 0.026);
const amplifier = circuit(
  source('G1', 'ub', 'gnd', 6),
  source('G2', 'in', 'gnd', sine(0.1, 100)),
  resistor('R0', 'in', 'n1', 1000),
  capacitor('C1', 'n1', 'n2', 1e-6),
  resistor('R1', 'n2', 'gnd', 9000),
  resistor('R2', 'ub', 'n2', 9000),
  diode('D1', 'n2', 'n3', law),
  controlled('F1', 'n4', 'n2', 'current', 'D1', 0.99),
  resistor('R3', 'n3', 'gnd', 9000),
  capacitor('C2', 'n3', 'gnd', 2e-6),
  resistor('R4', 'ub', 'n4', 9000),
  capacitor('C3', 'n4', 'n5', 3e-6),
  resistor('R5', 'n5', 'gnd', 9000),
  resistor('R6', 'ub', 'n5', 9000),
  diode('D2', 'n5', 'n6', law),
  controlled('F2', 'n7', 'n5', 'current', 'D2', 0.99),
  resistor('R7', 'n6', 'gnd', 9000),
  capacitor('C4', 'n6', 'gnd', 4e-6),
  resistor('R8', 'ub', 'n7', 9000),
  capacitor('C5', 'n7', 'n8', 5e-6),
  resistor('R9', 'n8', 'gnd', 9000),
);
const start = { C1: -3, C2: 3, C3: 3, C4: 3, C5: 6 };

/** Errors of single instants, relative to each node's largest potential. */
function errors(accuracy: number): { end: number; course: number } {
  const solution = timeResponse(amplifier, published.until, accuracy, start);
  const scales = published.end.map((_, k) => peak(quantity(solution, `n${k + 1}`)));
  let course = 0;
  for (const [t, row] of Object.entries(published.course))
    row.forEach((v, k) => {
      course = Math.max(course, Math.abs(at(solution, `n${k + 1}`, Number(t)) - v) / scales[k]!);
    });
  let end = 0;
  published.end.forEach((v, k) => {
    end = Math.max(end, Math.abs(at(solution, `n${k + 1}`, published.until) - v) / scales[k]!);
  });
  expectAudit(solution, Math.max(1e-6, 5 * accuracy));
  return { end, course };
}

describe('two-stage amplifier', () => {
  test.each([1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8])('accuracy %d', (accuracy) => {
    const { end, course } = errors(accuracy);
    expect(end, 'published end values').toBeLessThan(accuracy);
    expect(course, 'the course, recomputed').toBeLessThan(accuracy);
  });

  test('the source’s own start: node potentials follow from the stated capacitor voltages', () => {
    const solution = timeResponse(amplifier, 1e-4, 1e-6, start);
    // published start: 0, 3, 3, 6, 3, 3, 6, 0 V
    [0, 3, 3, 6, 3, 3, 6, 0].forEach((v, k) => {
      expect(Math.abs(at(solution, `n${k + 1}`, 0, 'right') - v)).toBeLessThan(1e-9);
    });
  });
});
