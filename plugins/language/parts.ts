/** Parts: one YAML file each, `content/parts/NAME.yaml`. */
import { fileText, type Problem, type Words } from '../problems.ts';
import type { Datum } from './components/context.ts';
import { type Field, readFields } from './fields.ts';
import { report, wholeFile } from './passage.ts';
import { parseAnyScalar } from './scalar.ts';
import { readYaml, reportRepeatedKeys, type YamlMapping, type YamlNode } from './yaml-tree.ts';

export interface PartFile {
  readonly name: string;
  readonly kind: string;
  readonly description?: string;
  /** Where its data come from. */
  readonly source?: string;
  readonly value?: YamlNode;
  readonly model?: YamlMapping;
  readonly temperature?: YamlMapping;
  /** `rating.…`, `thermal.…`, `light.…`, by path. */
  readonly data: ReadonlyMap<string, Datum>;
}

/** A part's name is the name of its file: no folders. */
export const PART_NAME = /^[A-Za-z0-9][A-Za-z0-9_.-]*$/;

const TEXT = { form: 'text' } as const;
const structure = (words: string) => ({ form: 'structure', words }) as const;

export const PART_FIELDS: readonly Field[] = [
  { key: 'part', doc: 'the name of the file, without `.yaml`', takes: TEXT },
  { key: 'kind', doc: 'the kind of component', takes: TEXT, required: true },
  { key: 'description', doc: 'what it is, in words', takes: TEXT },
  { key: 'source', doc: 'where its data come from', takes: TEXT },
  { key: 'value', doc: 'the value of a resistor, capacitor or inductor', takes: structure('e.g. `1 µF ±10 %`') },
  { key: 'model', doc: 'the law of a diode, LED or Zener diode', takes: structure('the keys of a model') },
  { key: 'temperature', doc: 'how it moves with temperature', takes: structure('e.g. `{ forward_voltage: -2 mV/K }`') },
  { key: 'spread', doc: 'how specimens differ', takes: structure('e.g. `{ forward_voltage: ±0.15 V }`') },
  { key: 'ratings', doc: 'limits it must not pass', takes: structure('e.g. `{ forward_current: 20 mA }`') },
  { key: 'thermal', doc: 'thermal resistances', takes: structure('e.g. `{ junction_to_ambient: 400 K/W }`') },
  { key: 'light', doc: 'light it gives', takes: structure('e.g. `{ intensity: 45 mcd, at: 10 mA }`') },
];

/** Reads a part's file. Problems carry its own path and lines; nothing is returned where it has no kind. */
export function readPart(file: string, name: string, text: string, problems: Problem[]): PartFile | undefined {
  const passage = wholeFile(fileText(file, text), problems);
  const tree = readYaml(passage);
  if (tree === undefined || tree.type !== 'mapping') {
    const noKeys: Words = { message: `the part \`${name}\` has no keys`, expected: '`kind: led` and more' };
    if (tree || problems.length === 0) report(passage, { line: 1, column: 1, length: 1 }, noKeys);
    return undefined;
  }
  reportRepeatedKeys(tree);
  const values = readFields(tree, PART_FIELDS, `the part \`${name}\``, { line: 1, column: 1, length: 1 });
  const kind = values.texts.get('kind');
  const stated = values.texts.get('part');
  if (stated !== undefined && stated !== name) {
    report(passage, values.entries.get('part')!.value.place, {
      message: `the part calls itself \`${stated}\`, and its file is \`${name}.yaml\``,
      expected: `\`part: ${name}\``,
      severity: 'warning',
    });
  }
  const data = new Map<string, Datum>();
  collect(values.entries.get('ratings')?.value, 'rating', data);
  collect(values.entries.get('thermal')?.value, 'thermal', data);
  collect(values.entries.get('light')?.value, 'light', data);
  if (kind === undefined) return undefined;
  const optional = <K extends 'description' | 'source'>(key: K) =>
    values.texts.has(key) ? { [key]: values.texts.get(key)! } : {};
  return {
    name,
    kind,
    ...optional('description'),
    ...optional('source'),
    ...(values.entries.has('value') ? { value: values.entries.get('value')!.value } : {}),
    ...mappingOf('model', values.entries.get('model')?.value),
    ...mappingOf('temperature', values.entries.get('temperature')?.value),
    data,
  };
}

function mappingOf<K extends string>(key: K, node: YamlNode | undefined): { [key in K]?: YamlMapping } {
  if (node === undefined) return {};
  if (node.type === 'mapping') return { [key]: node } as { [key in K]?: YamlMapping };
  report(node.passage, node.place, { message: `\`${key}\` is not a mapping`, expected: '`{ key: value }`' });
  return {};
}

/** Numbers with units, whatever they are; texts such as a safety class are left. */
function collect(node: YamlNode | undefined, prefix: string, into: Map<string, Datum>): void {
  if (node === undefined) return;
  if (node.type !== 'mapping') {
    report(node.passage, node.place, {
      message: 'a mapping is due here',
      expected: 'e.g. `{ forward_current: 20 mA }`',
    });
    return;
  }
  for (const { key, value } of node.entries) {
    if (value.type !== 'scalar') continue;
    const read = parseAnyScalar(value.text);
    if (read) into.set(`${prefix}.${key}`, read);
    else if (/^[-+]?[.\d]/.test(value.text)) {
      report(value.passage, value.place, {
        message: `\`${value.text}\` is not a number and a unit`,
        expected: 'e.g. `20 mA`, `400 K/W`',
      });
    }
  }
}
