/**
 * Switches, driven by a list of times or by a voltage with hysteresis:
 *
 *     S1: { switch: { closes: [1 ms, 5 ms], opens: [3 ms] }, nodes: [a, b] }
 *     S2: { switch: { control: [p, n], closes_above: 2.5 V, opens_below: 1.5 V }, nodes: [a, b] }
 *
 * Closings and openings alternate. `starts` is `closed` where the first event is an opening, else `open`, unless stated.
 * The contact is ideal unless `on_resistance` says otherwise, the gap unless `off_resistance` does.
 */
import type { Switch } from '../../../solver/circuit.ts';
import * as dues from '../dues.ts';
import { type Field, type FieldValues, readFields, readList, readScalar } from '../fields.ts';
import { readTwoNodes } from '../names.ts';
import { report } from '../passage.ts';
import { entryOf, type YamlMapping, type YamlNode } from '../yaml-tree.ts';
import type { ComponentInput, ComponentOutput } from './context.ts';

const COMMON_FIELDS: readonly Field[] = [
  { key: 'starts', doc: 'the state it starts in', takes: { form: 'choice', choices: ['open', 'closed'] } },
  {
    key: 'on_resistance',
    doc: 'resistance of the closed contact',
    takes: { form: 'quantity', due: dues.RESISTANCE, range: 'zero or more' },
    default: '0 Ω',
  },
  {
    key: 'off_resistance',
    doc: 'resistance of the open contact; left out: none flows',
    takes: { form: 'quantity', due: { ...dues.RESISTANCE, example: '10 MΩ' }, range: 'positive' },
  },
];

const TIMES = { form: 'structure', words: 'a list of times, e.g. `[1 ms, 5 ms]`' } as const;

export const TIMED_SWITCH_FIELDS: readonly Field[] = [
  { key: 'closes', doc: 'the times at which it closes', takes: TIMES },
  { key: 'opens', doc: 'the times at which it opens', takes: TIMES },
  ...COMMON_FIELDS,
];

export const DRIVEN_SWITCH_FIELDS: readonly Field[] = [
  {
    key: 'control',
    doc: 'the two nodes whose voltage drives it',
    takes: { form: 'structure', words: 'two nodes, e.g. `[p, n]`' },
    required: true,
  },
  {
    key: 'closes_above',
    doc: 'the control voltage above which it closes',
    takes: { form: 'quantity', due: { ...dues.VOLTAGE, example: '2.5 V' } },
    required: true,
  },
  {
    key: 'opens_below',
    doc: 'the control voltage below which it opens; not above `closes_above`',
    takes: { form: 'quantity', due: { ...dues.VOLTAGE, example: '1.5 V' } },
    required: true,
  },
  ...COMMON_FIELDS,
];

const EXAMPLE = 'switch: { closes: [1 ms, 5 ms], opens: [3 ms] }';

export function readSwitch(input: ComponentInput): ComponentOutput | undefined {
  const { designator, entry, nodes } = input;
  const { value } = entry;
  if (value.type !== 'mapping') {
    report(value.passage, value.place, {
      message: 'a switch is not one value',
      expected: 'the times at which it closes and opens, or the voltage that drives it',
      example: EXAMPLE,
    });
    return undefined;
  }
  const driven = ['control', 'closes_above', 'opens_below'].some((key) => entryOf(value, key));
  const fields = driven ? DRIVEN_SWITCH_FIELDS : TIMED_SWITCH_FIELDS;
  const values = readFields(value, fields, driven ? 'a switch driven by a voltage' : 'a switch', entry.keyNode.place);
  const drive = driven ? readVoltageDrive(values) : readTimeDrive(value, values);
  if (!values.ok || !drive) return undefined;
  const offResistance = values.quantities.get('off_resistance')?.value;
  const component: Switch = {
    kind: 'switch',
    designator,
    nodes,
    drive,
    onResistance: values.quantities.get('on_resistance')!.value,
    offConductance: offResistance === undefined ? 0 : 1 / offResistance,
  };
  return { component, value: describe(drive, values) };
}

function readVoltageDrive(values: FieldValues): Switch['drive'] | undefined {
  const control = values.entries.get('control');
  const pair = control && readTwoNodes(control.value, 'control');
  const closesAbove = values.quantities.get('closes_above')?.value;
  const opensBelow = values.quantities.get('opens_below')?.value;
  if (!pair || closesAbove === undefined || opensBelow === undefined) return undefined;
  if (opensBelow > closesAbove) {
    const node = values.entries.get('opens_below')!.value;
    report(node.passage, node.place, {
      message: '`opens_below` is above `closes_above`',
      expected: 'the lower voltage as `opens_below`',
    });
    return undefined;
  }
  const startsClosed = values.texts.get('starts') === 'closed';
  return { by: 'voltage', nodes: [pair[0].name, pair[1].name], closesAbove, opensBelow, startsClosed };
}

interface SwitchEvent {
  readonly time: number;
  readonly closes: boolean;
  readonly node: YamlNode;
}

function readTimeDrive(mapping: YamlMapping, values: FieldValues): Switch['drive'] | undefined {
  const events = [...readEvents(values, 'closes'), ...readEvents(values, 'opens')];
  if (events.includes(undefined)) return undefined;
  const ordered = (events as SwitchEvent[]).sort((left, right) => left.time - right.time);
  const first = ordered[0];
  const stated = values.texts.get('starts');
  if (!first && stated === undefined) {
    if (values.ok)
      report(mapping.passage, mapping.place, {
        message: 'nothing drives this switch',
        expected: '`closes` and `opens`, `control`, or `starts`',
        example: EXAMPLE,
      });
    return undefined;
  }
  const startsClosed = stated === undefined ? first!.closes === false : stated === 'closed';
  let closed = startsClosed;
  for (const [index, event] of ordered.entries()) {
    const sameTime = index > 0 && ordered[index - 1]!.time === event.time;
    if (event.closes === closed || sameTime) {
      const state = closed ? 'closed' : 'open';
      report(event.node.passage, event.node.place, {
        message: sameTime
          ? 'the switch closes and opens at one time'
          : `the switch ${event.closes ? 'closes' : 'opens'} here and is ${state} already`,
        expected: 'closings and openings in turn',
        example: EXAMPLE,
      });
      return undefined;
    }
    closed = event.closes;
  }
  return { by: 'time', toggles: ordered.map((event) => event.time), startsClosed };
}

function readEvents(values: FieldValues, key: 'closes' | 'opens'): readonly (SwitchEvent | undefined)[] {
  const entry = values.entries.get(key);
  if (!entry) return [];
  const read = readList(entry.value, (node) => {
    const scalar = readScalar(node, dues.TIME, 'zero or more', key);
    return scalar && { time: scalar.value, closes: key === 'closes', node };
  });
  return read ?? [undefined];
}

function describe(drive: Switch['drive'], values: FieldValues): string {
  if (drive.by === 'voltage') {
    const { text: closing } = values.quantities.get('closes_above')!;
    const { text: opening } = values.quantities.get('opens_below')!;
    return `closes above ${closing}, opens below ${opening}, from ${drive.nodes[0]} to ${drive.nodes[1]}`;
  }
  const initial = drive.startsClosed ? 'closed' : 'open';
  const count = drive.toggles.length;
  return `starts ${initial}, changes ${count === 1 ? 'once' : `${count} times`}`;
}
