/**
 * YAML as a tree in which every key and value knows its place in the file. Values are texts: what a text means is for
 * its reader to say, so `1e3`, `yes` and `0.10` arrive as written. Keys are never used as names of JavaScript properties.
 */
import {
  EVENT_ALIAS,
  EVENT_DOCUMENT,
  EVENT_MAPPING,
  EVENT_POP,
  EVENT_SCALAR,
  EVENT_SEQUENCE,
  getScalarValue,
  parseEvents,
  SCALAR_STYLE_PLAIN,
  YAMLException,
} from 'js-yaml';
import type { Words } from '../problems.ts';
import type { Place } from './model.ts';
import { type Passage, placeOf, report } from './passage.ts';
import { yamlErrorWords } from './yaml-errors.ts';
import { maskForYaml } from './yaml-mask.ts';

export type YamlNode = YamlScalar | YamlSequence | YamlMapping;

export interface YamlScalar {
  readonly type: 'scalar';
  readonly text: string;
  /** Written without quotes. */
  readonly plain: boolean;
  readonly place: Place;
  readonly passage: Passage;
  /** For each character of the text, where it stands in the passage. */
  readonly offsets: readonly number[];
}

export interface YamlSequence {
  readonly type: 'sequence';
  readonly items: readonly YamlNode[];
  readonly place: Place;
  readonly passage: Passage;
}

export interface YamlEntry {
  readonly key: string;
  readonly keyNode: YamlScalar;
  readonly value: YamlNode;
}

export interface YamlMapping {
  readonly type: 'mapping';
  /** In order; the first of each key. */
  readonly entries: readonly YamlEntry[];
  /** Entries whose key had come before. */
  readonly repeated: readonly YamlEntry[];
  readonly place: Place;
  readonly passage: Passage;
}

/** Longest text that is read, in characters; a longer table belongs into a CSV file. */
const LARGEST_TEXT = 1_000_000;
const DEEPEST_NESTING = 40;

