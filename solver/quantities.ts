/** Reading quantities off a solution: a node's potential, or a component's voltage, current, power, charge, flux or energy. */
import { isOverTime, type Solution } from './analysis.ts';
import type { Circuit, Component } from './circuit.ts';
import { REFERENCE_NODE } from './circuit.ts';
import { buildSystem } from './equations/build-system.ts';
import type { System } from './equations/system.ts';
import { smoothStarts } from './smooth-starts.ts';
import { evaluateSegment, segmentAt, waveCorners } from './wave-evaluation.ts';
import { COLLOCATION_NODES, type Waveform } from './waveform/waveform.ts';
import type { Wave } from './waves.ts';

export type Property = 'v' | 'i' | 'p' | 'q' | 'flux' | 'energy';

export type QuantityName =
  | { readonly node: string }
  | { readonly designator: string; readonly property: Property }
  /** Seconds, or the swept value: the axis of the solution itself. */
  | { readonly axis: true };

/** derivativeWeights[s][r]: what the value at node r adds to the derivative at node s, for a step of length 1. */
const DERIVATIVE_WEIGHTS = COLLOCATION_NODES.map((at) =>
  COLLOCATION_NODES.map((_, r) => {
    let sum = 0;
    for (let m = 0; m < 4; m++) {
      if (m === r) continue;
      let product = 1 / (COLLOCATION_NODES[r]! - COLLOCATION_NODES[m]!);
      for (let k = 0; k < 4; k++)
        if (k !== r && k !== m)
          product *= (at - COLLOCATION_NODES[k]!) / (COLLOCATION_NODES[r]! - COLLOCATION_NODES[k]!);
      sum += product;
    }
    return sum;
  }),
);

/** The quantity over the solution's grid; for an operating point a waveform of one step of no length. */
export function readQuantity(solution: Solution, name: QuantityName): Waveform {
  const { grid } = solution;
  if ('axis' in name) return { grid, values: axisValues(grid) };
  const reader = readerOf(solution);
  if ('node' in name) return { grid, values: reader.node(name.node) };
  const component = solution.circuit.components.find(({ designator }) => designator === name.designator);
  if (!component) throw new Error(`Internal error: no component '${name.designator}'`);
  return { grid, values: readProperty(reader, component, name.property) };
}

/** The quantity of an operating point. */
export function readNumber(solution: Solution, name: QuantityName): number {
  return readQuantity(solution, name).values[3]!;
}

interface Reader {
  readonly solution: Solution;
  readonly system: System;
  /** Potential at the 4 N nodes. */
  readonly node: (name: string) => Float64Array;
  readonly unknown: (index: number) => Float64Array;
}

const systems = new WeakMap<Circuit, System>();

function readerOf(solution: Solution): Reader {
  let system = systems.get(solution.circuit);
  if (!system) {
    system = buildSystem(solution.circuit);
    systems.set(solution.circuit, system);
  }
  const built = system;
  built.junctionLeak.siemens = solution.junctionLeak;
  const { size, nodeIndex } = built;
  const count = 4 * (solution.grid.length - 1 || 1);
  const unknown = (index: number): Float64Array => {
    const values = new Float64Array(count);
    for (let k = 0, at = index; k < count; k++, at += size) values[k] = solution.unknowns[at]!;
    return values;
  };
  return {
    solution,
    system,
    unknown,
    node: (name) => {
      if (name === REFERENCE_NODE) return new Float64Array(count);
      const index = nodeIndex.get(name);
      if (index === undefined) throw new Error(`Internal error: no node '${name}'`);
      if (index < size) return unknown(index);
      const source = built.driven.find((node) => node.index === index)!;
      return driveValues(solution, source).map((value) => source.sign * value);
    },
  };
}

function readProperty(reader: Reader, component: Component, property: Property): Float64Array {
  const voltage = (): Float64Array => {
    const values = reader.node(component.nodes[0]);
    const second = reader.node(component.nodes[1]);
    return values.map((value, k) => value - second[k]!);
  };
  switch (property) {
    case 'v':
      return voltage();
    case 'i':
      return readCurrent(reader, component, voltage);
    case 'p': {
      const current = readCurrent(reader, component, voltage);
      return voltage().map((value, k) => value * current[k]!);
    }
    case 'q': {
      const capacitance = storageOf(reader, component, 'capacitor');
      return voltage().map((value) => capacitance * value);
    }
    case 'flux': {
      const inductance = storageOf(reader, component, 'inductor');
      return readCurrent(reader, component, voltage).map((value) => inductance * value);
    }
    case 'energy': {
      if (component.kind === 'capacitor') {
        const capacitance = storageOf(reader, component, 'capacitor');
        return voltage().map((value) => (capacitance * value * value) / 2);
      }
      const inductance = storageOf(reader, component, 'inductor');
      return readCurrent(reader, component, voltage).map((value) => (inductance * value * value) / 2);
    }
  }
}

/** Capacitance or inductance at the circuit's temperature. */
function storageOf(reader: Reader, component: Component, kind: 'capacitor' | 'inductor'): number {
  if (component.kind !== kind) throw new Error(`Internal error: ${component.designator} is no ${kind}`);
  const nominal =
    component.kind === 'capacitor' ? component.capacitance : (component as { inductance: number }).inductance;
  return nominal * (1 + (component.temperatureCoefficient ?? 0) * (reader.solution.circuit.temperature - 298.15));
}

