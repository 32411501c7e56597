/** `vary: { C1: [470 nF, 1 µF] }`: values of components, one run for each. */
import type { Circuit, Component } from '../../solver/circuit.ts';
import { LINEAR_VALUES } from './components/linear.ts';
import * as dues from './dues.ts';
import { type FieldValues, readList, readScalar } from './fields.ts';
import type { Variation } from './model.ts';
import { reportNoSuch } from './no-such-component.ts';
import { report } from './passage.ts';
import type { Due } from './scalar.ts';
import type { YamlEntry, YamlNode } from './yaml-tree.ts';

/** Reads `vary`; none where it is left out, nothing where it has a problem. */
export function readVary(values: FieldValues, circuit: Circuit): Variation[] | undefined {
  const entry = values.entries.get('vary');
  if (!entry) return [];
  if (entry.value.type !== 'mapping') {
    report(entry.value.passage, entry.value.place, {
      message: '`vary` is not a mapping',
      expected: 'designators and lists of values',
      example: 'vary: { C1: [470 nF, 1 µF, 2.2 µF] }',
    });
    return undefined;
  }
  const variable = circuit.components.filter((component) => dueOf(component) !== undefined);
  const read = entry.value.entries.map((item) => {
    const component = variable.find((candidate) => candidate.designator === item.key);
    if (component) return readVariation(item, dueOf(component)!);
    reportNoSuch(item, circuit, variable, 'a component with one value');
    return undefined;
  });
  return read.includes(undefined) ? undefined : (read as Variation[]);
}

/** The quantity of a component's single value. */
function dueOf(component: Component): Due | undefined {
  if (component.kind === 'resistor' || component.kind === 'capacitor' || component.kind === 'inductor') {
    return { ...LINEAR_VALUES[component.kind], tolerance: false };
  }
  if (component.kind === 'source' && component.wave.shape === 'constant') return dues.VOLTAGE;
  if (component.kind === 'current-source' && component.wave.shape === 'constant') return dues.CURRENT;
  return undefined;
}

function readVariation(item: YamlEntry, due: Due): Variation | undefined {
  const positive = due.coded === undefined ? undefined : 'positive';
  const readOne = (node: YamlNode) => {
    const scalar = readScalar(node, due, positive, item.key);
    return scalar && { value: scalar.value, text: scalar.text };
  };
  const values = readList(item.value, readOne);
  if (!values) return undefined;
  if (values.length > 0) return { designator: item.key, values };
  report(item.value.passage, item.value.place, {
    message: `no value of \`${item.key}\` is listed`,
    expected: 'one value at least',
  });
  return undefined;
}
