/**
 * Diodes, LEDs and Zener diodes: a law given in place or by a part.
 *
 *     D1: { diode: { law: exponential, saturation_current: 1 fA, ideality: 1.8, series_resistance: 2 Ω }, nodes: [a, k] }
 *     D2: { led: { law: threshold, forward_voltage: 2.1 V, on_resistance: 0 Ω }, nodes: [a, k] }
 *     D3: { zener: 5.6 V, nodes: [k, a] }
 *
 * The exponential law moves with temperature by its `energy_gap` (1.12 eV, silicon, where nothing is said), an LED's by
 * -2 mV/K of forward voltage at every current (common practice, no source). A threshold law stays where it is unless
 * `temperature: { forward_voltage: … }` moves it.
 */
import { type Breakdown, type Diode, type DiodeLaw, REFERENCE_TEMPERATURE } from '../../../solver/circuit.ts';
import * as dues from '../dues.ts';
import { type FieldValues, readFields, readScalar } from '../fields.ts';
import { list } from '../nearest.ts';
import { report } from '../passage.ts';
import { parseUnit } from '../units.ts';
import { entryOf, type YamlEntry, type YamlMapping } from '../yaml-tree.ts';
import type { ComponentInput, ComponentOutput } from './context.ts';
import { EXPONENTIAL_FIELDS, LAW, TEMPERATURE_FIELDS, THRESHOLD_FIELDS } from './diode-fields.ts';
import { partFor } from './part-value.ts';

export type DiodeKind = Diode['kind'];

/** Common practice, no source: what a silicon junction's law takes where a Zener diode is given by its voltage alone. */
const ZENER_SATURATION_CURRENT = 10e-15;
/** Common practice, no source: the currents (ampere) at which a breakdown voltage is stated. */
const ZENER_TEST_CURRENT = 5e-3;
const BREAKDOWN_TEST_CURRENT = 100e-6;
/** kT/q near 25 °C, in volt. */
const THERMAL_VOLTAGE = 25.7e-3;
const LED_DRIFT = -2e-3;
const SILICON_GAP = 1.12;
const ELECTRONVOLT = parseUnit('eV')!.factor;

const EXAMPLES: { readonly [kind in DiodeKind]: string } = {
  diode: 'diode: { law: exponential, saturation_current: 1 fA, ideality: 1.8 }',
  led: 'led: { law: threshold, forward_voltage: 2.1 V }',
  zener: 'zener: 5.6 V',
};

export function readDiode(input: ComponentInput, kind: DiodeKind): ComponentOutput | undefined {
  const { designator, entry, nodes } = input;
  const part = partFor(input, kind === 'zener' ? dues.VOLTAGE : undefined);
  if (part === 'unknown') return undefined;
  if (part) {
    if (!part.model) {
      report(entry.value.passage, entry.value.place, {
        message: `the part \`${part.name}\` has no \`model\``,
        expected: 'a `model` in its file, or the law in place',
        example: EXAMPLES[kind],
      });
      return undefined;
    }
    const law = readLaw(part.model, kind, `the model of \`${part.name}\``, entry, part.temperature);
    return law && { component: { kind, designator, nodes, law }, value: part.name, part: part.name, data: part.data };
  }
  const { value } = entry;
  if (value.type === 'scalar' && kind === 'zener') return readPlainZener(input);
  if (value.type !== 'mapping') {
    const written = value.type === 'scalar' ? `\`${value.text.trim()}\`` : 'a list';
    report(value.passage, value.place, {
      message: `${written} stands where a model or a part of \`${designator}\` is due`,
      expected: 'the name of a part, or a mapping with a `law`',
      example: EXAMPLES[kind],
    });
    return undefined;
  }
  const law = readLaw(value, kind, `the model of \`${designator}\``, entry);
  return law && { component: { kind, designator, nodes, law }, value: describe(value) };
}

function readPlainZener(input: ComponentInput): ComponentOutput | undefined {
  const { designator, entry, nodes } = input;
  const voltage = readScalar(entry.value, { ...dues.VOLTAGE, example: '5.6 V', tolerance: true }, 'positive');
  if (!voltage) return undefined;
  const law: DiodeLaw = {
    law: 'exponential',
    saturationCurrent: ZENER_SATURATION_CURRENT,
    slope: { ideality: 1 },
    seriesResistance: 0,
    at: REFERENCE_TEMPERATURE,
    temperature: { energyGap: SILICON_GAP },
    breakdown: { voltage: voltage.value, current: ZENER_TEST_CURRENT, resistance: 0, slopeVoltage: THERMAL_VOLTAGE },
  };
  return {
    component: { kind: 'zener', designator, nodes, law },
    value: voltage.text,
    ...(voltage.tolerance ? { tolerance: voltage.tolerance } : {}),
    data: new Map([['value', { value: voltage.value, dimension: dues.VOLTAGE.dimension, text: voltage.text }]]),
  };
}

