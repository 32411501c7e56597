/** The body of an `analysis` block: what to find of which circuit. */
import { type AnalysisRequest, DEFAULT_ACCURACY, type StartingState } from '../../solver/analysis.ts';
import type { Circuit, Component } from '../../solver/circuit.ts';
import type { Words } from '../problems.ts';
import { type CircuitReading, componentOf } from './circuit-block.ts';
import { LINEAR_VALUES } from './components/linear.ts';
import * as dues from './dues.ts';
import type { Fence } from './fences.ts';
import { type Field, type FieldValues, readFields, readList, readScalar } from './fields.ts';
import type { AnalysisBlock, Place, Variation } from './model.ts';
import { expectedName, list } from './nearest.ts';
import { report } from './passage.ts';
import type { Due } from './scalar.ts';
import { entryOf, readYaml, reportRepeatedKeys, type YamlEntry, type YamlMapping, type YamlNode } from './yaml-tree.ts';

type Find = AnalysisRequest['find'];

export const FINDS: readonly Find[] = ['operating point', 'characteristic', 'time response', 'steady state'];
const FINDS_TO_COME: readonly string[] = ['frequency response'];

const LEAST_ACCURATE = 1e-2;
const MOST_ACCURATE = 1e-10;
const MOST_POINTS = 100_000;
const MOST_RUNS = 1000;

const COMMON_FIELDS: readonly Field[] = [
  { key: 'circuit', doc: 'the circuit block; left out where the note has one', takes: { form: 'text' } },
  { key: 'find', doc: 'what to find', takes: { form: 'choice', choices: FINDS }, required: true },
  {
    key: 'temperature',
    doc: 'ambient temperature, or a list of them',
    takes: { form: 'structure', words: 'e.g. `60 °C`, or `[-20 °C, 25 °C, 60 °C]`' },
  },
  {
    key: 'vary',
    doc: 'values of components, one run for each; two keys make a grid',
    takes: { form: 'structure', words: 'e.g. `{ C1: [470 nF, 1 µF] }`' },
  },
  {
    key: 'accuracy',
    doc: 'relative accuracy that every figure must meet',
    takes: { form: 'quantity', due: dues.ACCURACY },
    default: String(DEFAULT_ACCURACY),
  },
  { key: 'spread', doc: 'over the tolerances; not in this version', takes: { form: 'structure', words: 'a spread' } },
];

/** The keys of each kind of analysis, beside the common ones. */
export const ANALYSIS_FIELDS: { readonly [find in Find]: readonly Field[] } = {
  'operating point': [],
  characteristic: [
    {
      key: 'sweep',
      doc: 'a source and the range of its value',
      takes: { form: 'structure', words: '`{ G1: [-5 V, 5 V] }`' },
      required: true,
    },
    {
      key: 'points',
      doc: 'how many values at least',
      takes: { form: 'quantity', due: { ...dues.NUMBER, example: '201' } },
      default: '201',
    },
  ],
  'time response': [
    {
      key: 'until',
      doc: 'the end',
      takes: { form: 'quantity', due: { ...dues.TIME, example: '200 ms' }, range: 'positive' },
      required: true,
    },
    {
      key: 'from',
      doc: 'from when on the response is kept',
      takes: { form: 'quantity', due: dues.TIME, range: 'zero or more' },
      default: '0 s',
    },
    {
      key: 'start',
      doc: '`operating point` (default), `rest`, or the voltages of capacitors and currents of inductors',
      takes: { form: 'structure', words: '`operating point`, `rest`, or `{ C1: 5 V }`' },
    },
  ],
  'steady state': [
    {
      key: 'period',
      doc: 'the period of the response; default: the common period of the sources',
      takes: { form: 'quantity', due: dues.TIME, range: 'positive' },
    },
  ],
};

export interface AnalysisReading {
  readonly name: string;
  readonly fence: Fence;
  readonly place: Place;
  /** The circuit that the block refers to; missing where there is none of that name. */
  readonly circuit?: CircuitReading;
  /** Missing where the block could not be read. */
  readonly block?: AnalysisBlock;
}

