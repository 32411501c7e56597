/** From the checked circuit to its equations: which unknowns there are, and what each component adds to which row. */
import type { Circuit, Component, ControlledSource, Diode, Switch, ThresholdLaw } from '../circuit.ts';
import { REFERENCE_NODE, REFERENCE_TEMPERATURE } from '../circuit.ts';
import { criticalVoltage, evaluateJunction, type JunctionLaw, junctionAt } from '../devices/exponential-diode.ts';
import { buildMonotoneCubic, evaluateMonotoneCubic } from '../devices/monotone-cubic.ts';
import { buildPattern, slotOf } from '../linear/pattern.ts';
import { segmentAt } from '../wave-evaluation.ts';
import { floatingCapacitors, floatingIslands } from './floating-islands.ts';
import type { Drive, DrivenNode, ModalDevice, Mode, NonlinearLaw, System } from './system.ts';
import { setMode } from './system.ts';

/** Builds the equations at the circuit's own temperature. The circuit has been checked: names resolve, values are sound. */
export function buildSystem(circuit: Circuit): System {
  const { nodes, branches, drivenBy } = listUnknowns(circuit);
  const size = nodes.length + branches.length;
  const nodeIndex = new Map<string, number>(nodes.map((node, index) => [node, index]));
  nodeIndex.set(REFERENCE_NODE, size);
  for (const node of drivenBy.values()) nodeIndex.set(node, nodeIndex.size + branches.length);
  const branchIndex = new Map<string, number>(branches.map((name, index) => [name, nodes.length + index]));

  const positions: [number, number][] = [];
  const linear: Entry[] = [];
  const storage: Entry[] = [];
  const stamp: Stamp = {
    size,
    node: (name) => {
      const index = nodeIndex.get(name);
      if (index === undefined) throw new Error(`Internal error: no node '${name}' in circuit '${circuit.name}'`);
      return index;
    },
    branch: (designator) => branchIndex.get(designator),
    row: (name) => Math.min(stamp.node(name), size),
    drivenNode: (designator) => drivenBy.get(designator),
    conductance: (row, column, value) => linear.push({ row, column, value }),
    storage: (row, column, value) => storage.push({ row, column, value }),
    reserve: (row, column) => positions.push([row, column]),
    drives: [],
    driven: [],
    laws: [],
    junctionLeak: { siemens: 0 },
    modal: [],
  };
  for (const component of circuit.components) addComponent(stamp, component, circuit);
  for (let i = 0; i < size; i++) positions.push([i, i]);
  for (const { row, column } of [...linear, ...storage]) positions.push([row, column]);
  const islands = floatingIslands(circuit).map((members) => ({ nodes: members, rows: members.map(stamp.node) }));
  for (const { rows } of islands)
    for (const { row, column } of storage) if (rows.includes(row)) positions.push([rows[0]!, column]);
  const pattern = buildPattern(
    size,
    positions.filter(([row, column]) => row < size && column < size),
  );
  const drivenPattern = buildPattern(
    size,
    positions.filter(([row, column]) => row < size && column > size),
  );
  const drivenEntries = drivenPattern.column.length;
  const drivenSlot = (row: number, column: number): number =>
    row < size && column > size ? slotOf(drivenPattern, row, column) : drivenEntries;
  const entries = pattern.column.length;
  const slot = (row: number, column: number): number =>
    row < size && column < size ? slotOf(pattern, row, column) : entries;
  const valuesOf = (list: readonly Entry[]): Float64Array => {
    const values = new Float64Array(entries + 1);
    for (const { row, column, value } of list) values[slot(row, column)]! += value;
    values[entries] = 0;
    return values;
  };
  const drivenValuesOf = (list: readonly Entry[]): Float64Array => {
    const values = new Float64Array(drivenEntries + 1);
    for (const { row, column, value } of list) values[drivenSlot(row, column)]! += value;
    return values;
  };
  const storageValues = valuesOf(storage);
  const dynamic = Array.from({ length: size }, () => false);
  for (let s = 0; s < entries; s++) if (storageValues[s] !== 0) dynamic[pattern.column[s]!] = true;

  const system: System = {
    circuit,
    size,
    vectorLength: size + 1 + drivenBy.size,
    nodeCount: nodes.length,
    names: [...nodes, ...branches.map((name) => `${name}.i`)],
    pattern,
    drivenPattern,
    nodeIndex,
    branchIndex,
    conductance: valuesOf(linear),
    storage: storageValues,
    conductanceOfDriven: drivenValuesOf(linear),
    storageOfDriven: drivenValuesOf(storage),
    constant: new Float64Array(size + 1),
    drives: stamp.drives,
    driven: stamp.driven,
    laws: stamp.laws.map((law) => ({
      ...law,
      slots: [
        slot(law.plus, law.first),
        slot(law.plus, law.second),
        slot(law.minus, law.first),
        slot(law.minus, law.second),
      ],
    })),
    junctionLeak: stamp.junctionLeak,
    modal: stamp.modal.map((device) => ({
      ...device,
      slots: [
        slot(device.branch, device.first),
        slot(device.branch, device.second),
        slot(device.branch, device.branch),
      ],
      drivenSlots: [drivenSlot(device.branch, device.first), drivenSlot(device.branch, device.second)],
    })),
    modes: new Int8Array(stamp.modal.length),
    islands,
    dynamic,
    storing: Array.from({ length: size }, (_, row) =>
      storageValues.subarray(pattern.rowStart[row]!, pattern.rowStart[row + 1]!).some((value) => value !== 0),
    ),
  };
  for (let k = 0; k < system.modal.length; k++) setMode(system, k, system.modal[k]!.initialMode);
  return system;
}

