/**
 * The lamp circuit of the time-response benchmark: source, 10 Ω, capacitor, antiparallel pair of exponential LEDs (1e-18 A, 2 · 25.85 mV, 5 Ω each),
 * twenty periods from rest. Error: the greater relative error of the charges through the two LEDs in the last period.
 */
import { readFileSync } from 'node:fs';
import type { Circuit } from '../../solver/circuit.ts';
import { readQuantity } from '../../solver/quantities.ts';
import { solve } from '../../solver/solve.ts';
import { integral } from '../../solver/waveform/integrals.ts';
import type { Wave } from '../../solver/waves.ts';
import { REFERENCE_FILE } from './peers.ts';

export interface LampCase {
  readonly name: 'W1i' | 'W1ii' | 'W1iii';
  readonly wave: Wave;
  readonly capacitance: number;
  readonly period: number;
}

export const SATURATION_CURRENT = 1e-18;
export const SLOPE_VOLTAGE = 2 * 0.02585;
export const LED_RESISTANCE = 5;
export const SOURCE_RESISTANCE = 10;
export const PERIODS = 20;

export const LAMP_CASES: readonly LampCase[] = [
  {
    name: 'W1i',
    wave: { shape: 'sine', peak: 9, frequency: 50, offset: 0, phase: 0, delay: 0 },
    capacitance: 1e-6,
    period: 0.02,
  },
  {
    name: 'W1ii',
    wave: { shape: 'triangle', low: -9, high: 9, frequency: 50, delay: 0 },
    capacitance: 1e-6,
    period: 0.02,
  },
  {
    name: 'W1iii',
    wave: { shape: 'ramp', low: 0, high: 9, frequency: 0.4, fall: 0.02, delay: 0 },
    capacitance: 330e-6,
    period: 2.5,
  },
];

/** Charges by Radau IIA of order 5 at a relative tolerance of 1e-12 (`peers/radau.c`, `radau ref`). */
export function referenceCharges(name: string): [number, number] {
  const values = new Map(
    readFileSync(REFERENCE_FILE, 'utf8')
      .trim()
      .split('\n')
      .map((line) => line.split(' ') as [string, string]),
  );
  return [Number(values.get(`${name}.q0`)), Number(values.get(`${name}.q1`))];
}

export function lampCircuit({ wave, capacitance }: LampCase): Circuit {
  const law = {
    law: 'exponential',
    saturationCurrent: SATURATION_CURRENT,
    slope: { voltage: SLOPE_VOLTAGE },
    seriesResistance: LED_RESISTANCE,
    at: 298.15,
    temperature: { forwardVoltage: 0 },
  } as const;
  return {
    name: 'lamp',
    temperature: 298.15,
    components: [
      { kind: 'source', designator: 'G1', nodes: ['line', 'gnd'], wave },
      { kind: 'resistor', designator: 'R1', nodes: ['line', 'a'], resistance: SOURCE_RESISTANCE },
      { kind: 'capacitor', designator: 'C1', nodes: ['a', 'lamp'], capacitance },
      { kind: 'led', designator: 'D1', nodes: ['lamp', 'gnd'], law },
      { kind: 'led', designator: 'D2', nodes: ['gnd', 'lamp'], law },
    ],
  };
}

export interface LampOutcome {
  readonly charges: [number, number];
  readonly steps: number;
  readonly rejected: number;
  readonly newton: number;
}

/** The whole of what a note's analysis costs: equations built, solved, last period kept, audited, charges integrated. */
export function solveLamp(lamp: LampCase, accuracy: number): LampOutcome {
  const until = PERIODS * lamp.period;
  const solution = solve(
    lampCircuit(lamp),
    { find: 'time response', until, from: until - lamp.period, start: 'rest' },
    accuracy,
  );
  const charge = (designator: string): number => integral(readQuantity(solution, { designator, property: 'i' }));
  const { steps, rejectedSteps, newtonIterations } = solution.effort;
  return { charges: [charge('D1'), charge('D2')], steps, rejected: rejectedSteps, newton: newtonIterations };
}

export function chargeError(name: string, charges: readonly [number, number]): number {
  const reference = referenceCharges(name);
  return Math.max(Math.abs(charges[0] / reference[0] - 1), Math.abs(charges[1] / reference[1] - 1));
}
