/**
 * The circuit's equations: f(y, t) + d/dt q(y) = 0, modified nodal analysis in charge and flux form (C.-W. Ho, A. E. Ruehli and
 * P. A. Brennan, 1975; M. Günther and U. Feldmann, 1999). One row for each node but the reference (currents leaving sum to zero), one for
 * each branch whose current is an unknown. The unknowns y are the node potentials (volt), then those currents (ampere).
 *
 * A node that an independent source ties to the reference is no unknown: its potential is known ("driven"), which halves the
 * size of the usual small circuit. The source's current follows from the node's other currents.
 *
 * Vectors hold the n unknowns, then the reference node (always 0; what is written to row n, nobody reads), then the driven
 * nodes' potentials: `vectorLength` elements. Arrays of matrix values have one element more than the pattern has entries, for the same
 * reason: no kernel needs a branch for the reference node.
 */
import type { Circuit } from '../circuit.ts';
import type { Pattern } from '../linear/pattern.ts';
import type { WaveSegment } from '../wave-evaluation.ts';
import type { Wave } from '../waves.ts';

export interface System {
  readonly circuit: Circuit;
  /** Number of unknowns n. */
  readonly size: number;
  /** n + 1 + the number of driven nodes. */
  readonly vectorLength: number;
  /** Number of unknowns that are node potentials; they come first. */
  readonly nodeCount: number;
  readonly names: readonly string[];
  readonly pattern: Pattern;
  /** Entries of the driven nodes' columns, n rows; columns count from n + 1. */
  readonly drivenPattern: Pattern;
  /** Index of a node's potential in a vector; the reference node has index n, driven nodes follow. */
  readonly nodeIndex: ReadonlyMap<string, number>;
  /** Index of a component's current, where it is an unknown. */
  readonly branchIndex: ReadonlyMap<string, number>;
  /** Linear part of df/dy on the pattern; `setMode` changes it. */
  readonly conductance: Float64Array;
  /** dq/dy on the pattern: q is linear. */
  readonly storage: Float64Array;
  /** The same by the driven nodes' potentials, on `drivenPattern`. */
  readonly conductanceOfDriven: Float64Array;
  readonly storageOfDriven: Float64Array;
  /** Constant part of f by row. */
  readonly constant: Float64Array;
  /** Sources that add to the equations. */
  readonly drives: readonly Drive[];
  /** Sources that fix a node's potential. */
  readonly driven: readonly DrivenNode[];
  readonly laws: readonly NonlinearLaw[];
  /** Conductance across every exponential junction: zero, except where blocked junctions alone leave a node loose. */
  readonly junctionLeak: { siemens: number };
  readonly modal: readonly ModalDevice[];
  /** Current mode of each modal device. */
  readonly modes: Int8Array;
  /** Groups of nodes that only capacitors tie to the rest; see floating-islands.ts. */
  readonly islands: readonly Island[];
  /** True where the unknown's column has an entry in `storage`: it carries charge or flux. */
  readonly dynamic: readonly boolean[];
  /** True where the equation (row) has an entry in `storage`. */
  readonly storing: readonly boolean[];
}

/** Where no current can flow for long, the charge decides: the first row's equation becomes Σ q = 0 over all rows. */
export interface Island {
  readonly nodes: readonly string[];
  readonly rows: readonly number[];
}

/** A source's contribution: f[plus] += value(t), f[minus] -= value(t). */
export interface Drive {
  readonly designator: string;
  readonly wave: Wave;
  readonly plus: number;
  readonly minus: number;
  /** The smooth piece in force; the time stepper changes it at corners. */
  segment: WaveSegment;
}

/** y[index] = sign · value(t) */
export interface DrivenNode {
  readonly designator: string;
  readonly wave: Wave;
  readonly index: number;
  readonly sign: 1 | -1;
  segment: WaveSegment;
}

/** A current i(v) between two nodes: f[plus] += i, f[minus] -= i with v = y[first] - y[second]. */
export interface NonlinearLaw {
  readonly designator: string;
  readonly first: number;
  readonly second: number;
  readonly plus: number;
  readonly minus: number;
  /** Positions in the matrix' values of (plus, first), (plus, second), (minus, first), (minus, second). */
  readonly slots: readonly [number, number, number, number];
  /** Current and conductance at v, to result[0] and result[1]. */
  readonly evaluate: (voltage: number, result: Float64Array) => void;
  /** The voltage to evaluate at, given the one last evaluated and the one Newton's method asks for. */
  /** Volt by which the voltage must move for the current to change by a factor e, at its steepest; where it is a junction's. */
  readonly slopeVoltage: number | undefined;
  readonly limit: ((previous: number, asked: number) => number) | undefined;
}

/** A component that is one of several straight lines at a time; its row in f is its branch equation. */
export interface ModalDevice {
  readonly designator: string;
  readonly modes: readonly Mode[];
  readonly branch: number;
  readonly first: number;
  readonly second: number;
  /** Nodes that a voltage-driven switch watches. */
  readonly control?: readonly [number, number];
  /** Times at which a time-driven switch changes, ascending. */
  readonly toggles?: readonly number[];
  readonly initialMode: number;
  /** Slots of (branch, first), (branch, second), (branch, branch). */
  readonly slots: readonly [number, number, number];
  /** Slots of (branch, first) and (branch, second) on `drivenPattern`. */
  readonly drivenSlots: readonly [number, number];
}

/** voltage · (v_first - v_second) + current · i + constant = 0 */
export interface Mode {
  readonly name: string;
  readonly voltage: number;
  readonly current: number;
  readonly constant: number;
  /** When the expression grows above zero, the device goes over to `to`. */
  readonly exits: readonly Exit[];
}

export interface Exit {
  readonly to: number;
  /** What is watched: the device's own voltage or current, or its control voltage. */
  readonly quantity: 'voltage' | 'current' | 'control';
  /** The exit is taken where sign · (quantity - level) > 0. */
  readonly sign: 1 | -1;
  readonly level: number;
}

/**
 * Puts a modal device into a mode: writes its branch equation into `conductance` and `constant`. An open device gets the
 * conductance `leak` (siemens), a closed one the resistance `contact` (ohm); both are zero except where nothing else would fix a potential
 * or a current.
 */
export function setMode(system: System, device: number, mode: number, leak = 0, contact = 0): void {
  const modal = system.modal[device]!;
  const { voltage, current, constant } = modal.modes[mode]!;
  const [first, second, own] = modal.slots;
  const across = voltage === 0 ? -leak : voltage;
  system.conductance[first] = across;
  system.conductance[second] = -across;
  system.conductance[own] = voltage === 0 ? current : current - contact;
  const [drivenFirst, drivenSecond] = modal.drivenSlots;
  system.conductanceOfDriven[drivenFirst] = across;
  system.conductanceOfDriven[drivenSecond] = -across;
  system.constant[modal.branch] = constant;
  system.modes[device] = mode;
}

/** How far an exit's condition is fulfilled: above zero, the device must change its mode. */
export function exitMargin(exit: Exit, device: ModalDevice, y: Float64Array): number {
  let quantity: number;
  if (exit.quantity === 'current') quantity = y[device.branch]!;
  else {
    const [first, second] = exit.quantity === 'control' ? device.control! : [device.first, device.second];
    quantity = y[first]! - y[second]!;
  }
  return exit.sign * (quantity - exit.level);
}