function readCurrent(reader: Reader, component: Component, voltage: () => Float64Array): Float64Array {
  const { system, solution } = reader;
  const branch = system.branchIndex.get(component.designator);
  if (branch !== undefined) return reader.unknown(branch);
  switch (component.kind) {
    case 'resistor': {
      const conductance =
        1 /
        (component.resistance *
          (1 + (component.temperatureCoefficient ?? 0) * (solution.circuit.temperature - 298.15)));
      return voltage().map((value) => conductance * value);
    }
    case 'capacitor': {
      const capacitance = storageOf(reader, component, 'capacitor');
      if (!isOverTime(solution.request)) return voltage().fill(0);
      const current = derivativeAtNodes(solution.grid, voltage()).map((value) => capacitance * value);
      // extrapolated from the stages to the start of the step it is of low order: what else flows into its node, or, where
      // nothing jumps, the step before knows it better
      const balance = currentByBalance(reader, component);
      smoothStarts(solution, system).forEach((smooth, step) => {
        if (balance) current[4 * step] = balance[4 * step]!;
        else if (smooth) current[4 * step] = current[4 * step - 1]!;
      });
      return current;
    }
    case 'current-source':
      return driveValues(solution, system.drives.find(({ designator }) => designator === component.designator)!);
    case 'source':
      return currentFromNode(reader, component);
    case 'controlled-source': {
      const { control, gain } = component;
      if (control.quantity === 'current') {
        return reader.unknown(system.branchIndex.get(control.component)!).map((value) => gain * value);
      }
      const first = reader.node(control.nodes[0]);
      const second = reader.node(control.nodes[1]);
      return first.map((value, k) => gain * (value - second[k]!));
    }
    default: {
      const law = system.laws.find(({ designator }) => designator === component.designator);
      if (!law) throw new Error(`Internal error: no law for ${component.designator}`);
      const result = new Float64Array(2);
      return voltage().map((value) => {
        law.evaluate(value, result);
        return result[0]!;
      });
    }
  }
}

/** A capacitor's current by Kirchhoff's law at one of its nodes, where no other capacitor and no source that fixes the node's potential stands. */
function currentByBalance(reader: Reader, capacitor: Component): Float64Array | undefined {
  const { components } = reader.solution.circuit;
  for (const [node, other] of [capacitor.nodes, [...capacitor.nodes].reverse()]) {
    const index = reader.system.nodeIndex.get(node!);
    if (node === other || node === REFERENCE_NODE || index === undefined || index >= reader.system.size) continue;
    const rest = components.filter((component) => component !== capacitor && component.nodes.includes(node!));
    if (rest.some(({ kind }) => kind === 'capacitor')) continue;
    return sumIntoNode(reader, node!, rest).map((value) => (node === capacitor.nodes[0] ? -value : value));
  }
  return undefined;
}

/** The current of a source that fixes a node's potential: what the node's other components do not carry away. */
function currentFromNode(reader: Reader, source: Component): Float64Array {
  const { solution, system } = reader;
  const driven = system.driven.find(({ designator }) => designator === source.designator)!;
  const node = source.nodes[driven.sign === 1 ? 0 : 1];
  const others = solution.circuit.components.filter((other) => other !== source);
  return sumIntoNode(reader, node, others).map((value) => -driven.sign * value);
}

/** The sum of the currents that flow from the node into the components. */
function sumIntoNode(reader: Reader, node: string, components: readonly Component[]): Float64Array {
  const sum = new Float64Array(4 * (reader.solution.grid.length - 1 || 1));
  for (const component of components) {
    const sign = (component.nodes[0] === node ? 1 : 0) - (component.nodes[1] === node ? 1 : 0);
    if (sign === 0) continue;
    const current = readProperty(reader, component, 'i');
    for (let k = 0; k < sum.length; k++) sum[k]! += sign * current[k]!;
  }
  return sum;
}

/** A source's wave at the nodes of every step, each taken from the smooth piece that holds there. */
function driveValues(solution: Solution, source: { readonly designator: string; readonly wave: Wave }): Float64Array {
  const { grid, request } = solution;
  const times = axisValues(grid);
  if (request.find === 'characteristic' && request.sweep === source.designator) return times;
  if (!isOverTime(request)) {
    const first = waveCorners(source.wave, 0, Number.POSITIVE_INFINITY, 1)[0];
    const value = evaluateSegment(segmentAt(source.wave, first === undefined ? 1 : first / 2), 0);
    return times.fill(value);
  }
  for (let step = 0; step + 1 < grid.length; step++) {
    const segment = segmentAt(source.wave, (grid[step]! + grid[step + 1]!) / 2);
    for (let k = 4 * step; k < 4 * step + 4; k++) times[k] = evaluateSegment(segment, times[k]!);
  }
  return times;
}

function axisValues(grid: Float64Array): Float64Array {
  const steps = grid.length - 1 || 1;
  const values = new Float64Array(4 * steps);
  for (let k = 0; k < steps; k++) {
    const begin = grid[k]!;
    const width = (grid[k + 1] ?? begin) - begin;
    for (let s = 0; s < 4; s++) values[4 * k + s] = begin + COLLOCATION_NODES[s]! * width;
  }
  return values;
}

/** Derivative of the cubic of each step at its own nodes: at the stages, what the integrator itself took as the derivative. */
function derivativeAtNodes(grid: Float64Array, values: Float64Array): Float64Array {
  const result = new Float64Array(values.length);
  for (let k = 0; k + 1 < grid.length; k++) {
    const width = grid[k + 1]! - grid[k]!;
    if (width === 0) continue;
    for (let s = 0; s < 4; s++) {
      const weights = DERIVATIVE_WEIGHTS[s]!;
      // differences to the start keep a small change on a large value exact
      const base = values[4 * k]!;
      let sum = 0;
      for (let r = 1; r < 4; r++) sum += weights[r]! * (values[4 * k + r]! - base);
      result[4 * k + s] = sum / width;
    }
  }
  return result;
}
