/** The body of an `analysis` block: what to find of which circuit. */
import { DEFAULT_ACCURACY } from '../../solver/analysis.ts';
import type { Words } from '../problems.ts';
import { type Find, readRequest } from './analysis-request.ts';
import type { CircuitReading } from './circuit-block.ts';
import * as dues from './dues.ts';
import type { Fence } from './fences.ts';
import { type Field, type FieldValues, readFields, readList, readScalar } from './fields.ts';
import type { AnalysisBlock, Place } from './model.ts';
import { expectedName, list } from './nearest.ts';
import { report } from './passage.ts';
import { readVary } from './variations.ts';
import { entryOf, readYaml, reportRepeatedKeys, type YamlMapping } from './yaml-tree.ts';

export const FINDS: readonly Find[] = ['operating point', 'characteristic', 'time response', 'steady state'];
const FINDS_TO_COME: readonly string[] = ['frequency response'];

const LEAST_ACCURATE = 1e-2;
const MOST_ACCURATE = 1e-10;
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
