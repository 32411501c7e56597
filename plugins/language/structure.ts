/**
 * Faults of a circuit's structure, named in its own words before anything is solved: nodes without a path to `gnd`, loops
 * of voltage sources and inductors, cut-sets of current sources and capacitors, pins that nothing else meets.
 */
import { type Circuit, type Component, REFERENCE_NODE } from '../../solver/circuit.ts';
import type { Words } from '../problems.ts';
import type { CircuitReading } from './circuit-block.ts';
import type { Place } from './model.ts';
import { expectedName, list, nearest } from './nearest.ts';
import { report } from './passage.ts';

/**
 * Checks a circuit that could be read and reports its faults. `needsOperatingPoint` is false where every analysis starts
 * from stated voltages and currents: then a loop with an inductor and a cut-set of current sources and capacitors have a
 * solution. Returns whether the circuit can be solved.
 */
export function checkStructure(reading: CircuitReading, needsOperatingPoint: boolean): boolean {
  const { block, passage } = reading;
  if (!block) return false;
  const { circuit } = block;
  let sound = true;
  const fault = (place: Place, words: Words) => {
    report(passage, place, words);
    if (words.severity !== 'warning') sound = false;
  };
  const nodeNames = [...new Set(circuit.components.flatMap((component) => component.nodes))];
  checkReferences(circuit, reading, nodeNames, fault);
  if (!nodeNames.includes(REFERENCE_NODE)) {
    const meant = nearest(REFERENCE_NODE, nodeNames);
    const hint = meant ? ` (\`${meant}\` is near to it)` : '';
    fault(reading.place, {
      message: `no component of \`${circuit.name}\` touches \`gnd\``,
      expected: `\`gnd\` as the node that potentials are counted from${hint}`,
    });
    return false;
  }
  checkPins(circuit, reading, nodeNames, fault);
  checkPaths(circuit, reading, nodeNames, fault);
  checkLoops(circuit, reading, needsOperatingPoint, fault);
  if (needsOperatingPoint) checkCutSets(circuit, reading, nodeNames, fault);
  return sound;
}

type Fault = (place: Place, words: Words) => void;

function checkReferences(circuit: Circuit, reading: CircuitReading, nodeNames: readonly string[], fault: Fault): void {
  const designators = circuit.components.map((component) => component.designator);
  for (const component of circuit.components) {
    const place = reading.designators.get(component.designator)!;
    const missing = controlNodes(component).filter((node) => !nodeNames.includes(node));
    for (const node of missing) {
      fault(place, {
        message: `\`${component.designator}\` is controlled by the node \`${node}\`, and nothing connects to it`,
        expected: expectedName(node, nodeNames),
      });
    }
    if (component.kind !== 'controlled-source' || component.control.quantity !== 'current') continue;
    const sensed = component.control.component;
    if (designators.includes(sensed) && sensed !== component.designator) continue;
    fault(place, {
      message:
        sensed === component.designator
          ? `\`${sensed}\` senses its own current`
          : `\`${component.designator}\` senses the current of \`${sensed}\`, and there is no such component`,
      expected: expectedName(
        sensed,
        designators.filter((designator) => designator !== component.designator),
      ),
    });
  }
}

function controlNodes(component: Component): readonly string[] {
  if (component.kind === 'controlled-source' && component.control.quantity === 'voltage')
    return component.control.nodes;
  if (component.kind === 'switch' && component.drive.by === 'voltage') return component.drive.nodes;
  return [];
}

function checkPins(circuit: Circuit, reading: CircuitReading, nodeNames: readonly string[], fault: Fault): void {
  const sensed = new Set(circuit.components.flatMap(controlNodes));
  for (const component of circuit.components) {
    const [first, second] = component.nodes;
    if (first !== second) continue;
    fault(reading.designators.get(component.designator)!, {
      message: `both pins of \`${component.designator}\` stand on \`${first}\`, so it does nothing`,
      expected: 'two nodes',
      severity: 'warning',
    });
  }
  for (const node of nodeNames) {
    const touching = reading.pins.filter((pin) => pin.node === node);
    if (touching.length !== 1 || sensed.has(node)) continue;
    const pin = touching[0]!;
    const meant = nearest(
      node,
      nodeNames.filter((other) => other !== node),
    );
    const expected = meant ? `\`${meant}\` is the nearest node` : 'a second component at this node, or another node';
    fault(pin.place, {
      message: `\`${pin.designator}\` alone touches the node \`${node}\`: its pin is unconnected`,
      expected,
    });
  }
}

function checkPaths(circuit: Circuit, reading: CircuitReading, nodeNames: readonly string[], fault: Fault): void {
  const groups = grouped(nodeNames, circuit.components);
  const reference = groups.get(REFERENCE_NODE);
  const reported = new Set<string>();
  for (const node of nodeNames) {
    const group = groups.get(node)!;
    if (group === reference || reported.has(group)) continue;
    reported.add(group);
    const members = nodeNames.filter((other) => groups.get(other) === group);
    const pin = reading.pins.find((candidate) => candidate.node === node)!;
    const verb = members.length === 1 ? 'the node' : 'the nodes';
    fault(pin.place, {
      message: `${verb} ${list(members)} ${members.length === 1 ? 'has' : 'have'} no path to \`gnd\``,
      expected: 'a component from there to the rest of the circuit',
    });
  }
}

