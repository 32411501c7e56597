/** Short forms for the circuits of the tests, and for reading their solutions. */
import { readFileSync } from 'node:fs';
import { expect } from 'vitest';
import type { Audit, Solution, StartingState, TimeResponseRequest } from '../../solver/analysis.ts';
import type {
  Capacitor,
  Circuit,
  Component,
  ControlledSource,
  CurrentSource,
  Curve,
  Diode,
  ExponentialLaw,
  Inductor,
  Resistor,
  Switch,
  ThresholdLaw,
  VoltageSource,
} from '../../solver/circuit.ts';
import { readNumber, readQuantity } from '../../solver/quantities.ts';
import { solve } from '../../solver/solve.ts';
import { type Side, valueAt } from '../../solver/waveform/value-at.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import type { Wave } from '../../solver/waves.ts';

export function circuit(...components: Component[]): Circuit {
  return { name: 'test', components, temperature: 298.15 };
}

export const resistor = (designator: string, a: string, b: string, resistance: number): Resistor => ({
  kind: 'resistor',
  designator,
  nodes: [a, b],
  resistance,
});

export const capacitor = (designator: string, a: string, b: string, capacitance: number): Capacitor => ({
  kind: 'capacitor',
  designator,
  nodes: [a, b],
  capacitance,
});

export const inductor = (designator: string, a: string, b: string, inductance: number): Inductor => ({
  kind: 'inductor',
  designator,
  nodes: [a, b],
  inductance,
});

export const constant = (value: number): Wave => ({ shape: 'constant', value });

export const sine = (peak: number, frequency: number, more: { offset?: number; phase?: number; delay?: number } = {}) =>
  ({ shape: 'sine', peak, frequency, offset: 0, phase: 0, delay: 0, ...more }) as const;

export const triangle = (low: number, high: number, frequency: number, delay = 0): Wave => ({
  shape: 'triangle',
  low,
  high,
  frequency,
  delay,
});

export const ramp = (low: number, high: number, frequency: number, fall: number, delay = 0): Wave => ({
  shape: 'ramp',
  low,
  high,
  frequency,
  fall,
  delay,
});

/** A jump from `low` to `high` at `delay`, which lasts. */
export const jump = (low: number, high: number, delay: number): Wave => ({
  shape: 'points',
  times: [delay, delay],
  values: [low, high],
  repeat: false,
});

export const source = (designator: string, a: string, b: string, wave: Wave | number): VoltageSource => ({
  kind: 'source',
  designator,
  nodes: [a, b],
  wave: typeof wave === 'number' ? constant(wave) : wave,
});

export const currentSource = (designator: string, a: string, b: string, wave: Wave | number): CurrentSource => ({
  kind: 'current-source',
  designator,
  nodes: [a, b],
  wave: typeof wave === 'number' ? constant(wave) : wave,
});

export const controlled = (
  designator: string,
  a: string,
  b: string,
  output: ControlledSource['output'],
  control: readonly [string, string] | string,
  gain: number,
): ControlledSource => ({
  kind: 'controlled-source',
  designator,
  nodes: [a, b],
  output,
  control:
    typeof control === 'string' ? { quantity: 'current', component: control } : { quantity: 'voltage', nodes: control },
  gain,
});

/** k · 300 K / e in volt, from the SI's constants: what the reference files use. */
export const VT_300 = (1.380649e-23 * 300) / 1.602176634e-19;

export function exponential(
  saturationCurrent: number,
  slopeVoltage: number,
  seriesResistance = 0,
  more: Partial<ExponentialLaw> = {},
): ExponentialLaw {
  return {
    law: 'exponential',
    saturationCurrent,
    slope: { voltage: slopeVoltage },
    seriesResistance,
    at: 298.15,
    temperature: { forwardVoltage: 0 },
    ...more,
  };
}

export const threshold = (
  forwardVoltage: number,
  onResistance = 0,
  breakdown?: ThresholdLaw['breakdown'],
): ThresholdLaw => ({
  law: 'threshold',
  forwardVoltage,
  onResistance,
  ...(breakdown ? { breakdown } : {}),
});

