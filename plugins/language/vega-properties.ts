/**
 * The `vega:` of a plot: properties to be merged into its Vega-Lite specification. What would load data, open an address or
 * evaluate code is refused: a page fetches nothing, and a note is not a program.
 */
import { expectedName } from './nearest.ts';
import { report } from './passage.ts';
import { plainValue } from './plain-value.ts';
import type { YamlEntry, YamlMapping, YamlNode } from './yaml-tree.ts';

/** What the top level of a layered specification may have. */
export const VEGA_PROPERTIES: readonly string[] = [
  '$schema',
  'autosize',
  'background',
  'config',
  'description',
  'encoding',
  'height',
  'layer',
  'mark',
  'name',
  'padding',
  'resolve',
  'title',
  'view',
  'width',
];

const LOADS = new Set(['url', 'href', 'lookup', 'datasets', 'projection', 'usermeta', 'image']);
const EVALUATES = new Set([
  'expr',
  'signal',
  'signals',
  'params',
  'param',
  'calculate',
  'labelExpr',
  'events',
  'bind',
  'select',
]);
/** Conditions may be mappings (`{ field: x, lt: 5 }`), not text to be evaluated. */
const CONDITIONS = new Set(['filter', 'test']);
const LOADING_MARKS = new Set(['image', 'geoshape']);

/** The properties as plain data; nothing where one of them is refused. A property that Vega-Lite does not know is left out with a warning. */
export function readVegaProperties(node: YamlMapping): { readonly [key: string]: unknown } | undefined {
  const known: YamlEntry[] = [];
  let sound = true;
  for (const entry of node.entries) {
    const { key, keyNode } = entry;
    if (key === 'data' || key === 'transform') {
      refuse(entry, 'the data of a plot are its `lines`');
      sound = false;
    } else if (!isSound(entry)) sound = false;
    else if (VEGA_PROPERTIES.includes(key)) known.push(entry);
    else {
      report(keyNode.passage, keyNode.place, {
        message: `\`${key}\` is not a property of a plot's specification, and has no effect`,
        expected: expectedName(key, VEGA_PROPERTIES),
        severity: 'warning',
      });
    }
  }
  return sound ? (plainValue({ ...node, entries: known }) as { readonly [key: string]: unknown }) : undefined;
}

function isSound(entry: YamlEntry): boolean {
  const { key, value } = entry;
  if (LOADS.has(key)) return refuse(entry, 'a plot loads nothing and opens no address');
  if (EVALUATES.has(key)) return refuse(entry, 'a plot evaluates no code');
  if (CONDITIONS.has(key) && value.type === 'scalar') return refuse(entry, 'a plot evaluates no code');
  const mark = key === 'mark' ? markOf(value) : undefined;
  if (mark !== undefined && LOADING_MARKS.has(mark)) return refuse(entry, 'a plot loads nothing');
  return isSoundValue(value);
}

function isSoundValue(node: YamlNode): boolean {
  if (node.type === 'scalar') return true;
  // every one is looked at, so that all are reported
  const each =
    node.type === 'sequence' ? node.items.map(isSoundValue) : [...node.entries, ...node.repeated].map(isSound);
  return !each.includes(false);
}

function markOf(node: YamlNode): string | undefined {
  if (node.type === 'scalar') return node.text;
  if (node.type === 'sequence') return undefined;
  const type = node.entries.find(({ key }) => key === 'type')?.value;
  return type?.type === 'scalar' ? type.text : undefined;
}

function refuse({ key, keyNode }: YamlEntry, reason: string): false {
  report(keyNode.passage, keyNode.place, {
    message: `\`${key}\` is refused: ${reason}`,
    expected: 'properties of form: sizes, axes, scales, marks, titles',
    example: 'vega: { height: 260 }',
  });
  return false;
}
