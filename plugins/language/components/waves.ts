/** What a source does over time, as an author writes it. */
import type { Wave } from '../../../solver/waves.ts';
import * as dues from '../dues.ts';
import { type Field, type FieldValues, readFields, readScalar } from '../fields.ts';
import { list, nearest } from '../nearest.ts';
import { report } from '../passage.ts';
import type { Due, Scalar } from '../scalar.ts';
import type { YamlEntry, YamlMapping, YamlNode } from '../yaml-tree.ts';
import type { Surroundings } from './context.ts';
import { readCsvWave } from './csv-wave.ts';

export interface WaveRead {
  readonly wave: Wave;
  /** For the component table. */
  readonly text: string;
  /** Of a plain value. */
  readonly scalar?: Scalar;
}

/** The keys of each shape, for a source whose value is `due` (a voltage or a current). */
export function waveFields(due: Due): { readonly [shape: string]: readonly Field[] } {
  const value = (key: string, doc: string, more: Partial<Field> = {}): Field => ({
    key,
    doc,
    takes: { form: 'quantity', due },
    ...more,
  });
  const time = (key: string, doc: string, more: Partial<Field> = { default: '0 s' }): Field => ({
    key,
    doc,
    takes: { form: 'quantity', due: dues.TIME, range: 'zero or more' },
    ...more,
  });
  const frequency = (more: Partial<Field> = { required: true }): Field => ({
    key: 'frequency',
    doc: 'cycles per second',
    takes: { form: 'quantity', due: dues.FREQUENCY, range: 'positive' },
    ...more,
  });
  const zero = `0 ${due.example.endsWith('V') ? 'V' : 'A'}`;
  const low = value('low', 'the lowest value', { required: true });
  const high = value('high', 'the highest value', { required: true });
  const delay = time('delay', 'when it begins');
  return {
    sine: [
      value('peak', 'the amplitude; this or `rms`', { takes: { form: 'quantity', due, range: 'zero or more' } }),
      value('rms', 'the root mean square; this or `peak`', { takes: { form: 'quantity', due, range: 'zero or more' } }),
      frequency(),
      value('offset', 'its mean', { default: zero }),
      { key: 'phase', doc: 'at the start', takes: { form: 'quantity', due: dues.ANGLE }, default: '0°' },
      delay,
    ],
    triangle: [low, high, frequency(), delay],
    ramp: [
      low,
      high,
      frequency(),
      {
        key: 'fall',
        doc: 'the fraction of the period that the return takes',
        takes: { form: 'quantity', due: dues.FRACTION, range: 'zero or more' },
        default: '1 %',
      },
      delay,
    ],
    pulse: [
      low,
      high,
      frequency({ doc: 'pulses per second; left out: one pulse' }),
      time('width', 'the time at `high`, without the edges', { required: true }),
      time('rise', 'the time of the rising edge'),
      time('fall', 'the time of the falling edge'),
      delay,
    ],
    csv: [
      { key: 'file', doc: 'a CSV file, relative to the note', takes: { form: 'text' }, required: true },
      {
        key: 'time',
        doc: 'the column of times in seconds: its number or heading',
        takes: { form: 'text' },
        default: '1',
      },
      { key: 'value', doc: 'the column of values: its number or heading', takes: { form: 'text' }, default: '2' },
    ],
  };
}

const SHAPES = ['sine', 'triangle', 'ramp', 'pulse', 'points', 'csv', 'sum'];
const EXAMPLE = 'source: { sine: { peak: 34 V, frequency: 50 Hz } }';

