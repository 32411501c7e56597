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

/**
 * Capacitors of which no chain leads to the reference or to a node of known potential, though direct current does (across the load of a bridge).
 * Their currents are made unknowns: in the equations of two nodes that a large capacitance over a short step ties together, the little that ties
 * both to the rest would be lost in rounding.
 */
export function floatingCapacitors(circuit: Circuit, driven: Iterable<string>): Set<string> {
  const capacitors = circuit.components.filter(({ kind }) => kind === 'capacitor');
  // an island's charge is summed over its nodes' own equations
  const reached = new Set([REFERENCE_NODE, ...driven, ...floatingIslands(circuit).flat()]);
  for (let grown = true; grown; ) {
    grown = false;
    for (const { nodes } of capacitors) {
      if (reached.has(nodes[0]) === reached.has(nodes[1])) continue;
      for (const node of nodes) reached.add(node);
      grown = true;
    }
  }
  return new Set(capacitors.filter(({ nodes }) => !reached.has(nodes[0])).map(({ designator }) => designator));
}