export const diode = (designator: string, anode: string, cathode: string, law: Diode['law']): Diode => ({
  kind: 'diode',
  designator,
  nodes: [anode, cathode],
  law,
});

export const curve = (
  designator: string,
  a: string,
  b: string,
  voltages: readonly number[],
  currents: readonly number[],
): Curve => ({ kind: 'curve', designator, nodes: [a, b], voltages, currents });

export const timeSwitch = (
  designator: string,
  a: string,
  b: string,
  toggles: readonly number[],
  startsClosed = false,
  more: Partial<Switch> = {},
): Switch => ({
  kind: 'switch',
  designator,
  nodes: [a, b],
  drive: { by: 'time', toggles, startsClosed },
  onResistance: 0,
  offConductance: 0,
  ...more,
});

export const voltageSwitch = (
  designator: string,
  a: string,
  b: string,
  control: readonly [string, string],
  closesAbove: number,
  opensBelow: number,
  more: Partial<Switch> = {},
): Switch => ({
  kind: 'switch',
  designator,
  nodes: [a, b],
  drive: { by: 'voltage', nodes: control, closesAbove, opensBelow, startsClosed: false },
  onResistance: 0,
  offConductance: 0,
  ...more,
});

export function operatingPoint(of: Circuit): Solution {
  return solve(of, { find: 'operating point' }, 1e-4);
}

export function timeResponse(
  of: Circuit,
  until: number,
  accuracy = 1e-4,
  start: StartingState = 'operating point',
  from = 0,
): Solution {
  const request: TimeResponseRequest = { find: 'time response', until, from, start };
  return solve(of, request, accuracy);
}

/** `lamp` is a node's potential; `C1.v`, `C1.i` and so on are a component's. */
export function quantity(solution: Solution, name: string): Waveform {
  const [designator, property] = name.split('.');
  return property === undefined
    ? readQuantity(solution, { node: name })
    : readQuantity(solution, { designator: designator!, property: property as 'v' });
}

/** The quantity of an operating point. */
export function number(solution: Solution, name: string): number {
  const [designator, property] = name.split('.');
  return property === undefined
    ? readNumber(solution, { node: name })
    : readNumber(solution, { designator: designator!, property: property as 'v' });
}

export function at(solution: Solution, name: string, t: number, side: Side = 'left'): number {
  return valueAt(quantity(solution, name), t, side);
}

/** The part of the waveform between two times that lie on its grid. */
export function between({ grid, values }: Waveform, from: number, to: number): Waveform {
  const near = (t: number): number => {
    let best = 0;
    for (let k = 0; k < grid.length; k++) if (Math.abs(grid[k]! - t) < Math.abs(grid[best]! - t)) best = k;
    expect(Math.abs(grid[best]! - t), `a step ends at ${t} s`).toBeLessThan(1e-9 * Math.abs(to));
    return best;
  };
  const [first, last] = [near(from), near(to)];
  return { grid: grid.slice(first, last + 1), values: values.slice(4 * first, 4 * last) };
}

/** Relative difference; absolute where the reference is 0. */
export function relativeError(found: number, reference: number): number {
  return Math.abs(found - reference) / (Math.abs(reference) || 1);
}

export function expectNear(found: number, reference: number, relative: number, what = ''): void {
  expect(relativeError(found, reference), `${what || 'value'} ${found}, reference ${reference}`).toBeLessThanOrEqual(
    relative,
  );
}

/** Kirchhoff's current law and Tellegen's theorem hold, and nothing is undefined. */
export function expectAudit(solution: Solution, bound = 1e-6): void {
  const { kirchhoff, tellegen }: Audit = solution.audit;
  expect(kirchhoff, 'Kirchhoff residual').toBeLessThan(bound);
  expect(tellegen, 'Tellegen residual').toBeLessThan(bound);
  expect(solution.unknowns.every(Number.isFinite), 'every unknown is a number').toBe(true);
}

/** A file of test/references. */
// biome-ignore lint/suspicious/noExplicitAny: each file has a layout of its own
export function reference(name: string): any {
  return JSON.parse(readFileSync(new URL(`../references/${name}.json`, import.meta.url), 'utf8'));
}
