/**
 * Controlled sources, of four kinds that the gain's dimension tells apart:
 *
 *     E1: { controlled-source: { gain: 100, sensing: [p, n] }, nodes: [out, gnd] }        voltage from a voltage
 *     E2: { controlled-source: { gain: 5 mA/V, sensing: [p, n] }, nodes: [out, gnd] }     current from a voltage
 *     E3: { controlled-source: { gain: 10 V/A, sensing: R1 }, nodes: [out, gnd] }         voltage from a current
 *     E4: { controlled-source: { gain: 20, sensing: R1 }, nodes: [out, gnd] }             current from a current
 *
 * `sensing` two nodes takes the first less the second; sensing a component takes the current into its first node. An
 * output current flows into the source's own first node.
 */
import type { ControlledSource } from '../../../solver/circuit.ts';
import {
  CONDUCTANCE,
  DIMENSIONLESS,
  type Dimension,
  equal,
  isDimensionless,
  nameOf,
  RESISTANCE,
} from '../dimensions.ts';
import { type Field, readFields } from '../fields.ts';
import { checkName, readTwoNodes } from '../names.ts';
import { report } from '../passage.ts';
import { parseAnyScalar } from '../scalar.ts';
import type { ComponentInput, ComponentOutput } from './context.ts';

export const CONTROLLED_SOURCE_FIELDS: readonly Field[] = [
  {
    key: 'gain',
    doc: 'output over control: a number, a conductance or a resistance',
    takes: { form: 'structure', words: 'e.g. `100`, `5 mA/V` or `10 V/A`' },
    required: true,
  },
  {
    key: 'sensing',
    doc: 'what controls it: two nodes (their voltage) or a designator (its current)',
    takes: { form: 'structure', words: '`[p, n]`, or a designator' },
    required: true,
  },
];

const EXAMPLE = 'controlled-source: { gain: 100, sensing: [p, n] }';

export function readControlledSource(input: ComponentInput): ComponentOutput | undefined {
  const { designator, entry, nodes } = input;
  if (entry.value.type !== 'mapping') {
    report(entry.value.passage, entry.value.place, {
      message: 'a controlled source is not one value',
      expected: '`gain` and `sensing`',
      example: EXAMPLE,
    });
    return undefined;
  }
  const values = readFields(entry.value, CONTROLLED_SOURCE_FIELDS, 'a controlled source', entry.keyNode.place);
  const gainNode = values.entries.get('gain')?.value;
  const sensingNode = values.entries.get('sensing')?.value;
  if (!gainNode || !sensingNode) return undefined;

  let control: ControlledSource['control'] | undefined;
  let sensed = '';
  if (sensingNode.type === 'scalar') {
    const component = checkName(sensingNode, 'the component that is sensed');
    if (component !== undefined) control = { quantity: 'current', component };
    sensed = `the current of ${component}`;
  } else {
    const pair = readTwoNodes(sensingNode, 'sensing');
    if (pair) control = { quantity: 'voltage', nodes: [pair[0].name, pair[1].name] };
    sensed = `the voltage from ${pair?.[0].name} to ${pair?.[1].name}`;
  }

  const gainText = gainNode.type === 'scalar' ? gainNode.text.trim() : '';
  const gain = parseAnyScalar(gainText);
  if (!gain) {
    report(gainNode.passage, gainNode.place, {
      message: `\`${gainText}\` is not a gain`,
      expected: 'a number, with a unit where voltage and current differ',
      example: EXAMPLE,
    });
    return undefined;
  }
  if (!control || !values.ok) return undefined;
  const other: Dimension = control.quantity === 'voltage' ? CONDUCTANCE : RESISTANCE;
  if (!isDimensionless(gain.dimension) && !equal(gain.dimension, other)) {
    const units = control.quantity === 'voltage' ? '`5 mA/V` (a current)' : '`10 V/A` (a voltage)';
    const same = control.quantity === 'voltage' ? '`100` (a voltage)' : '`20` (a current)';
    report(gainNode.passage, gainNode.place, {
      message: `a gain from ${sensed} cannot be ${nameOf(gain.dimension)}`,
      expected: `${same} or ${units} as the gain`,
    });
    return undefined;
  }
  const sameQuantity = equal(gain.dimension, DIMENSIONLESS);
  const output = sameQuantity === (control.quantity === 'voltage') ? 'voltage' : 'current';
  return {
    component: { kind: 'controlled-source', designator, nodes, output, control, gain: gain.value },
    value: `${output}, ${gain.text} times ${sensed}`,
    data: new Map([['value', { value: gain.value, dimension: gain.dimension, text: gain.text }]]),
  };
}
