/**
 * Mappings whose keys are described by a table: one description serves the reader, the messages, and a schema for
 * editors. What a table cannot say is read by the code that owns it.
 */
import type { Place } from './model.ts';
import { expectedName, list, nearest } from './nearest.ts';
import { report } from './passage.ts';
import { type Due, parseScalar, type Scalar } from './scalar.ts';
import { isEmpty, placeWithin, type YamlEntry, type YamlMapping, type YamlNode, type YamlScalar } from './yaml-tree.ts';

export type Range = 'positive' | 'zero or more';

export type Takes =
  | { readonly form: 'quantity'; readonly due: Due; readonly range?: Range }
  | { readonly form: 'choice'; readonly choices: readonly string[] }
  | { readonly form: 'truth' }
  | { readonly form: 'text' }
  /** Read by its own code; `words` say what stands there, for messages and the schema. */
  | { readonly form: 'structure'; readonly words: string };

export interface Field {
  readonly key: string;
  /** For the documentation: what it says, in a few words. */
  readonly doc: string;
  readonly takes: Takes;
  readonly required?: true;
  /** As an author would write it. */
  readonly default?: string;
}

/** What a mapping was found to say, by key; defaults filled in. Keys that are wrong are missing, and `ok` is false. */
export interface FieldValues {
  readonly quantities: ReadonlyMap<string, Scalar>;
  /** Choices and texts. */
  readonly texts: ReadonlyMap<string, string>;
  readonly truths: ReadonlyMap<string, boolean>;
  /** The entries as written, without defaults. */
  readonly entries: ReadonlyMap<string, YamlEntry>;
  readonly ok: boolean;
}

/**
 * Reads a mapping by its table. `owner` names the thing in messages (`a sine`); `place` stands for the mapping where a
 * key is missing.
 */
export function readFields(mapping: YamlMapping, fields: readonly Field[], owner: string, place?: Place): FieldValues {
  const quantities = new Map<string, Scalar>();
  const texts = new Map<string, string>();
  const truths = new Map<string, boolean>();
  const entries = new Map<string, YamlEntry>();
  let ok = true;
  /** Keys that a misspelt one probably meant: they are not called missing too. */
  const meant = new Set<string | undefined>();

  const put = (field: Field, value: string | boolean | Scalar | undefined) => {
    if (value === undefined) ok = false;
    else if (typeof value === 'string') texts.set(field.key, value);
    else if (typeof value === 'boolean') truths.set(field.key, value);
    else quantities.set(field.key, value);
  };

  for (const entry of mapping.entries) {
    const field = fields.find((known) => known.key === entry.key);
    if (!field) {
      const known = fields.map(({ key }) => key);
      reportUnknownKey(entry, known, owner);
      meant.add(nearest(entry.key, known));
      ok = false;
      continue;
    }
    if (isEmpty(entry.value) && field.takes.form !== 'text') {
      report(mapping.passage, entry.keyNode.place, {
        message: `\`${field.key}\` has no value`,
        expected: takenInWords(field.takes),
      });
      ok = false;
      continue;
    }
    entries.set(field.key, entry);
    if (field.takes.form !== 'structure') put(field, readValue(entry.value, field));
  }
  for (const field of fields) {
    if (mapping.entries.some((entry) => entry.key === field.key)) continue;
    if (field.required) {
      ok = false;
      if (meant.has(field.key)) continue;
      report(mapping.passage, place ?? mapping.place, {
        message: `${owner} has no \`${field.key}\``,
        expected: `\`${field.key}\`: ${takenInWords(field.takes)}`,
      });
    } else if (field.default !== undefined && field.takes.form !== 'structure') {
      put(field, defaultOf(field));
    }
  }
  return { quantities, texts, truths, entries, ok };
}

/** Reports a key that is not in the table. */
export function reportUnknownKey(entry: YamlEntry, known: readonly string[], owner: string): void {
  report(entry.keyNode.passage, entry.keyNode.place, {
    message: `\`${entry.key}\` is no key of ${owner}`,
    expected: expectedName(entry.key, known),
  });
}

/** Reads a node as a scalar of what is due; reports what is wrong with it. */
export function readScalar(node: YamlNode, due: Due, range?: Range, key?: string): Scalar | undefined {
  const named = key === undefined ? '' : `\`${key}\`: `;
  if (node.type !== 'scalar') {
    report(node.passage, node.place, {
      message: `${named}a ${node.type === 'sequence' ? 'list' : 'mapping'} stands where one value is due`,
      expected: `e.g. \`${due.example}\``,
    });
    return undefined;
  }
  const reading = parseScalar(node.text, due);
  if (!reading.ok) {
    const { message, expected, start, end } = reading.fault;
    report(node.passage, placeWithin(node, start, end), { message: named + message, expected });
    return undefined;
  }
  const { value } = reading.scalar;
  const outside = (range === 'positive' && !(value > 0)) || (range === 'zero or more' && !(value >= 0));
  if (outside) {
    report(node.passage, node.place, {
      message: `${named}\`${node.text.trim()}\` is ${value < 0 ? 'negative' : 'zero'}`,
      expected: range === 'positive' ? 'a value above zero' : 'zero or a value above it',
    });
    return undefined;
  }
  return reading.scalar;
}

/** Reads a node as a list with a reader for its items; a single value counts as a list of one. */
export function readList<T>(node: YamlNode, readItem: (item: YamlNode) => T | undefined): T[] | undefined {
  const items = node.type === 'sequence' ? node.items : [node];
  const read = items.map(readItem);
  return read.includes(undefined) ? undefined : (read as T[]);
}

/** A scalar's text as it stands, or a problem that says what is due. */
export function readText(node: YamlNode, key: string): string | undefined {
  if (node.type === 'scalar') return node.text.trim();
  report(node.passage, node.place, {
    message: `\`${key}\` holds a ${node.type === 'sequence' ? 'list' : 'mapping'}`,
    expected: 'a text; in quotes where it begins with a bracket',
  });
  return undefined;
}

function readValue(node: YamlNode, field: Field): string | boolean | Scalar | undefined {
  const { takes } = field;
  if (takes.form === 'quantity') return readScalar(node, takes.due, takes.range, field.key);
  const text = readText(node, field.key);
  if (text === undefined || takes.form === 'text') return text;
  const complain = (expected: string) => {
    const at = (node as YamlScalar).place;
    report(node.passage, at, { message: `\`${field.key}\` cannot be \`${text}\``, expected });
    return undefined;
  };
  if (takes.form === 'truth') {
    return text === 'true' ? true : text === 'false' ? false : complain('`true` or `false`');
  }
  if (takes.form === 'choice') return takes.choices.includes(text) ? text : complain(expectedName(text, takes.choices));
  return undefined;
}

function defaultOf(field: Field): string | boolean | Scalar | undefined {
  const text = field.default!;
  if (field.takes.form === 'quantity') {
    const reading = parseScalar(text, field.takes.due);
    if (!reading.ok) throw new Error(`Internal error: default of ${field.key}: ${reading.fault.message}`);
    return reading.scalar;
  }
  return field.takes.form === 'truth' ? text === 'true' : text;
}

function takenInWords(takes: Takes): string {
  switch (takes.form) {
    case 'quantity':
      return `e.g. \`${takes.due.example}\``;
    case 'choice':
      return `one of ${list(takes.choices, 'or')}`;
    case 'truth':
      return '`true` or `false`';
    case 'text':
      return 'a text';
    case 'structure':
      return takes.words;
  }
}