/** Reads the block; every problem is reported, and `block` is missing where there was one. */
export function readAnalysisBlock(fence: Fence, circuits: readonly CircuitReading[]): AnalysisReading {
  const passage = fence.body;
  const start: Place = { line: fence.line, column: fence.namePlace.column, length: fence.namePlace.length };
  const broken: AnalysisReading = { name: fence.name, fence, place: start };
  const problemsBefore = passage.problems.length;
  const tree = readYaml(passage);
  if (tree?.type !== 'mapping') {
    if (tree || passage.problems.length === problemsBefore) report(passage, tree?.place ?? start, NOTHING_TO_FIND);
    return broken;
  }
  reportRepeatedKeys(tree);
  const circuit = findCircuit(fence, tree, circuits, start);
  const find = readFind(tree, start);
  if (!find) return { ...broken, ...(circuit ? { circuit } : {}) };

  const values = readFields(
    withoutForeignKeys(tree, find),
    [...COMMON_FIELDS, ...ANALYSIS_FIELDS[find]],
    `a ${find}`,
    start,
  );
  const spread = values.entries.get('spread');
  if (spread) report(passage, spread.keyNode.place, NO_SPREAD);
  const accuracy = readAccuracy(values);
  const temperatures = readTemperatures(values);
  // Where the circuit itself is broken, nothing can be said about names of its components.
  const known = circuit?.block?.circuit;
  const request = readRequest(find, values, known);
  const vary = known ? readVary(values, known) : [];
  const sound = values.ok && !spread && accuracy && temperatures && request && vary && known;
  const foreign = tree.entries.length !== values.entries.size;
  if (!circuit || !sound || foreign || tree.repeated.length > 0) return { ...broken, ...(circuit ? { circuit } : {}) };

  const runs = vary.reduce((product, { values: each }) => product * each.length, Math.max(1, temperatures.length));
  if (runs > MOST_RUNS) {
    report(passage, start, { message: `this family has ${runs} runs`, expected: `${MOST_RUNS} at most` });
    return { ...broken, circuit };
  }
  const block: AnalysisBlock = {
    kind: 'analysis',
    name: fence.name,
    line: fence.line,
    endLine: fence.endLine,
    source: passage.text,
    circuit: circuit.name,
    request,
    temperatures,
    vary,
    accuracy,
  };
  return { name: fence.name, fence, place: start, circuit, block };
}

const NOTHING_TO_FIND: Words = {
  message: 'this analysis does not say what to find',
  expected: `\`find\`, with one of ${list(FINDS, 'or')}`,
  example: 'find: time response',
};

const NO_SPREAD: Words = {
  message: 'this version does not compute a `spread` over tolerances yet',
  expected: `\`vary\` or \`temperature\` with a list; analyses are ${list(FINDS)}`,
};

function findCircuit(
  fence: Fence,
  tree: YamlMapping,
  circuits: readonly CircuitReading[],
  start: Place,
): CircuitReading | undefined {
  const entry = entryOf(tree, 'circuit');
  const names = circuits.map((circuit) => circuit.name);
  const complain = (place: Place, words: Words) => {
    report(fence.body, place, words);
    return undefined;
  };
  if (entry) {
    const wanted = entry.value.type === 'scalar' ? entry.value.text.trim() : '';
    const found = circuits.find((circuit) => circuit.name === wanted);
    if (found || entry.value.type !== 'scalar') return found;
    return complain(entry.value.place, {
      message: `there is no circuit \`${wanted}\` in this note`,
      expected: names.length === 0 ? 'a `circuit` block' : expectedName(wanted, names),
    });
  }
  if (circuits.length === 1) return circuits[0];
  if (circuits.length === 0)
    return complain(start, { message: 'this note has no circuit to analyse', expected: 'a `circuit` block' });
  return complain(start, {
    message: `this note has ${circuits.length} circuits, and the analysis does not say which it means`,
    expected: `\`circuit\`, with one of ${list(names, 'or')}`,
    example: `circuit: ${names[0]}`,
  });
}

function readFind(tree: YamlMapping, start: Place): Find | undefined {
  const entry = entryOf(tree, 'find');
  if (entry?.value.type !== 'scalar') {
    report(tree.passage, entry?.value.place ?? start, NOTHING_TO_FIND);
    return undefined;
  }
  const text = entry.value.text.trim();
  const find = FINDS.find((known) => known === text);
  if (find) return find;
  const toCome = FINDS_TO_COME.includes(text);
  report(tree.passage, entry.value.place, {
    message: toCome ? `this version does not find a \`${text}\` yet` : `\`${text}\` cannot be found`,
    expected: toCome ? `one of ${list(FINDS, 'or')}` : expectedName(text, FINDS),
  });
  return undefined;
}

/** Reports keys that belong to another kind of analysis, and leaves them out. */
function withoutForeignKeys(tree: YamlMapping, find: Find): YamlMapping {
  const own = [...COMMON_FIELDS, ...ANALYSIS_FIELDS[find]].map((field) => field.key);
  const entries = tree.entries.filter((entry) => {
    if (own.includes(entry.key)) return true;
    const other = FINDS.find((candidate) => ANALYSIS_FIELDS[candidate].some((field) => field.key === entry.key));
    if (!other) return true;
    report(tree.passage, entry.keyNode.place, {
      message: `\`${entry.key}\` belongs to a ${other}, and this is ${find === 'operating point' ? 'an' : 'a'} ${find}`,
      expected: `keys of this analysis: ${list(own.filter((key) => key !== 'spread'))}`,
    });
    return false;
  });
  return { ...tree, entries };
}

function readAccuracy(values: FieldValues): number | undefined {
  const accuracy = values.quantities.get('accuracy')?.value;
  const entry = values.entries.get('accuracy');
  if (accuracy === undefined || !entry || (accuracy >= MOST_ACCURATE && accuracy <= LEAST_ACCURATE)) return accuracy;
  report(entry.value.passage, entry.value.place, {
    message: `an accuracy of ${accuracy} cannot be asked for`,
    expected: `from ${MOST_ACCURATE} to ${LEAST_ACCURATE}`,
    example: 'accuracy: 1e-4',
  });
  return undefined;
}

