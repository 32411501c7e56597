/** Nodes that no direct current can reach: only capacitors (or sources of current) tie them to the reference. */
import type { Circuit } from '../circuit.ts';
import { REFERENCE_NODE } from '../circuit.ts';

/**
 * The groups of nodes without a path to the reference node through anything that conducts direct current. An open
 * switch or threshold diode counts as a path: it leaks when nothing else decides.
 */
export function floatingIslands(circuit: Circuit): string[][] {
  const parent = new Map<string, string>();
  const find = (node: string): string => {
    let root = node;
    while (parent.get(root) !== undefined && parent.get(root) !== root) root = parent.get(root)!;
    parent.set(node, root);
    return root;
  };
  find(REFERENCE_NODE);
  for (const component of circuit.components) {
    for (const node of component.nodes) if (!parent.has(node)) parent.set(node, node);
    const conducts =
      component.kind !== 'capacitor' &&
      component.kind !== 'current-source' &&
      !(component.kind === 'controlled-source' && component.output === 'current');
    if (conducts) parent.set(find(component.nodes[0]), find(component.nodes[1]));
  }
  const groups = new Map<string, string[]>();
  for (const node of parent.keys()) {
    const root = find(node);
    groups.set(root, [...(groups.get(root) ?? []), node]);
  }
  groups.delete(find(REFERENCE_NODE));
  return [...groups.values()];
}