/** Reads a wave: a plain value, or a mapping with one shape. */
export function readWave(node: YamlNode, due: Due, surroundings: Surroundings): WaveRead | undefined {
  if (node.type === 'scalar') {
    const scalar = readScalar(node, { ...due, tolerance: true });
    return scalar && { wave: { shape: 'constant', value: scalar.value }, text: scalar.text, scalar };
  }
  if (node.type === 'sequence') {
    report(node.passage, node.place, {
      message: 'a list stands where a value or a wave is due',
      expected: '`points: [[t, v], …]` or `sum: [wave, …]`',
      example: EXAMPLE,
    });
    return undefined;
  }
  const shapes = node.entries.filter((entry) => SHAPES.includes(entry.key));
  const shape = shapes[0];
  if (!shape) {
    const wrong = node.entries[0];
    const meant = wrong && nearest(wrong.key, SHAPES);
    report(node.passage, wrong?.keyNode.place ?? node.place, {
      message: wrong ? `\`${wrong.key}\` is not a wave` : 'no wave is stated here',
      expected: meant ? `\`${meant}\` is the nearest` : `a plain value, or one of ${list(SHAPES, 'or')}`,
      example: EXAMPLE,
    });
    return undefined;
  }
  if (shapes[1]) {
    report(node.passage, shapes[1].keyNode.place, {
      message: `\`${shape.key}\` and \`${shapes[1].key}\` are two waves of one source`,
      expected: 'one wave, or their sum',
      example: 'source: { sum: [5 V, { sine: { peak: 1 V, frequency: 1 kHz } }] }',
    });
    return undefined;
  }
  const repeat = readRepeat(node, shape.key);
  if (repeat === undefined) return undefined;
  if (shape.key === 'points') return readPoints(shape.value, due, repeat);
  if (shape.key === 'sum') return readSum(shape.value, due, surroundings);
  const { value } = shape;
  if (value.type !== 'mapping') {
    const example = shape.key === 'sine' ? EXAMPLE : undefined;
    report(value.passage, value.place, {
      message: `\`${shape.key}\` is not a mapping`,
      expected: `its keys: ${list(waveFields(due)[shape.key]!.map((field) => field.key))}`,
      ...(example ? { example } : {}),
    });
    return undefined;
  }
  return readShape(shape, value, due, repeat, surroundings);
}

/** `repeat` beside `points` and `csv`; nothing where it or another key is wrong. */
function readRepeat(node: YamlMapping, shape: string): boolean | undefined {
  const others = { ...node, entries: node.entries.filter((entry) => !SHAPES.includes(entry.key)) };
  const repeats = shape === 'points' || shape === 'csv';
  const field: Field = {
    key: 'repeat',
    doc: 'begin again after the last point',
    takes: { form: 'truth' },
    default: 'false',
  };
  const values = readFields(others, repeats ? [field] : [], `a source with \`${shape}\``);
  return values.ok ? (values.truths.get('repeat') ?? false) : undefined;
}

function readShape(
  shape: YamlEntry,
  mapping: YamlMapping,
  due: Due,
  repeat: boolean,
  surroundings: Surroundings,
): WaveRead | undefined {
  const owner = `\`${shape.key}\``;
  const values = readFields(mapping, waveFields(due)[shape.key]!, owner, shape.keyNode.place);
  if (!values.ok) return undefined;
  const number = (key: string) => values.quantities.get(key)?.value ?? 0;
  const wrong = (key: string, message: string, expected: string) => {
    const place = values.entries.get(key)?.value.place ?? shape.keyNode.place;
    report(mapping.passage, place, { message, expected });
    return undefined;
  };
  const text = describe(shape.key, values);
  const timing = { frequency: number('frequency'), delay: number('delay') };

  if (shape.key === 'sine') {
    if (values.entries.has('peak') === values.entries.has('rms')) {
      const both = values.entries.has('peak');
      const message = both ? '`peak` and `rms` are both stated' : 'the sine has neither `peak` nor `rms`';
      return wrong('rms', message, `one of them, e.g. \`peak: ${due.example}\``);
    }
    const peak = values.entries.has('peak') ? number('peak') : number('rms') * Math.SQRT2;
    return { wave: { shape: 'sine', peak, offset: number('offset'), phase: number('phase'), ...timing }, text };
  }
  if (shape.key === 'csv') return readCsvWave(values, repeat, surroundings);

  const levels = { low: number('low'), high: number('high') };
  if (shape.key === 'pulse') {
    const edges = { width: number('width'), rise: number('rise'), fall: number('fall') };
    const lasts = edges.width + edges.rise + edges.fall;
    // The sum of three decimal numbers may exceed the period by its rounding alone.
    if (timing.frequency > 0 && lasts * timing.frequency > 1 + 1e-9) {
      return wrong(
        'width',
        'the rise, width and fall of the pulse are longer than its period',
        'a shorter pulse or a lower frequency',
      );
    }
    return { wave: { shape: 'pulse', ...levels, ...edges, ...timing }, text };
  }
  if (!(levels.low < levels.high)) {
    return wrong('low', `\`low\` is not below \`high\``, 'the lower value as `low`');
  }
  if (shape.key === 'triangle') return { wave: { shape: 'triangle', ...levels, ...timing }, text };
  const fall = number('fall');
  if (fall >= 1) return wrong('fall', 'the return takes the whole period or more', 'a fraction below 100 %');
  return { wave: { shape: 'ramp', ...levels, fall, ...timing }, text };
}