interface Entry {
  readonly row: number;
  readonly column: number;
  readonly value: number;
}

/** What a component may add while the pattern is still being gathered. */
interface Stamp {
  readonly size: number;
  readonly node: (name: string) => number;
  readonly branch: (designator: string) => number | undefined;
  /** The node's own equation; the unread row for the reference and driven nodes. */
  readonly row: (name: string) => number;
  /** The node whose potential this source fixes. */
  readonly drivenNode: (designator: string) => string | undefined;
  readonly conductance: (row: number, column: number, value: number) => void;
  readonly storage: (row: number, column: number, value: number) => void;
  readonly reserve: (row: number, column: number) => void;
  readonly drives: Drive[];
  readonly driven: DrivenNode[];
  readonly laws: Omit<NonlinearLaw, 'slots'>[];
  readonly junctionLeak: System['junctionLeak'];
  readonly modal: Omit<ModalDevice, 'slots' | 'drivenSlots'>[];
}

/** Nodes and branches that are unknowns, and the sources that fix a node's potential by their designators. */
function listUnknowns(circuit: Circuit): { nodes: string[]; branches: string[]; drivenBy: Map<string, string> } {
  const nodes = new Set<string>();
  const sensed = new Set<string>();
  for (const component of circuit.components) {
    for (const node of component.nodes) nodes.add(node);
    if (component.kind === 'switch' && component.drive.by === 'voltage')
      for (const node of component.drive.nodes) nodes.add(node);
    if (component.kind === 'controlled-source') {
      if (component.control.quantity === 'voltage') for (const node of component.control.nodes) nodes.add(node);
      else sensed.add(component.control.component);
    }
  }
  nodes.delete(REFERENCE_NODE);
  const drivenBy = new Map<string, string>();
  for (const component of circuit.components) {
    if (component.kind !== 'source' || sensed.has(component.designator)) continue;
    const [first, second] = component.nodes;
    const node = first === REFERENCE_NODE ? second : first;
    if (second !== REFERENCE_NODE && first !== REFERENCE_NODE) continue;
    if (nodes.delete(node)) drivenBy.set(component.designator, node);
  }
  const floating = floatingCapacitors(circuit, drivenBy.values());
  const branches = circuit.components
    .filter(({ designator }) => !drivenBy.has(designator))
    .filter(
      (component) => sensed.has(component.designator) || floating.has(component.designator) || hasOwnBranch(component),
    )
    .map((component) => component.designator);
  return { nodes: [...nodes], branches, drivenBy };
}

/** Components whose law does not give the current from the voltages: the current is an unknown with a row of its own. */
function hasOwnBranch(component: Component): boolean {
  switch (component.kind) {
    case 'source':
    case 'inductor':
    case 'switch':
      return true;
    case 'controlled-source':
      return component.output === 'voltage';
    case 'diode':
    case 'led':
    case 'zener':
      return component.law.law === 'threshold';
    default:
      return false;
  }
}

