/** The author's `vega:` merged into a plot's specification, without what could reach outside or run code. */
import type { Json } from './plot-spec.ts';

/** Keys that load data, open addresses or evaluate expressions. */
const REFUSED_KEYS = new Set([
  'url',
  'href',
  'expr',
  'signal',
  'params',
  'usermeta',
  'calculate',
  'lookup',
  'loader',
  'update',
  'events',
  'bind',
]);

const REFUSED_MARKS = new Set(['image', 'geoshape']);

const TOP_LEVEL = new Set([
  '$schema',
  'description',
  'title',
  'width',
  'height',
  'autosize',
  'padding',
  'background',
  'layer',
  'resolve',
  'config',
  'encoding',
  'mark',
  'name',
  'view',
  'transform',
]);

const UNSAFE_NAMES = new Set(['__proto__', 'constructor', 'prototype']);

export function mergeAuthorSpecification(specification: Json, author: Json, warnings: string[]): Json {
  for (const key of Object.keys(author)) {
    if (!TOP_LEVEL.has(key)) warnings.push(`\`vega: ${key}\` is no property of a plot and was left out`);
  }
  const known = Object.fromEntries(Object.entries(author).filter(([key]) => TOP_LEVEL.has(key)));
  return merge(specification, clean(known, warnings) as Json);
}

function clean(value: unknown, warnings: string[]): unknown {
  if (Array.isArray(value)) return value.map((item) => clean(item, warnings));
  if (typeof value !== 'object' || value === null) return value;
  const result: { [key: string]: unknown } = {};
  for (const [key, inner] of Object.entries(value)) {
    if (UNSAFE_NAMES.has(key)) continue;
    const isExpression = (key === 'filter' || key === 'test') && typeof inner === 'string';
    const isMark =
      key === 'mark' && REFUSED_MARKS.has(typeof inner === 'string' ? inner : String((inner as Json)?.type));
    if (REFUSED_KEYS.has(key) || isExpression || isMark) {
      warnings.push(`\`vega: ${key}\` was left out: a plot loads nothing, opens nothing and runs no expression`);
      continue;
    }
    result[key] = clean(inner, warnings);
  }
  return result;
}

function merge(base: Json, addition: Json): Json {
  const result: { [key: string]: unknown } = { ...base };
  for (const [key, value] of Object.entries(addition)) {
    const before = result[key];
    const both = isObject(before) && isObject(value);
    result[key] = both ? merge(before, value) : value;
  }
  return result;
}

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
