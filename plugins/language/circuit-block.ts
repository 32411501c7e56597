/** The body of a `circuit` block: which components stand between which nodes. */
import { type Circuit, REFERENCE_NODE, REFERENCE_TEMPERATURE } from '../../solver/circuit.ts';
import type { Words } from '../problems.ts';
import type { ComponentOutput, Surroundings } from './components/context.ts';
import * as dues from './dues.ts';
import type { Fence } from './fences.ts';
import { type Field, readFields, reportUnknownKey } from './fields.ts';
import { KINDS, KINDS_TO_COME, type Kind } from './kinds.ts';
import type { CircuitBlock, ComponentDescription, Place } from './model.ts';
import { checkName, readTwoNodes } from './names.ts';
import { expectedName, list } from './nearest.ts';
import { type Passage, report } from './passage.ts';
import { entryOf, isEmpty, readYaml, reportRepeatedKeys, type YamlEntry, type YamlMapping } from './yaml-tree.ts';

/** `layout` is read by the drawing of the circuit, not here. */
export const CIRCUIT_FIELDS: readonly Field[] = [
  { key: 'caption', doc: 'shown under the drawing', takes: { form: 'text' } },
  {
    key: 'components',
    doc: 'the components, by designator',
    takes: { form: 'structure', words: '`DESIGNATOR: { KIND: VALUE, nodes: [a, b] }` lines' },
    required: true,
  },
  {
    key: 'temperature',
    doc: 'ambient temperature',
    takes: { form: 'quantity', due: dues.TEMPERATURE, range: 'positive' },
    default: '25 °C',
  },
  { key: 'layout', doc: 'hints for the drawing', takes: { form: 'structure', words: 'a mapping' } },
];

/** A component's pin and where its node is written. */
export interface Pin {
  readonly designator: string;
  readonly node: string;
  readonly place: Place;
}

/** A circuit block as read, with the places that structural checks point at. */
export interface CircuitReading {
  readonly name: string;
  readonly passage: Passage;
  /** Place of the key `components`. */
  readonly place: Place;
  /** Missing where a component could not be read. */
  readonly block?: CircuitBlock;
  readonly pins: readonly Pin[];
  /** Places of the designators. */
  readonly designators: ReadonlyMap<string, Place>;
}

/** Reads the block; every problem is reported, and `block` is missing where there was one. */
export function readCircuitBlock(fence: Fence, surroundings: Surroundings): CircuitReading {
  const passage = fence.body;
  const start: Place = { line: fence.line, column: fence.namePlace.column, length: fence.namePlace.length };
  const broken: CircuitReading = { name: fence.name, passage, place: start, pins: [], designators: new Map() };
  const problemsBefore = passage.problems.length;
  const tree = readYaml(passage);
  if (tree?.type !== 'mapping') {
    if (tree || passage.problems.length === problemsBefore) report(passage, tree?.place ?? start, NO_COMPONENTS);
    return broken;
  }
  reportRepeatedKeys(tree, duplicateDesignator);
  const values = readFields(tree, CIRCUIT_FIELDS, 'a circuit', start);
  const entry = values.entries.get('components');
  if (!entry) return broken;
  const place = entry.keyNode.place;
  if (entry.value.type !== 'mapping' || entry.value.entries.length === 0) {
    report(passage, entry.value.place, NO_COMPONENTS);
    return { ...broken, place };
  }

  const pins: Pin[] = [];
  const designators = new Map<string, Place>();
  const outputs: ComponentOutput[] = [];
  let ok = values.ok && entry.value.repeated.length === 0;
  for (const item of entry.value.entries) {
    designators.set(item.key, item.keyNode.place);
    const output = readComponent(item, surroundings, pins);
    if (output) outputs.push(output);
    else ok = false;
  }
  // Of a designator that comes twice, the second component is looked at as well, for its own mistakes.
  for (const item of entry.value.repeated) readComponent(item, surroundings, []);
  if (!ok) return { name: fence.name, passage, place, pins, designators };

  const temperature = values.quantities.get('temperature')?.value ?? REFERENCE_TEMPERATURE;
  const circuit: Circuit = { name: fence.name, components: outputs.map((output) => output.component), temperature };
  const caption = values.texts.get('caption');
  const block: CircuitBlock = {
    kind: 'circuit',
    name: fence.name,
    line: fence.line,
    endLine: fence.endLine,
    source: passage.text,
    ...(caption ? { caption } : {}),
    circuit,
    components: outputs.map((output) => describe(output, designators.get(output.component.designator)!)),
  };
  return { name: fence.name, passage, place, block, pins, designators };
}

const NO_COMPONENTS: Words = {
  message: 'this circuit has no components',
  expected: '`components`, and under it one line for each',
  example: 'components: { R1: { resistor: 47 Ω, nodes: [a, gnd] } }',
};