/** A loop of voltage sources leaves its current undetermined; one with inductors does so in an operating point. */
function checkLoops(circuit: Circuit, reading: CircuitReading, needsOperatingPoint: boolean, fault: Fault): void {
  const stiff = circuit.components.filter(
    (component) => fixesVoltage(component) && component.nodes[0] !== component.nodes[1],
  );
  const inductors = needsOperatingPoint
    ? circuit.components.filter(
        (component) => component.kind === 'inductor' && component.nodes[0] !== component.nodes[1],
      )
    : [];
  const tree: Component[] = [];
  const { join } = joiner();
  for (const component of [...stiff, ...inductors]) {
    const [first, second] = component.nodes;
    if (join(first, second)) {
      tree.push(component);
      continue;
    }
    const loop = [...pathBetween(first, second, tree), component];
    const inOrder = circuit.components.filter((other) => loop.includes(other)).map((other) => other.designator);
    const withInductor = loop.some((other) => other.kind === 'inductor');
    fault(reading.designators.get(inOrder.at(-1)!)!, {
      message: withInductor
        ? `${list(inOrder)} are a loop of voltage sources and inductors: the operating point does not determine its current`
        : `${list(inOrder)} are a loop of voltage sources: nothing determines its current`,
      expected: withInductor
        ? 'a resistance in the loop, or `start: rest` in a time response'
        : 'a resistance in the loop, or one source in place of several',
    });
  }
}

function fixesVoltage(component: Component): boolean {
  return component.kind === 'source' || (component.kind === 'controlled-source' && component.output === 'voltage');
}

function forcesCurrent(component: Component): boolean {
  return (
    component.kind === 'current-source' || (component.kind === 'controlled-source' && component.output === 'current')
  );
}

/** A part of the circuit that only current sources and capacitors join to the rest has no operating point. */
function checkCutSets(circuit: Circuit, reading: CircuitReading, nodeNames: readonly string[], fault: Fault): void {
  const isCut = (component: Component) => forcesCurrent(component) || component.kind === 'capacitor';
  const groups = grouped(
    nodeNames,
    circuit.components.filter((component) => !isCut(component)),
  );
  const reference = groups.get(REFERENCE_NODE);
  const reported = new Set<string>();
  for (const node of nodeNames) {
    const group = groups.get(node)!;
    if (group === reference || reported.has(group)) continue;
    reported.add(group);
    const boundary = circuit.components.filter(
      ({ nodes }) => (groups.get(nodes[0]) === group) !== (groups.get(nodes[1]) === group),
    );
    const source = boundary.find(forcesCurrent);
    if (!source) continue;
    const members = nodeNames.filter((other) => groups.get(other) === group);
    fault(reading.designators.get(source.designator)!, {
      message: `only current sources and capacitors (${list(boundary.map((component) => component.designator))}) join ${list(members)} to the rest: its potential has no operating point`,
      expected: 'a resistance beside them, or `start: rest` in a time response',
    });
  }
}

/** For each node the name of its group: nodes joined by the given components are of one group. */
function grouped(nodeNames: readonly string[], components: readonly Component[]): Map<string, string> {
  const { join, rootOf } = joiner();
  for (const { nodes } of components) join(nodes[0], nodes[1]);
  return new Map(nodeNames.map((node) => [node, rootOf(node)]));
}

/** Disjoint sets of nodes. `join` says whether its two nodes were apart before. */
function joiner(): { join: (first: string, second: string) => boolean; rootOf: (node: string) => string } {
  const parent = new Map<string, string>();
  const rootOf = (node: string): string => {
    let root = node;
    for (let above = parent.get(root); above !== undefined && above !== root; above = parent.get(root)) root = above;
    // The way is shortened for the next that goes it.
    for (let at = node; at !== root; ) {
      const above = parent.get(at)!;
      parent.set(at, root);
      at = above;
    }
    return root;
  };
  const join = (first: string, second: string): boolean => {
    const [one, other] = [rootOf(first), rootOf(second)];
    if (one === other) return false;
    parent.set(one, other);
    return true;
  };
  return { join, rootOf };
}

/** The components of a tree that lead from one of its nodes to another. */
function pathBetween(from: string, to: string, tree: readonly Component[]): readonly Component[] {
  const beside = new Map<string, Component[]>();
  for (const component of tree) {
    for (const node of component.nodes) beside.set(node, [...(beside.get(node) ?? []), component]);
  }
  const cameBy = new Map<string, { component: Component; previous: string } | undefined>([[from, undefined]]);
  const queue = [from];
  for (const node of queue) {
    if (node === to) break;
    for (const component of beside.get(node) ?? []) {
      const next = component.nodes[0] === node ? component.nodes[1] : component.nodes[0];
      if (cameBy.has(next)) continue;
      cameBy.set(next, { component, previous: node });
      queue.push(next);
    }
  }
  const path: Component[] = [];
  for (let step = cameBy.get(to); step; step = cameBy.get(step.previous)) path.push(step.component);
  return path;
}
