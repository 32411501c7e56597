import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import { KINDS } from '../../../plugins/language/kinds.ts';
import type { CircuitBlock } from '../../../plugins/language/model.ts';
import { readNote } from '../../../plugins/language/read-note.ts';
import { formatProblem } from '../../../plugins/problems.ts';
import type { Component } from '../../../solver/circuit.ts';

const folder = fileURLToPath(new URL('./fixtures', import.meta.url));

/** The circuit of components that are written one a line. */
function circuit(...components: string[]): CircuitBlock {
  const text = ['```circuit', 'components:', ...components.map((line) => `  ${line}`), '```'].join('\n');
  const { blocks, problems } = readNote(text, { file: 'note.md', projectRoot: folder, partsFolder: `${folder}/parts` });
  if (problems.length > 0) throw new Error(problems.map(formatProblem).join('\n'));
  return blocks[0] as CircuitBlock;
}

/** One component between `a` and `gnd`, beside a resistor. */
function component(value: string): Component {
  return circuit(`X1: { ${value}, nodes: [a, gnd] }`, 'R99: { resistor: 1 Ω, nodes: [a, gnd] }').circuit.components[0]!;
}

function wave(value: string) {
  const read = component(`source: ${value}`);
  return read.kind === 'source' ? read.wave : undefined;
}

describe('the table of kinds', () => {
  test.each(KINDS.map(({ kind, example }) => [kind, example]))('the example of %s is right', (kind, example) => {
    // Whatever nodes and parts the example has are made whole by resistors from each node to the reference.
    const nodes = [
      ...new Set(
        [...example.matchAll(/\b(?:nodes|sensing|control): \[(\w+), (\w+)\]/g)].flatMap((match) => [
          match[1]!,
          match[2]!,
        ]),
      ),
    ];
    const fillers = nodes
      .filter((node) => node !== 'gnd')
      .map((node, index) => `R${90 + index}: { resistor: 1 Ω, nodes: [${node}, gnd] }`);
    expect(circuit(example, ...fillers).circuit.components[0]!.kind).toBe(kind);
  });
});

describe('values', () => {
  test('in SI, with tolerance, temperature coefficient and what the author wrote', () => {
    const { circuit: read, components } = circuit(
      'G1: { source: 5 V ±2 %, nodes: [a, gnd] }',
      'R1: { resistor: 4k7J, nodes: [a, b], temperature_coefficient: 100 ppm/K }',
      'C1: { capacitor: film-1u-63v, nodes: [b, gnd] }',
      'L1: { inductor: 10 µH, nodes: [b, gnd] }',
    );
    expect(read.components).toEqual([
      { kind: 'source', designator: 'G1', nodes: ['a', 'gnd'], wave: { shape: 'constant', value: 5 } },
      { kind: 'resistor', designator: 'R1', nodes: ['a', 'b'], resistance: 4700, temperatureCoefficient: 1e-4 },
      { kind: 'capacitor', designator: 'C1', nodes: ['b', 'gnd'], capacitance: 1e-6 },
      { kind: 'inductor', designator: 'L1', nodes: ['b', 'gnd'], inductance: 1e-5 },
    ]);
    expect(read.temperature).toBe(298.15);
    expect(components.map(({ value, part, tolerance }) => ({ value, part, tolerance }))).toEqual([
      { value: '5 V ±2 %', tolerance: { plus: 0.02, minus: -0.02 } },
      { value: '4k7J', tolerance: { plus: 0.05, minus: -0.05 } },
      { value: '1 µF ±10 %', part: 'film-1u-63v', tolerance: { plus: 0.1, minus: -0.1 } },
      { value: '10 µH' },
    ]);
    expect(components[2]!.data).toMatchObject({
      value: { value: 1e-6 },
      'rating.voltage': { value: 63, text: '63 V' },
    });
    expect(components[1]!.place).toEqual({ line: 4, column: 3, length: 2 });
  });
});

describe('waves', () => {
  test.each([
    [
      '{ sine: { rms: 10 V, frequency: 50 Hz, phase: 90°, offset: -1 V, delay: 1 ms } }',
      { shape: 'sine', peak: 10 * Math.SQRT2, frequency: 50, phase: Math.PI / 2, offset: -1, delay: 0.001 },
    ],
    [
      '{ sine: { peak: 34 V, frequency: 50 Hz } }',
      { shape: 'sine', peak: 34, frequency: 50, phase: 0, offset: 0, delay: 0 },
    ],
    [
      '{ triangle: { low: -1 V, high: 1 V, frequency: 1 kHz } }',
      { shape: 'triangle', low: -1, high: 1, frequency: 1000, delay: 0 },
    ],
    [
      '{ ramp: { low: 0 V, high: 10 V, frequency: 0.25 Hz } }',
      { shape: 'ramp', low: 0, high: 10, frequency: 0.25, fall: 0.01, delay: 0 },
    ],
    [
      '{ pulse: { low: 0 V, high: 5 V, width: 1 ms } }',
      { shape: 'pulse', low: 0, high: 5, frequency: 0, width: 0.001, rise: 0, fall: 0, delay: 0 },
    ],
    [
      '{ points: [[0 s, 0 V], [1 ms, 5 V], [1 ms, 0 V]], repeat: true }',
      { shape: 'points', times: [0, 0.001, 0.001], values: [0, 5, 0], repeat: true },
    ],
    [
      '{ csv: { file: ramp.csv, value: volts } }',
      { shape: 'points', times: [0, 0.5, 1], values: [0, 10, 0], repeat: false },
    ],
    [
      '{ sum: [5 V, { sine: { peak: 1 V, frequency: 1 kHz } }] }',
      {
        shape: 'sum',
        waves: [
          { shape: 'constant', value: 5 },
          { shape: 'sine', peak: 1, frequency: 1000, phase: 0, offset: 0, delay: 0 },
        ],
      },
    ],
  ])('%s', (text, expected) => {
    expect(wave(text)).toEqual(expected);
  });

  test('a pulse may fill its period', () => {
    expect(
      wave('{ pulse: { low: 0 V, high: 1 V, frequency: 10 Hz, width: 80 ms, rise: 10 ms, fall: 10 ms } }'),
    ).toBeDefined();
  });

  test('the input of a frequency response', () => {
    expect(component('source: 0 V, small_signal: 1 V')).toMatchObject({ smallSignal: { amplitude: 1, phase: 0 } });
    expect(component('source: 0 V, small_signal: { amplitude: 2 V, phase: 180° }')).toMatchObject({
      smallSignal: { amplitude: 2, phase: Math.PI },
    });
  });
});