/** The tree of a passage; nothing if it cannot be read (the problem is reported) or is empty. */
export function readYaml(passage: Passage): YamlNode | undefined {
  const { text } = passage;
  if (text.length > LARGEST_TEXT) {
    report(passage, placeOf(passage, 0, 1), {
      message: `this text is longer than ${LARGEST_TEXT} characters`,
      expected: 'long tables in a CSV file of their own',
    });
    return undefined;
  }
  const tab = /^ *\t[ \t]*(?=[^\s#])/m.exec(text);
  const masked = maskForYaml(text);
  try {
    return buildTree(passage, parseEvents(masked, { maxDepth: DEEPEST_NESTING }));
  } catch (error) {
    if (error instanceof YAMLException) {
      const at = tab ? tab.index : Math.max(0, Math.min(error.mark?.position ?? 0, text.length));
      const tooDeep = /exceeded maxDepth/.test(error.reason ?? '');
      const words = tooDeep
        ? TOO_DEEP_WORDS
        : tab
          ? TAB_WORDS
          : yamlErrorWords(error.reason ?? error.message, text, at);
      report(passage, placeOf(passage, at, at + 1), words);
      return undefined;
    }
    if (error instanceof RangeError) {
      report(passage, placeOf(passage, 0, 1), TOO_DEEP_WORDS);
      return undefined;
    }
    throw error;
  }
}

/** Where a range of a scalar's text stands in the file. */
export function placeWithin(scalar: YamlScalar, start: number, end: number): Place {
  const { offsets } = scalar;
  if (offsets.length === 0) return scalar.place;
  const first = offsets[Math.max(0, Math.min(start, offsets.length - 1))]!;
  const last = offsets[Math.max(0, Math.min(end - 1, offsets.length - 1))]!;
  const past = start >= offsets.length ? 1 : 0;
  return placeOf(scalar.passage, first + past, Math.max(first, last) + 1 + past);
}

/** Whether a key has no value: nothing, or `~`, or `null`, without quotes. */
export function isEmpty(node: YamlNode): boolean {
  return node.type === 'scalar' && node.plain && (node.text === '' || node.text === '~' || node.text === 'null');
}

export function entryOf(mapping: YamlMapping, key: string): YamlEntry | undefined {
  return mapping.entries.find((entry) => entry.key === key);
}

/** Reports every key that comes twice, anywhere in the tree; `words` may put it otherwise for the keys of a path. */
export function reportRepeatedKeys(
  node: YamlNode,
  words: (path: readonly string[], entry: YamlEntry, first: YamlEntry) => Words | undefined = () => undefined,
  path: readonly string[] = [],
): void {
  if (node.type === 'sequence') {
    for (const item of node.items) reportRepeatedKeys(item, words, path);
  } else if (node.type === 'mapping') {
    for (const entry of node.repeated) {
      const first = entryOf(node, entry.key)!;
      const fallback: Words = {
        message: `\`${entry.key}\` comes twice: it stands already in line ${first.keyNode.place.line}`,
        expected: 'each key once',
      };
      report(node.passage, entry.keyNode.place, words(path, entry, first) ?? fallback);
    }
    for (const entry of node.entries) reportRepeatedKeys(entry.value, words, [...path, entry.key]);
  }
}

const TAB_WORDS: Words = { message: 'a tab indents this line', expected: 'blanks, as YAML has it' };
const TOO_DEEP_WORDS: Words = {
  message: `this is nested more than ${DEEPEST_NESTING} levels deep`,
  expected: 'a flatter text',
};

type YamlEvent = ReturnType<typeof parseEvents>[number];

function buildTree(passage: Passage, events: readonly YamlEvent[]): YamlNode | undefined {
  const { text } = passage;
  let at = 0;
  /** Where the last node read ended. */
  let end = 0;

  /** Reads one node; `after` is where the last key or item before it ended, the place of a node that is not there. */
  const readNode = (depth: number, after: number): YamlNode => {
    const event = events[at++]!;
    if (depth > DEEPEST_NESTING) throw new RangeError('nesting');
    refuseDecorations(passage, event);
    if (event.type === EVENT_SCALAR) {
      end = event.valueStart < 0 ? after : event.valueEnd + (event.style === 2 || event.style === 3 ? 1 : 0);
      return scalarOf(passage, event, after);
    }
    end = Math.max(end, event.type === EVENT_ALIAS ? event.anchorEnd : 'start' in event ? event.start + 1 : 0);
    if (event.type === EVENT_SEQUENCE) {
      const items: YamlNode[] = [];
      while (events[at]!.type !== EVENT_POP) items.push(readNode(depth + 1, event.start));
      at++;
      if (event.style === 2) end = closing(text, ']', end);
      return { type: 'sequence', items, place: placeOf(passage, event.start, end), passage };
    }
    if (event.type === EVENT_MAPPING) {
      const entries: YamlEntry[] = [];
      const repeated: YamlEntry[] = [];
      const seen = new Set<string>();
      while (events[at]!.type !== EVENT_POP) {
        const key = readNode(depth + 1, event.start);
        const keyNode = key.type === 'scalar' ? key : undefined;
        const value = readNode(depth + 1, keyNode ? endOf(keyNode) : event.start);
        if (!keyNode) {
          report(passage, key.place, { message: 'this key is a list or a mapping', expected: 'a name as the key' });
          continue;
        }
        (seen.has(keyNode.text) ? repeated : entries).push({ key: keyNode.text, keyNode, value });
        seen.add(keyNode.text);
      }
      at++;
      if (event.style === 2) end = closing(text, '}', end);
      const place = placeOf(passage, event.start, end);
      return { type: 'mapping', entries, repeated, place, passage };
    }
    // An alias; reported already, and it stands for nothing.
    return scalarOf(passage, undefined, after);
  };

  let root: YamlNode | undefined;
  while (at < events.length) {
    const event = events[at]!;
    if (event.type === EVENT_DOCUMENT || event.type === EVENT_POP) {
      at++;
      continue;
    }
    const node = readNode(0, 0);
    if (root === undefined) root = node;
    else {
      report(passage, node.place, {
        message: 'a second YAML document begins here',
        expected: 'one document, without `---`',
      });
      break;
    }
  }
  return root !== undefined && isEmpty(root) ? undefined : root;
}

function scalarOf(
  passage: Passage,
  event: Extract<YamlEvent, { type: typeof EVENT_SCALAR }> | undefined,
  after: number,
): YamlScalar {
  if (event === undefined || event.valueStart < 0) {
    return { type: 'scalar', text: '', plain: true, place: placeOf(passage, after, after + 1), passage, offsets: [] };
  }
  const text = getScalarValue(passage.text, event);
  const plain = event.style === SCALAR_STYLE_PLAIN;
  const offsets = alignOffsets(passage.text, event.valueStart, event.valueEnd, text, event.style === 3);
  const quotes = plain || event.style > 3 ? 0 : 1;
  const place = placeOf(passage, event.valueStart - quotes, event.valueEnd + quotes);
  return { type: 'scalar', text, plain, place, passage, offsets };
}

/** Where each character of a scalar's value was written: escapes and folded lines make the two differ. */
function alignOffsets(source: string, start: number, end: number, value: string, escapes: boolean): number[] {
  const offsets: number[] = [];
  if (source.slice(start, end) === value) {
    for (let at = start; at < end; at++) offsets.push(at);
    return offsets;
  }
  const blank = /\s/;
  let at = start;
  for (const character of value) {
    if (blank.test(character)) {
      while (at < end && !blank.test(source[at]!) && source[at] !== '\\') at++;
      offsets.push(Math.min(at, end - 1));
      if (source[at] === '\\') at += 2;
      else while (at < end && blank.test(source[at]!) && (character === ' ' || character === '\n')) at++;
      continue;
    }
    while (at < end && blank.test(source[at]!)) at++;
    const from = Math.min(at, Math.max(start, end - 1));
    for (let unit = 0; unit < character.length; unit++) offsets.push(Math.min(from + unit, Math.max(start, end - 1)));
    if (source[at] === character[0]) at += character === "'" && source[at + 1] === "'" ? 2 : character.length;
    else if (escapes && source[at] === '\\')
      at += ({ x: 4, u: 6, U: 10 } as Record<string, number>)[source[at + 1] ?? ''] ?? 2;
    else at++;
  }
  return offsets;
}

function refuseDecorations(passage: Passage, event: YamlEvent): void {
  if (event.type === EVENT_ALIAS) {
    report(passage, placeOf(passage, event.anchorStart - 1, event.anchorEnd), {
      message: `\`*${passage.text.slice(event.anchorStart, event.anchorEnd)}\` is a YAML alias, and aliases are not read here`,
      expected: 'the value written out, or in quotes where the asterisk belongs to it',
    });
    return;
  }
  if ('anchorStart' in event && event.anchorStart >= 0) {
    report(passage, placeOf(passage, event.anchorStart - 1, event.anchorEnd), {
      message: 'this is a YAML anchor, and anchors are not read here',
      expected: 'the value alone, or in quotes where the `&` belongs to it',
    });
  }
  if ('tagStart' in event && event.tagStart >= 0) {
    report(passage, placeOf(passage, event.tagStart, event.tagEnd), {
      message: 'this is a YAML tag, and tags are not read here',
      expected: 'the value alone, or in quotes where the `!` belongs to it',
    });
  }
}

function endOf(scalar: YamlScalar): number {
  return scalar.offsets.length === 0 ? 0 : scalar.offsets.at(-1)! + 1;
}

/** Index after the bracket that closes a collection whose last entry ended at `from`. */
function closing(text: string, bracket: string, from: number): number {
  const found = text.indexOf(bracket, from);
  return found === -1 ? from : found + 1;
}
