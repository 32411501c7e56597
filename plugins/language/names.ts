/** Names that an author gives: designators, nodes, figures. */
import { report } from './passage.ts';
import type { YamlNode, YamlScalar } from './yaml-tree.ts';

const NAME = /^[A-Za-z_][A-Za-z0-9_]*$/;
/** Words of expressions. */
const RESERVED = ['and', 'or', 'not'];
/** Would reach beyond an object that is keyed by names. */
const UNSAFE = '__proto__';

/** Checks a name and reports what is wrong with it; `what` is the thing named, with its article. */
export function checkName(node: YamlScalar, what: string): string | undefined {
  const name = node.text.trim();
  if (NAME.test(name) && !RESERVED.includes(name) && name !== UNSAFE) return name;
  report(node.passage, node.place, {
    message: RESERVED.includes(name)
      ? `\`${name}\` is a word of expressions and cannot name ${what}`
      : `\`${name}\` cannot name ${what}`,
    expected: 'letters, digits and `_`, beginning with a letter',
  });
  return undefined;
}

export interface NamedNode {
  readonly name: string;
  readonly node: YamlScalar;
}

/** A list of exactly two nodes, as `nodes: [a, gnd]` and `control: [a, b]` have it. */
export function readTwoNodes(value: YamlNode, key: string): readonly [NamedNode, NamedNode] | undefined {
  const items = value.type === 'sequence' ? value.items : undefined;
  if (items?.length !== 2) {
    const found = items
      ? `${items.length} ${items.length === 1 ? 'node' : 'nodes'}`
      : value.type === 'mapping'
        ? 'a mapping'
        : 'one name';
    report(value.passage, value.place, {
      message: `\`${key}\` holds ${found}, and two nodes are due`,
      expected: 'the first and the second node',
      example: `${key}: [a, gnd]`,
    });
    return undefined;
  }
  const read = items.map((item) => {
    if (item.type === 'scalar') {
      const name = checkName(item, 'a node');
      return name === undefined ? undefined : { name, node: item };
    }
    report(item.passage, item.place, { message: 'a list or a mapping stands where a node is due', expected: 'a name' });
    return undefined;
  });
  const [first, second] = read;
  return first && second ? [first, second] : undefined;
}
