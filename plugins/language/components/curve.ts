/** `X1: { curve: [[-1 V, 0 mA], [0 V, 0 mA], [2 V, 10 mA]], nodes: [a, gnd] }`: a two-terminal given by a table. */
import * as dues from '../dues.ts';
import { type Field, readFields } from '../fields.ts';
import { report } from '../passage.ts';
import type { ComponentInput, ComponentOutput } from './context.ts';
import { readPairs } from './waves.ts';

export const CURVE_FIELDS: readonly Field[] = [
  {
    key: 'points',
    doc: 'pairs of voltage and current, voltages ascending',
    takes: { form: 'structure', words: 'e.g. `[[0 V, 0 mA], [2 V, 10 mA]]`' },
    required: true,
  },
];

const EXAMPLE = 'curve: [[0 V, 0 mA], [2 V, 10 mA]]';

export function readCurve(input: ComponentInput): ComponentOutput | undefined {
  const { designator, entry, nodes } = input;
  let node = entry.value;
  if (node.type === 'mapping') {
    const values = readFields(node, CURVE_FIELDS, 'a curve', entry.keyNode.place);
    const points = values.entries.get('points');
    if (!values.ok || !points) return undefined;
    node = points.value;
  }
  const pairs = readPairs(node, { ...dues.VOLTAGE }, dues.CURRENT, EXAMPLE);
  if (!pairs) return undefined;
  const { firsts: voltages, seconds: currents, nodes: written } = pairs;
  if (voltages.length < 2) {
    report(node.passage, node.place, {
      message: 'a curve has two points at least',
      expected: 'more points',
      example: EXAMPLE,
    });
    return undefined;
  }
  const wrong = voltages.findIndex((voltage, index) => index > 0 && !(voltage > voltages[index - 1]!));
  if (wrong !== -1) {
    const pair = written[wrong]!;
    report(pair.passage, pair.place, {
      message: 'this voltage is not above the one before it',
      expected: 'voltages in ascending order, each once',
    });
    return undefined;
  }
  return {
    component: { kind: 'curve', designator, nodes, voltages, currents },
    value: `${voltages.length} points`,
  };
}
