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

/** Kinds that hold a node whatever the rest of the circuit does. */
const HOLDS = new Set(['resistor', 'source', 'inductor', 'controlled-source', 'curve']);

/**
 * Capacitors in groups that only junctions and contacts tie to the rest, so that blocked ones leave next to nothing (across the load of a bridge).
 * Their currents are made unknowns: in the equations of two nodes that a large capacitance over a short step ties together, the little that ties
 * both to the rest would be lost in rounding.
 */
export function floatingCapacitors(circuit: Circuit, driven: Iterable<string>): Set<string> {
  const group = new Map<string, string>();
  const find = (node: string): string => {
    let root = node;
    for (let up = group.get(root); up !== undefined && up !== root; up = group.get(root)) root = up;
    return root;
  };
  const capacitors = circuit.components.filter(({ kind }) => kind === 'capacitor');
  for (const { nodes } of capacitors) group.set(find(nodes[0]), find(nodes[1]));
  // groups that something linear leads out of, or that hold a known potential or a charge of their own
  const held = new Set([REFERENCE_NODE, ...driven, ...floatingIslands(circuit).flat()].map(find));
  for (const { kind, nodes } of circuit.components) {
    const [first, second] = [find(nodes[0]), find(nodes[1])];
    if (!HOLDS.has(kind) || first === second) continue;
    held.add(first);
    held.add(second);
  }
  return new Set(capacitors.filter(({ nodes }) => !held.has(find(nodes[0]))).map(({ designator }) => designator));
}