function addComponent(stamp: Stamp, component: Component, circuit: Circuit): void {
  const first = stamp.node(component.nodes[0]);
  const second = stamp.node(component.nodes[1]);
  const branch = stamp.branch(component.designator);
  const firstRow = stamp.row(component.nodes[0]);
  const secondRow = stamp.row(component.nodes[1]);
  if (branch !== undefined) {
    stamp.conductance(firstRow, branch, 1);
    stamp.conductance(secondRow, branch, -1);
  }
  // Rows that a current given by a law goes to: its nodes, or, where the current is an unknown, the row `i - law = 0`.
  const plus = branch === undefined ? firstRow : stamp.size;
  const minus = branch === undefined ? secondRow : branch;
  if (branch !== undefined && !hasOwnBranch(component)) stamp.conductance(branch, branch, 1);
  const between = (add: Stamp['conductance'], value: number, from = first, to = second): void => {
    add(plus, from, value);
    add(plus, to, -value);
    add(minus, from, -value);
    add(minus, to, value);
  };
  const branchVoltage = (): void => {
    stamp.conductance(branch!, first, 1);
    stamp.conductance(branch!, second, -1);
  };
  const scale = (coefficient: number | undefined): number =>
    1 + (coefficient ?? 0) * (circuit.temperature - REFERENCE_TEMPERATURE);
  const { designator } = component;
  switch (component.kind) {
    case 'resistor':
      between(stamp.conductance, 1 / (component.resistance * scale(component.temperatureCoefficient)));
      return;
    case 'capacitor':
      between(stamp.storage, component.capacitance * scale(component.temperatureCoefficient));
      return;
    case 'inductor':
      branchVoltage();
      stamp.storage(branch!, branch!, -component.inductance * scale(component.temperatureCoefficient));
      return;
    case 'source':
      if (stamp.drivenNode(designator) !== undefined) {
        const sign = component.nodes[0] === REFERENCE_NODE ? -1 : 1;
        const index = stamp.node(stamp.drivenNode(designator)!);
        stamp.driven.push({ designator, wave: component.wave, index, sign, segment: START });
        return;
      }
      branchVoltage();
      stamp.drives.push({ designator, wave: component.wave, plus: stamp.size, minus: branch!, segment: START });
      return;
    case 'current-source':
      stamp.drives.push({ designator, wave: component.wave, plus, minus, segment: START });
      return;
    case 'controlled-source':
      addControlledSource(stamp, component, between, branchVoltage, branch, plus, minus);
      return;
    case 'switch':
      stamp.modal.push(switchDevice(stamp, component, first, second, branch!));
      return;
    case 'curve': {
      const curve = buildMonotoneCubic(component.voltages, component.currents);
      addLaw(stamp, designator, first, second, plus, minus, (v, result) => evaluateMonotoneCubic(curve, v, result));
      return;
    }
    case 'diode':
    case 'led':
    case 'zener':
      if (component.law.law === 'threshold') {
        stamp.modal.push(thresholdDevice(stamp, component, component.law, circuit.temperature, first, second, branch!));
      } else {
        const law = junctionAt(component.law, circuit.temperature);
        const limit = law.seriesResistance > 0 ? undefined : junctionLimit(criticalVoltage(law), law.slopeVoltage);
        addLaw(
          stamp,
          designator,
          first,
          second,
          plus,
          minus,
          junctionEvaluator(law, stamp.junctionLeak),
          law.slopeVoltage,
          limit,
        );
      }
  }
}

function junctionEvaluator(law: JunctionLaw, leak: System['junctionLeak']): NonlinearLaw['evaluate'] {
  return (voltage, result) => {
    evaluateJunction(law, voltage, result);
    result[0]! += leak.siemens * voltage;
    result[1]! += leak.siemens;
  };
}

const START = segmentAt({ shape: 'constant', value: 0 }, 0);

function addLaw(
  stamp: Stamp,
  designator: string,
  first: number,
  second: number,
  plus: number,
  minus: number,
  evaluate: NonlinearLaw['evaluate'],
  slopeVoltage?: number,
  limit?: NonlinearLaw['limit'],
): void {
  for (const row of [plus, minus]) for (const column of [first, second]) stamp.reserve(row, column);
  stamp.laws.push({ designator, first, second, plus, minus, evaluate, slopeVoltage, limit });
}