/** Reads a model; a part states its `temperature` beside the model. */
function readLaw(
  model: YamlMapping,
  kind: DiodeKind,
  owner: string,
  entry: YamlEntry,
  partTemperature?: YamlMapping,
): DiodeLaw | undefined {
  const place = model.passage === entry.keyNode.passage ? entry.keyNode.place : model.place;
  const points = entryOf(model, 'points');
  if (points) {
    report(model.passage, points.keyNode.place, {
      message: `${owner} is given by points of a data sheet, and this version does not fit a law to them yet`,
      expected: `the parameters of a law: ${list(['saturation_current', 'ideality', 'series_resistance'])}`,
      example: EXAMPLES.diode,
    });
    return undefined;
  }
  const lawText = entryOf(model, 'law')?.value;
  const threshold = lawText?.type === 'scalar' && lawText.text.trim() === 'threshold';
  const known = lawText?.type === 'scalar' && ['threshold', 'exponential'].includes(lawText.text.trim());
  // Where the law itself is wrong, complaints about the other keys would be guesses.
  const readable = known ? model : { ...model, entries: model.entries.filter((item) => item.key === 'law') };
  const fields = threshold ? THRESHOLD_FIELDS : EXPONENTIAL_FIELDS;
  const values = readFields(readable, known ? fields : [LAW], owner, place);
  if (!known) return undefined;

  const temperatureEntry = values.entries.get('temperature');
  const temperatureMapping = temperatureEntry?.value ?? partTemperature;
  const drifts = readDrifts(temperatureMapping);
  if (!values.ok || drifts === 'wrong') return undefined;
  const wrong = (key: string, message: string, expected: string) => {
    report(model.passage, values.entries.get(key)?.value.place ?? place, { message, expected });
    return undefined;
  };
  if (kind === 'zener' && !values.entries.has('breakdown_voltage')) {
    return wrong(
      'law',
      `${owner} has no \`breakdown_voltage\`, and a Zener diode is for it`,
      '`breakdown_voltage: 5.6 V`',
    );
  }
  if (threshold) return thresholdLaw(values, drifts);

  if (values.entries.has('ideality') && values.entries.has('slope_voltage')) {
    return wrong('slope_voltage', '`ideality` and `slope_voltage` are both stated', 'one of the two');
  }
  if (values.entries.has('energy_gap') && drifts.forward !== undefined) {
    return wrong('energy_gap', '`energy_gap` and a drift of the forward voltage are both stated', 'one of the two');
  }
  return exponentialLaw(values, drifts, kind);
}

interface Drifts {
  readonly forward?: number;
  readonly breakdown?: number;
}

function readDrifts(node: YamlMapping | YamlEntry['value'] | undefined): Drifts | 'wrong' {
  if (node === undefined) return {};
  if (node.type !== 'mapping') {
    report(node.passage, node.place, {
      message: '`temperature` is not a mapping',
      expected: 'what drifts, and by how much',
      example: 'temperature: { forward_voltage: -2 mV/K }',
    });
    return 'wrong';
  }
  const values = readFields(node, TEMPERATURE_FIELDS, '`temperature`');
  if (!values.ok) return 'wrong';
  const forward = values.quantities.get('forward_voltage')?.value;
  const breakdown = values.quantities.get('breakdown_voltage')?.value;
  return { ...(forward === undefined ? {} : { forward }), ...(breakdown === undefined ? {} : { breakdown }) };
}

function thresholdLaw(values: FieldValues, drifts: Drifts): DiodeLaw {
  const number = (key: string) => values.quantities.get(key)?.value;
  const breakdownVoltage = number('breakdown_voltage');
  return {
    law: 'threshold',
    forwardVoltage: number('forward_voltage')!,
    onResistance: number('on_resistance')!,
    ...(drifts.forward === undefined ? {} : { temperatureCoefficient: drifts.forward }),
    at: number('at')!,
    ...(breakdownVoltage === undefined
      ? {}
      : { breakdown: { voltage: breakdownVoltage, resistance: number('breakdown_resistance')! } }),
  };
}

function exponentialLaw(values: FieldValues, drifts: Drifts, kind: DiodeKind): DiodeLaw {
  const number = (key: string) => values.quantities.get(key)?.value;
  const slopeVoltage = number('slope_voltage');
  const gap = number('energy_gap');
  const forward = drifts.forward ?? (kind === 'led' && gap === undefined ? LED_DRIFT : undefined);
  const breakdown = breakdownOf(values, drifts, kind);
  return {
    law: 'exponential',
    saturationCurrent: number('saturation_current')!,
    slope: slopeVoltage === undefined ? { ideality: number('ideality') ?? 1 } : { voltage: slopeVoltage },
    seriesResistance: number('series_resistance')!,
    at: number('at')!,
    temperature:
      forward === undefined
        ? { energyGap: gap === undefined ? SILICON_GAP : gap / ELECTRONVOLT }
        : { forwardVoltage: forward },
    ...(breakdown ? { breakdown } : {}),
  };
}

function breakdownOf(values: FieldValues, drifts: Drifts, kind: DiodeKind): Breakdown | undefined {
  const number = (key: string) => values.quantities.get(key)?.value;
  const voltage = number('breakdown_voltage');
  if (voltage === undefined) return undefined;
  return {
    voltage,
    current: number('breakdown_current') ?? (kind === 'zener' ? ZENER_TEST_CURRENT : BREAKDOWN_TEST_CURRENT),
    resistance: number('breakdown_resistance')!,
    slopeVoltage: number('breakdown_slope_voltage')!,
    ...(drifts.breakdown === undefined ? {} : { temperatureCoefficient: drifts.breakdown }),
  };
}

/** For the component table: the law and its parameters as written. */
function describe(model: YamlMapping): string {
  const said = model.entries.flatMap(({ key, value }) => {
    if (value.type !== 'scalar') return [];
    return [key === 'law' ? value.text.trim() : `${key.replaceAll('_', ' ')} ${value.text.trim()}`];
  });
  return said.join(', ');
}
