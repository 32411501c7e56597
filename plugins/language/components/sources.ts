/** Sources of voltage and of current. */
import type { SmallSignal } from '../../../solver/circuit.ts';
import * as dues from '../dues.ts';
import { type Field, readFields, readScalar } from '../fields.ts';
import { list } from '../nearest.ts';
import { report } from '../passage.ts';
import type { Due } from '../scalar.ts';
import { entryOf } from '../yaml-tree.ts';
import type { ComponentInput, ComponentOutput, Datum } from './context.ts';
import { readWave } from './waves.ts';

export const SOURCE_FIELDS: readonly Field[] = [
  {
    key: 'small_signal',
    doc: 'marks the input of a frequency response: its amplitude, with a phase where it has one',
    takes: { form: 'structure', words: '`1 V`, or `{ amplitude: 1 V, phase: 90° }`' },
  },
];

/** `G1: { source: { sine: { peak: 34 V, frequency: 50 Hz } }, nodes: [line, gnd], small_signal: 1 V }` */
export function readSource(input: ComponentInput, kind: 'source' | 'current-source'): ComponentOutput | undefined {
  const { designator, entry, mapping, nodes, surroundings } = input;
  const due = kind === 'source' ? dues.VOLTAGE : dues.CURRENT;
  const read = readWave(entry.value, due, surroundings);
  const smallSignalEntry = entryOf(mapping, 'small_signal');
  const smallSignal = smallSignalEntry && readSmallSignal(input, due);
  if (!read || (smallSignalEntry && !smallSignal)) return undefined;
  const data = new Map<string, Datum>();
  if (read.scalar) data.set('value', { value: read.scalar.value, dimension: due.dimension, text: read.scalar.text });
  return {
    component: { kind, designator, nodes, wave: read.wave, ...(smallSignal ? { smallSignal } : {}) },
    value: read.text,
    ...(read.scalar?.tolerance ? { tolerance: read.scalar.tolerance } : {}),
    data,
  };
}

function readSmallSignal(input: ComponentInput, due: Due): SmallSignal | undefined {
  const entry = entryOf(input.mapping, 'small_signal')!;
  const { value } = entry;
  if (value.type === 'scalar') {
    const amplitude = readScalar(value, due, 'positive', 'small_signal');
    return amplitude && { amplitude: amplitude.value, phase: 0 };
  }
  if (value.type === 'sequence') {
    report(value.passage, value.place, {
      message: '`small_signal` is a list',
      expected: `an amplitude, or a mapping of ${list(['amplitude', 'phase'])}`,
      example: `small_signal: { amplitude: ${due.example}, phase: 90° }`,
    });
    return undefined;
  }
  const fields: Field[] = [
    { key: 'amplitude', doc: '', takes: { form: 'quantity', due, range: 'positive' }, required: true },
    { key: 'phase', doc: '', takes: { form: 'quantity', due: dues.ANGLE }, default: '0°' },
  ];
  const values = readFields(value, fields, '`small_signal`', entry.keyNode.place);
  if (!values.ok) return undefined;
  return { amplitude: values.quantities.get('amplitude')!.value, phase: values.quantities.get('phase')!.value };
}
