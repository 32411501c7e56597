/** A part of the tree as plain data, by the core schema of YAML 1.2: numbers, truth values and null where unquoted. */
import { report } from './passage.ts';
import type { YamlNode, YamlScalar } from './yaml-tree.ts';

/** Names that would reach beyond the object when it is merged into another. */
const UNSAFE = ['__proto__', 'constructor', 'prototype'];

/** Keys that could reach a prototype are reported and left out. */
export function plainValue(node: YamlNode): unknown {
  if (node.type === 'scalar') return scalarValue(node);
  if (node.type === 'sequence') return node.items.map(plainValue);
  const pairs: [string, unknown][] = [];
  for (const { key, keyNode, value } of node.entries) {
    if (UNSAFE.includes(key)) report(keyNode.passage, keyNode.place, { message: `\`${key}\` cannot be a key here` });
    else pairs.push([key, plainValue(value)]);
  }
  return Object.fromEntries(pairs);
}

function scalarValue({ text, plain }: YamlScalar): unknown {
  if (!plain) return text;
  if (/^(?:~|null|Null|NULL|)$/.test(text)) return null;
  if (/^(?:true|True|TRUE)$/.test(text)) return true;
  if (/^(?:false|False|FALSE)$/.test(text)) return false;
  if (/^[-+]?(?:\.\d+|\d+(?:\.\d*)?)(?:[eE][-+]?\d+)?$/.test(text)) return Number(text);
  return text;
}