function readPoints(node: YamlNode, due: Due, repeat: boolean): WaveRead | undefined {
  const points = readPairs(node, dues.TIME, due, 'points: [[0 s, 0 V], [1 ms, 5 V]]');
  if (!points) return undefined;
  const { firsts: times, seconds: values, nodes } = points;
  for (let at = 1; at < times.length; at++) {
    const third = at >= 2 && times[at] === times[at - 2];
    if (times[at]! > times[at - 1]! || (times[at] === times[at - 1] && !third)) continue;
    const pair = nodes[at]!;
    report(pair.passage, pair.place, {
      message: third ? 'three points stand at one time' : 'this point is earlier than the one before it',
      expected: 'ascending times; two points at one time are a jump',
    });
    return undefined;
  }
  if (repeat && !(times.at(-1)! > times[0]!)) {
    report(node.passage, node.place, {
      message: 'a wave of no duration cannot repeat',
      expected: 'two times at least',
    });
    return undefined;
  }
  return {
    wave: { shape: 'points', times, values, repeat },
    text: `${times.length} points${repeat ? ', repeated' : ''}`,
  };
}

interface Pairs {
  readonly firsts: number[];
  readonly seconds: number[];
  readonly nodes: readonly YamlNode[];
}

/** A list of pairs of quantities: `[[0 s, 0 V], [1 ms, 5 V]]`. */
export function readPairs(node: YamlNode, first: Due, second: Due, example: string): Pairs | undefined {
  if (node.type !== 'sequence' || node.items.length === 0) {
    report(node.passage, node.place, {
      message: 'a list of points is due here',
      expected: 'pairs in brackets',
      example,
    });
    return undefined;
  }
  const firsts: number[] = [];
  const seconds: number[] = [];
  let ok = true;
  for (const item of node.items) {
    if (item.type !== 'sequence' || item.items.length !== 2) {
      report(item.passage, item.place, {
        message: 'this is not a pair',
        expected: 'two quantities in brackets',
        example,
      });
      ok = false;
      continue;
    }
    const left = readScalar(item.items[0]!, first);
    const right = readScalar(item.items[1]!, second);
    if (!left || !right) ok = false;
    firsts.push(left?.value ?? 0);
    seconds.push(right?.value ?? 0);
  }
  return ok ? { firsts, seconds, nodes: node.items } : undefined;
}

function readSum(node: YamlNode, due: Due, surroundings: Surroundings): WaveRead | undefined {
  if (node.type !== 'sequence' || node.items.length === 0) {
    report(node.passage, node.place, {
      message: '`sum` is not a list of waves',
      expected: 'waves in brackets',
      example: 'sum: [5 V, { sine: { peak: 1 V, frequency: 1 kHz } }]',
    });
    return undefined;
  }
  const read = node.items.map((item) => readWave(item, due, surroundings));
  if (read.includes(undefined)) return undefined;
  const parts = read as WaveRead[];
  return {
    wave: { shape: 'sum', waves: parts.map((part) => part.wave) },
    text: parts.map((part) => part.text).join(' + '),
  };
}

function describe(shape: string, values: FieldValues): string {
  const said = [...values.entries.keys()].flatMap((key) => {
    const scalar = values.quantities.get(key);
    return scalar ? [`${key} ${scalar.text}`] : [];
  });
  return `${shape}, ${said.join(', ')}`;
}