describe('controlled sources', () => {
  test.each([
    ['100', '[a, gnd]', 'voltage', 100],
    ['5 mA/V', '[a, gnd]', 'current', 0.005],
    ['20 mS', '[a, gnd]', 'current', 0.02],
    ['10 V/A', 'R1', 'voltage', 10],
    ['20', 'R1', 'current', 20],
    ['-1 kΩ', 'R1', 'voltage', -1000],
  ])('a gain of %s from %s gives a %s', (gain, sensing, output, value) => {
    const read = circuit(
      'G1: { source: 1 V, nodes: [a, gnd] }',
      'R1: { resistor: 1 Ω, nodes: [a, gnd] }',
      `E1: { controlled-source: { gain: ${gain}, sensing: ${sensing} }, nodes: [b, gnd] }`,
      'R2: { resistor: 1 Ω, nodes: [b, gnd] }',
    ).circuit.components[2]!;
    expect(read).toMatchObject({ output, gain: value });
  });
});

describe('switches', () => {
  test.each([
    ['{ closes: [1 ms, 5 ms], opens: 3 ms }', { by: 'time', toggles: [0.001, 0.003, 0.005], startsClosed: false }],
    ['{ opens: 3 ms }', { by: 'time', toggles: [0.003], startsClosed: true }],
    ['{ starts: closed }', { by: 'time', toggles: [], startsClosed: true }],
    [
      '{ control: [a, gnd], closes_above: 2.5 V, opens_below: 1.5 V, starts: closed }',
      { by: 'voltage', nodes: ['a', 'gnd'], closesAbove: 2.5, opensBelow: 1.5, startsClosed: true },
    ],
  ])('%s', (text, drive) => {
    expect(component(`switch: ${text}`)).toMatchObject({ drive, onResistance: 0, offConductance: 0 });
  });

  test('with resistances', () => {
    expect(component('switch: { closes: 1 ms, on_resistance: 20 mΩ, off_resistance: 10 MΩ }')).toMatchObject({
      onResistance: 0.02,
      offConductance: 1e-7,
    });
  });
});

describe('diodes', () => {
  const law = (value: string) => {
    const read = component(value);
    return 'law' in read ? read.law : undefined;
  };

  test('an exponential law with its defaults', () => {
    expect(law('diode: { law: exponential, saturation_current: 1 fA }')).toEqual({
      law: 'exponential',
      saturationCurrent: 1e-15,
      slope: { ideality: 1 },
      seriesResistance: 0,
      at: 298.15,
      temperature: { energyGap: 1.12 },
    });
  });

  test('an LED drifts by its forward voltage unless a gap is stated', () => {
    expect(law('led: { law: exponential, saturation_current: 1 fA, slope_voltage: 45 mV }')).toMatchObject({
      slope: { voltage: 0.045 },
      temperature: { forwardVoltage: -0.002 },
    });
    const gap = law('led: { law: exponential, saturation_current: 1 fA, energy_gap: 2.2 eV }');
    expect(gap?.law === 'exponential' && 'energyGap' in gap.temperature && gap.temperature.energyGap).toBeCloseTo(
      2.2,
      12,
    );
    expect(law('led: green-3mm')).toMatchObject({ saturationCurrent: 1e-20, temperature: { forwardVoltage: -0.0018 } });
  });

  test('a threshold law', () => {
    expect(law('led: { law: threshold, forward_voltage: 2.1 V, temperature: { forward_voltage: -2 mV/K } }')).toEqual({
      law: 'threshold',
      forwardVoltage: 2.1,
      onResistance: 0,
      temperatureCoefficient: -0.002,
      at: 298.15,
    });
  });

  test('breakdown', () => {
    expect(law('zener: 5.6 V ±5 %')).toMatchObject({
      breakdown: { voltage: 5.6, current: 0.005, resistance: 0, slopeVoltage: 0.0257 },
    });
    expect(
      law(
        'zener: { law: exponential, saturation_current: 1 fA, breakdown_voltage: 5.6 V, breakdown_resistance: 10 Ω, temperature: { breakdown_voltage: 2 mV/K } }',
      ),
    ).toMatchObject({
      temperature: { energyGap: 1.12 },
      breakdown: { voltage: 5.6, current: 0.005, resistance: 10, temperatureCoefficient: 0.002 },
    });
    expect(law('zener: { law: threshold, forward_voltage: 0.7 V, breakdown_voltage: 5.6 V }')).toMatchObject({
      breakdown: { voltage: 5.6, resistance: 0 },
    });
  });
});

test('a curve', () => {
  expect(component('curve: [[-1 V, 0 mA], [0 V, 0 mA], [2 V, 10 mA]]')).toMatchObject({
    voltages: [-1, 0, 2],
    currents: [0, 0, 0.01],
  });
});
