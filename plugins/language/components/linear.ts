/** Resistors, capacitors and inductors: one value, stated in place or by a part. */
import type { Component } from '../../../solver/circuit.ts';
import * as dues from '../dues.ts';
import { type Field, readFields, readScalar } from '../fields.ts';
import { report } from '../passage.ts';
import type { Due, Scalar } from '../scalar.ts';
import type { ComponentInput, ComponentOutput, Datum } from './context.ts';
import { partFor } from './part-value.ts';

type LinearKind = 'resistor' | 'capacitor' | 'inductor';

export const LINEAR_VALUES: { readonly [kind in LinearKind]: Due } = {
  resistor: { ...dues.RESISTANCE, example: '47 Ω', tolerance: true },
  capacitor: { ...dues.CAPACITANCE, tolerance: true },
  inductor: { ...dues.INDUCTANCE, tolerance: true },
};

/** Keys beside the kind and the nodes. */
export const LINEAR_FIELDS: readonly Field[] = [
  {
    key: 'temperature_coefficient',
    doc: 'relative change of the value per kelvin away from 25 °C',
    takes: { form: 'quantity', due: dues.PER_KELVIN },
  },
];

/**
 * `R1: { resistor: 47 Ω ±5 %, nodes: [line, a] }`. The value is above zero; a `temperature_coefficient: 100 ppm/K` moves
 * it away from 25 °C.
 */
export function readLinear(input: ComponentInput, kind: LinearKind): ComponentOutput | undefined {
  const { designator, entry, nodes } = input;
  const due = LINEAR_VALUES[kind];
  const part = partFor(input, due);
  if (part === 'unknown') return undefined;

  let scalar: Scalar | undefined;
  if (part === undefined) scalar = readScalar(entry.value, due, 'positive');
  else if (part.value) scalar = readScalar(part.value, due, 'positive');
  else {
    report(entry.value.passage, entry.value.place, {
      message: `the part \`${part.name}\` states no \`value\``,
      expected: `\`value: ${due.example}\` in its file`,
    });
  }
  const coefficient = readCoefficient(input);
  if (!scalar || coefficient === 'wrong') return undefined;

  const common = { designator, nodes, ...(coefficient === undefined ? {} : { temperatureCoefficient: coefficient }) };
  const { value } = scalar;
  const component: Component =
    kind === 'resistor'
      ? { kind, resistance: value, ...common }
      : kind === 'capacitor'
        ? { kind, capacitance: value, ...common }
        : { kind, inductance: value, ...common };
  const data = new Map<string, Datum>(part?.data ?? []);
  data.set('value', { value, dimension: due.dimension, text: scalar.text });
  return {
    component,
    value: scalar.text,
    ...(scalar.tolerance ? { tolerance: scalar.tolerance } : {}),
    ...(part ? { part: part.name } : {}),
    data,
  };
}

function readCoefficient(input: ComponentInput): number | undefined | 'wrong' {
  const entries = input.mapping.entries.filter((entry) => LINEAR_FIELDS.some((field) => field.key === entry.key));
  const values = readFields({ ...input.mapping, entries }, LINEAR_FIELDS, `\`${input.designator}\``);
  return values.ok ? values.quantities.get('temperature_coefficient')?.value : 'wrong';
}
