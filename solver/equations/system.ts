/**
 * The circuit's equations: f(y, t) + d/dt q(y) = 0, modified nodal analysis in charge and flux form (C.-W. Ho, A. E. Ruehli and
 * P. A. Brennan, 1975; M. Günther and U. Feldmann, 1999). One row for each node but the reference (currents leaving sum to zero), one for
 * each branch whose current is an unknown. The unknowns y are the node potentials (volt), then those currents (ampere).
 *
 * Vectors have one element more than there are unknowns, and arrays of matrix values one more than the pattern has
 * entries: the reference node reads 0 from there and writes what nobody reads, so no kernel needs a branch for it.
 */
import type { Circuit } from '../circuit.ts';
import type { Pattern } from '../linear/pattern.ts';
import type { WaveSegment } from '../wave-evaluation.ts';
import type { Wave } from '../waves.ts';

export interface System {
  readonly circuit: Circuit;
  /** Number of unknowns n. */
  readonly size: number;
  readonly names: readonly string[];
  readonly pattern: Pattern;
  /** Index of a node's potential; the reference node has index n. */
  readonly nodeIndex: ReadonlyMap<string, number>;
  /** Index of a component's current, where it is an unknown. */
  readonly branchIndex: ReadonlyMap<string, number>;
  /** Linear part of df/dy on the pattern; `setMode` changes it. */
  readonly conductance: Float64Array;
  /** dq/dy on the pattern: q is linear. */
  readonly storage: Float64Array;
  /** Constant part of f by row. */
  readonly constant: Float64Array;
  readonly drives: readonly Drive[];
  readonly laws: readonly NonlinearLaw[];
  readonly modal: readonly ModalDevice[];
  /** Current mode of each modal device. */
  readonly modes: Int8Array;
  /** Groups of nodes that only capacitors tie to the rest; see floating-islands.ts. */
  readonly islands: readonly Island[];
  /** True where the unknown's column has an entry in `storage`: it carries charge or flux. */
  readonly dynamic: readonly boolean[];
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
 * conductance `leak` (siemens), which is zero except where nothing else would tie a node down.
 */
export function setMode(system: System, device: number, mode: number, leak = 0): void {
  const modal = system.modal[device]!;
  const { voltage, current, constant } = modal.modes[mode]!;
  const [first, second, own] = modal.slots;
  const across = voltage === 0 ? -leak : voltage;
  system.conductance[first] = across;
  system.conductance[second] = -across;
  system.conductance[own] = current;
  system.constant[modal.branch] = constant;
  system.modes[device] = mode;
}

/** How far an exit's condition is fulfilled: above zero, the device must change its mode. */
export function exitMargin(exit: Exit, device: ModalDevice, y: Float64Array, offset = 0): number {
  let quantity: number;
  if (exit.quantity === 'current') quantity = y[offset + device.branch]!;
  else {
    const [first, second] = exit.quantity === 'control' ? device.control! : [device.first, device.second];
    quantity = y[offset + first]! - y[offset + second]!;
  }
  return exit.sign * (quantity - exit.level);
}