function duplicateDesignator(path: readonly string[], entry: YamlEntry, first: YamlEntry): Words | undefined {
  if (path.length !== 1 || path[0] !== 'components') return undefined;
  return {
    message: `two components are called \`${entry.key}\`: the other stands in line ${first.keyNode.place.line}`,
    expected: 'a designator for each component',
  };
}

function describe(output: ComponentOutput, place: Place): ComponentDescription {
  const { component, value, tolerance, part, data } = output;
  return {
    designator: component.designator,
    kind: component.kind,
    value,
    nodes: component.nodes,
    ...(tolerance ? { tolerance } : {}),
    ...(part === undefined ? {} : { part }),
    data: Object.fromEntries(data ?? []),
    place,
  };
}

function readComponent(item: YamlEntry, surroundings: Surroundings, pins: Pin[]): ComponentOutput | undefined {
  const designator = checkDesignator(item);
  const { value: mapping } = item;
  if (mapping.type !== 'mapping') {
    report(mapping.passage, isEmpty(mapping) ? item.keyNode.place : mapping.place, {
      message: `\`${item.key}\` is not a component`,
      expected: 'its kind, its value and its nodes',
      example: `${designator ?? 'R1'}: { resistor: 47 Ω, nodes: [a, gnd] }`,
    });
    return undefined;
  }
  const found = findKind(item, mapping);
  const nodesEntry = entryOf(mapping, 'nodes');
  const pair = nodesEntry && readTwoNodes(nodesEntry.value, 'nodes');
  if (pair) pins.push(...pair.map(({ name, node }) => ({ designator: item.key, node: name, place: node.place })));
  if (!found) return undefined;
  const { kind, entry } = found;

  let ok = true;
  if (!nodesEntry) {
    report(mapping.passage, item.keyNode.place, {
      message: `\`${item.key}\` has no \`nodes\``,
      expected: 'the two nodes that it stands between',
      example: kind.example,
    });
  }
  for (const other of mapping.entries) {
    const known = [kind.kind, 'nodes', ...kind.beside.map((field) => field.key)];
    if (other === entry || known.includes(other.key)) continue;
    reportUnknownKey(other, known, `a \`${kind.kind}\``);
    ok = false;
  }
  // The value is read even where the nodes are wrong, so that all problems come at once.
  const nodes = pair ? ([pair[0].name, pair[1].name] as const) : (['?', '?'] as const);
  const output = kind.read({ designator: item.key, kind: kind.kind, entry, mapping, nodes, surroundings });
  return ok && pair && designator !== undefined && mapping.repeated.length === 0 ? output : undefined;
}

function checkDesignator(item: YamlEntry): string | undefined {
  if (item.key !== REFERENCE_NODE) return checkName(item.keyNode, 'a component');
  report(item.keyNode.passage, item.keyNode.place, {
    message: '`gnd` is the reference node and cannot name a component',
    expected: 'another designator',
  });
  return undefined;
}

function findKind(item: YamlEntry, mapping: YamlMapping): { kind: Kind; entry: YamlEntry } | undefined {
  const names: readonly string[] = KINDS.map((kind) => kind.kind);
  const found = mapping.entries.filter((entry) => names.includes(entry.key));
  const complain = (entry: YamlEntry | undefined, words: Words) => {
    report(mapping.passage, entry?.keyNode.place ?? item.keyNode.place, words);
    return undefined;
  };
  if (found.length > 1) {
    return complain(found[1], {
      message: `\`${item.key}\` is both a \`${found[0]!.key}\` and a \`${found[1]!.key}\``,
      expected: 'one kind for each component',
    });
  }
  const entry = found[0];
  if (entry && !isEmpty(entry.value)) return { kind: KINDS.find((kind) => kind.kind === entry.key)!, entry };
  if (entry) {
    const { example } = KINDS.find((kind) => kind.kind === entry.key)!;
    return complain(entry, { message: `\`${item.key}\` has no value`, expected: 'a value after the kind', example });
  }
  const later = mapping.entries.find((candidate) => (KINDS_TO_COME as readonly string[]).includes(candidate.key));
  if (later) {
    return complain(later, {
      message: `this version does not solve the kind \`${later.key}\` yet`,
      expected: `one of ${list(names, 'or')}`,
    });
  }
  const others = ['nodes', 'pins', ...KINDS.flatMap((kind) => kind.beside.map((field) => field.key))];
  const wrong = mapping.entries.find((candidate) => !others.includes(candidate.key));
  return complain(wrong, {
    message: wrong ? `\`${wrong.key}\` is not a kind of component` : `\`${item.key}\` states no kind`,
    expected: wrong ? expectedName(wrong.key, names) : `one of ${list(names, 'or')}`,
    example: 'R1: { resistor: 47 Ω, nodes: [a, gnd] }',
  });
}