function readTemperatures(values: FieldValues): number[] | undefined {
  const entry = values.entries.get('temperature');
  if (!entry) return [];
  return readList(entry.value, (node) => readScalar(node, dues.TEMPERATURE, 'positive', 'temperature')?.value);
}

function readRequest(find: Find, values: FieldValues, circuit: Circuit | undefined): AnalysisRequest | undefined {
  if (find === 'operating point') return { find };
  if (find === 'characteristic') return readCharacteristic(values, circuit);
  if (find === 'steady state') {
    const period = values.quantities.get('period')?.value;
    return { find, ...(period === undefined ? {} : { period }) };
  }
  const until = values.quantities.get('until')?.value;
  const from = values.quantities.get('from')?.value;
  const startEntry = values.entries.get('start');
  const start = startEntry ? readStart(startEntry, circuit) : 'operating point';
  if (until === undefined || from === undefined || !start) return undefined;
  if (from >= until) {
    const node = values.entries.get('from')!.value;
    report(node.passage, node.place, { message: '`from` is not before `until`', expected: 'an earlier time' });
    return undefined;
  }
  return { find, until, from, start };
}

function readCharacteristic(values: FieldValues, circuit: Circuit | undefined): AnalysisRequest | undefined {
  const pointsScalar = values.quantities.get('points');
  let points = pointsScalar?.value;
  if (points !== undefined && (!Number.isInteger(points) || points < 2 || points > MOST_POINTS)) {
    const node = values.entries.get('points')!.value;
    report(node.passage, node.place, {
      message: `\`${pointsScalar!.text}\` is not a number of points`,
      expected: `a whole number from 2 to ${MOST_POINTS}`,
    });
    points = undefined;
  }
  const sweep = values.entries.get('sweep')?.value;
  if (!sweep) return undefined;
  const only = sweep.type === 'mapping' && sweep.entries.length === 1 ? sweep.entries[0]! : undefined;
  if (only?.value.type !== 'sequence' || only.value.items.length !== 2) {
    report(sweep.passage, only?.value.place ?? sweep.place, {
      message: '`sweep` does not state one source and the two ends of its range',
      expected: 'a designator and two values',
      example: 'sweep: { G1: [-5 V, 5 V] }',
    });
    return undefined;
  }
  if (!circuit) return undefined;
  const sources = circuit.components.filter(({ kind }) => kind === 'source' || kind === 'current-source');
  const source = sources.find((component) => component.designator === only.key);
  if (!source) {
    reportNoSuch(only, circuit, sources, 'a source');
    return undefined;
  }
  const due = source.kind === 'source' ? dues.VOLTAGE : dues.CURRENT;
  const [from, to] = only.value.items.map((item) => readScalar(item, due, undefined, only.key)?.value);
  if (from === undefined || to === undefined || points === undefined) return undefined;
  if (from === to) {
    report(sweep.passage, only.value.place, {
      message: 'the range of the sweep is empty',
      expected: 'two different values',
    });
    return undefined;
  }
  return { find: 'characteristic', sweep: source.designator, from, to, points };
}

function readStart(entry: YamlEntry, circuit: Circuit | undefined): StartingState | undefined {
  const { value } = entry;
  if (value.type === 'scalar') {
    const text = value.text.trim();
    if (text === 'rest' || text === 'operating point') return text;
  }
  if (value.type !== 'mapping') {
    report(value.passage, value.place, {
      message: value.type === 'scalar' ? `\`${value.text.trim()}\` is not a start` : '`start` is a list',
      expected: '`operating point`, `rest`, or the voltages of capacitors and currents of inductors',
      example: 'start: { C1: 5 V }',
    });
    return undefined;
  }
  if (!circuit) return undefined;
  const storing = circuit.components.filter(({ kind }) => kind === 'capacitor' || kind === 'inductor');
  const state: [string, number][] = [];
  let ok = true;
  for (const item of value.entries) {
    const component = storing.find((candidate) => candidate.designator === item.key);
    if (!component) reportNoSuch(item, circuit, storing, 'a capacitor or an inductor');
    const due = component?.kind === 'inductor' ? dues.CURRENT : dues.VOLTAGE;
    const scalar = component && readScalar(item.value, due, undefined, item.key);
    if (scalar) state.push([item.key, scalar.value]);
    else ok = false;
  }
  return ok ? Object.fromEntries(state) : undefined;
}

function readVary(values: FieldValues, circuit: Circuit): Variation[] | undefined {
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

/** A name that is no component, or one of the wrong kind. */
function reportNoSuch(entry: YamlEntry, circuit: Circuit, fitting: readonly Component[], what: string): void {
  const names = fitting.map((component) => component.designator);
  const other = componentOf(circuit, entry.key);
  report(entry.keyNode.passage, entry.keyNode.place, {
    message: other
      ? `\`${entry.key}\` is a ${other.kind}, and ${what} is due here`
      : `the circuit \`${circuit.name}\` has no component \`${entry.key}\``,
    expected: names.length === 0 ? `${what}, and the circuit has none` : expectedName(entry.key, names),
  });
}