/**
 * A step of Newton's method that raises the voltage of a conducting junction is taken on the logarithm of the current,
 * where the law is a straight line, instead of on the current, where it is not.
 */
function junctionLimit(critical: number, slope: number): (previous: number, asked: number) => number {
  return (previous, asked) => {
    if (asked <= critical || asked - previous <= 2 * slope) return asked;
    const from = Math.max(previous, critical);
    return from + slope * Math.log1p((asked - from) / slope);
  };
}

function addControlledSource(
  stamp: Stamp,
  component: ControlledSource,
  between: (add: Stamp['conductance'], value: number, from?: number, to?: number) => void,
  branchVoltage: () => void,
  branch: number | undefined,
  plus: number,
  minus: number,
): void {
  const { control, gain } = component;
  if (component.output === 'voltage') branchVoltage();
  if (control.quantity === 'voltage') {
    const from = stamp.node(control.nodes[0]);
    const to = stamp.node(control.nodes[1]);
    if (component.output === 'current') between(stamp.conductance, gain, from, to);
    else {
      stamp.conductance(branch!, from, -gain);
      stamp.conductance(branch!, to, gain);
    }
    return;
  }
  const sensed = stamp.branch(control.component)!;
  if (component.output === 'voltage') stamp.conductance(branch!, sensed, -gain);
  else {
    stamp.conductance(plus, sensed, gain);
    stamp.conductance(minus, sensed, -gain);
  }
}

function reserveBranch(stamp: Stamp, branch: number, first: number, second: number): void {
  for (const column of [first, second, branch]) stamp.reserve(branch, column);
}

const OPEN = 0;
const CLOSED = 1;

function switchDevice(
  stamp: Stamp,
  component: Switch,
  first: number,
  second: number,
  branch: number,
): Omit<ModalDevice, 'slots' | 'drivenSlots'> {
  reserveBranch(stamp, branch, first, second);
  const { drive } = component;
  const byVoltage = drive.by === 'voltage';
  const modes: Mode[] = [
    {
      name: 'open',
      voltage: -component.offConductance,
      current: 1,
      constant: 0,
      exits: byVoltage ? [{ to: CLOSED, quantity: 'control', sign: 1, level: drive.closesAbove }] : [],
    },
    {
      name: 'closed',
      voltage: 1,
      current: -component.onResistance,
      constant: 0,
      exits: byVoltage ? [{ to: OPEN, quantity: 'control', sign: -1, level: drive.opensBelow }] : [],
    },
  ];
  return {
    designator: component.designator,
    modes,
    branch,
    first,
    second,
    initialMode: drive.startsClosed ? CLOSED : OPEN,
    ...(byVoltage
      ? { control: [stamp.node(drive.nodes[0]), stamp.node(drive.nodes[1])] as const }
      : { toggles: drive.toggles }),
  };
}

function thresholdDevice(
  stamp: Stamp,
  component: Diode,
  law: ThresholdLaw,
  temperature: number,
  first: number,
  second: number,
  branch: number,
): Omit<ModalDevice, 'slots' | 'drivenSlots'> {
  reserveBranch(stamp, branch, first, second);
  const forward =
    law.forwardVoltage + (law.temperatureCoefficient ?? 0) * (temperature - (law.at ?? REFERENCE_TEMPERATURE));
  const modes: Mode[] = [
    {
      name: 'off',
      voltage: 0,
      current: 1,
      constant: 0,
      exits: [{ to: 1, quantity: 'voltage', sign: 1, level: forward }],
    },
    {
      name: 'conducting',
      voltage: 1,
      current: -law.onResistance,
      constant: -forward,
      exits: [{ to: 0, quantity: 'current', sign: -1, level: 0 }],
    },
  ];
  if (law.breakdown) {
    const { voltage, resistance } = law.breakdown;
    modes[0] = {
      ...modes[0]!,
      exits: [...modes[0]!.exits, { to: 2, quantity: 'voltage', sign: -1, level: -voltage }],
    };
    modes.push({
      name: 'broken down',
      voltage: 1,
      current: -resistance,
      constant: voltage,
      exits: [{ to: 0, quantity: 'current', sign: 1, level: 0 }],
    });
  }
  return { designator: component.designator, modes, branch, first, second, initialMode: 0 };
}
