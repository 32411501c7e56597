/**
 * The checked circuit: plain data in SI units, the product of the language stage and the input of the solver.
 *
 * Nodes are names; `gnd` is the reference. Every component follows the passive sign convention: its voltage is the
 * first node less the second, its current flows into the first node.
 */
import type { Wave } from './waves.ts';

export const REFERENCE_NODE = 'gnd';

/** Zero of the Celsius scale, in kelvin (BIPM, SI brochure, 9th edition). */
export const ZERO_CELSIUS = 273.15;

/** Temperature at which a law's parameters hold unless it says otherwise: 25 °C, in kelvin. */
export const REFERENCE_TEMPERATURE = ZERO_CELSIUS + 25;

export interface Circuit {
  readonly name: string;
  readonly components: readonly Component[];
  /** Ambient temperature in kelvin. */
  readonly temperature: number;
}

interface TwoTerminal {
  readonly designator: string;
  readonly nodes: readonly [first: string, second: string];
}

export interface Resistor extends TwoTerminal {
  readonly kind: 'resistor';
  /** Ohm, at 25 °C; not zero. */
  readonly resistance: number;
  /** Relative change per kelvin away from 25 °C; default 0. */
  readonly temperatureCoefficient?: number;
}

export interface Capacitor extends TwoTerminal {
  readonly kind: 'capacitor';
  /** Farad. */
  readonly capacitance: number;
  readonly temperatureCoefficient?: number;
}

export interface Inductor extends TwoTerminal {
  readonly kind: 'inductor';
  /** Henry. */
  readonly inductance: number;
  readonly temperatureCoefficient?: number;
}

/** A source of voltage: the wave is the voltage of the first node less the second. */
export interface VoltageSource extends TwoTerminal {
  readonly kind: 'source';
  /** Volt over seconds. */
  readonly wave: Wave;
  readonly smallSignal?: SmallSignal;
}

/** A source of current: the wave is the current into the first node. */
export interface CurrentSource extends TwoTerminal {
  readonly kind: 'current-source';
  /** Ampere over seconds. */
  readonly wave: Wave;
  readonly smallSignal?: SmallSignal;
}

export interface SmallSignal {
  /** Volt or ampere. */
  readonly amplitude: number;
  /** Radian. */
  readonly phase: number;
}

/** The output is `gain` times the control; the four kinds differ in what drives and what is driven. */
export interface ControlledSource extends TwoTerminal {
  readonly kind: 'controlled-source';
  readonly output: 'voltage' | 'current';
  readonly control:
    | { readonly quantity: 'voltage'; readonly nodes: readonly [string, string] }
    | { readonly quantity: 'current'; readonly component: string };
  /** V/V, A/V, V/A or A/A. */
  readonly gain: number;
}

export interface Switch extends TwoTerminal {
  readonly kind: 'switch';
  readonly drive:
    | {
        readonly by: 'time';
        /** Seconds, ascending; the state changes at each. */
        readonly toggles: readonly number[];
        readonly startsClosed: boolean;
      }
    | {
        readonly by: 'voltage';
        readonly nodes: readonly [string, string];
        /** Volt. */
        readonly closesAbove: number;
        /** Volt, not above `closesAbove`. */
        readonly opensBelow: number;
        /** The state taken where the control starts between the two. */
        readonly startsClosed: boolean;
      };
  /** Ohm; 0 is an ideal contact. */
  readonly onResistance: number;
  /** Siemens; 0 is an ideal gap. */
  readonly offConductance: number;
}

export interface Diode extends TwoTerminal {
  readonly kind: 'diode' | 'led' | 'zener';
  readonly law: DiodeLaw;
}

export type DiodeLaw = ExponentialLaw | ThresholdLaw;

/**
 * i = saturationCurrent (exp(u / slope) - 1) with u = v - seriesResistance i, and the mirrored law beyond breakdown
 * (W. Shockley, 1949). The parameters hold at `at`.
 */
export interface ExponentialLaw {
  readonly law: 'exponential';
  /** Ampere, above zero. */
  readonly saturationCurrent: number;
  /** Multiple of kT/q, so it follows the temperature; or a fixed slope in volt. */
  readonly slope: { readonly ideality: number } | { readonly voltage: number };
  /** Ohm; 0 or more. */
  readonly seriesResistance: number;
  /** Kelvin. */
  readonly at: number;
  /**
   * How the law moves with temperature: by the saturation current of a junction with this energy gap (electronvolt),
   * or by shifting the forward voltage (volt per kelvin) at every current.
   */
  readonly temperature: { readonly energyGap: number } | { readonly forwardVoltage: number };
  readonly breakdown?: Breakdown;
}

/** Reverse conduction: i = -current exp((-u - voltage) / slopeVoltage), u the voltage less resistance times current. */
export interface Breakdown {
  /** Volt, positive: the reverse terminal voltage at `current`. */
  readonly voltage: number;
  /** Ampere, positive. */
  readonly current: number;
  /** Ohm: slope of the reverse law at `current` comes from slopeVoltage / current + resistance. */
  readonly resistance: number;
  /** Volt. */
  readonly slopeVoltage: number;
  /** Volt per kelvin; default 0. */
  readonly temperatureCoefficient?: number;
}

/** Open below the threshold, a voltage source behind a resistance above it; switched by events. */
export interface ThresholdLaw {
  readonly law: 'threshold';
  /** Volt. */
  readonly forwardVoltage: number;
  /** Ohm; 0 is exact. */
  readonly onResistance: number;
  /** Volt per kelvin away from `at`. */
  readonly temperatureCoefficient?: number;
  /** Kelvin. */
  readonly at?: number;
  readonly breakdown?: { readonly voltage: number; readonly resistance: number };
}

/** A two-terminal given by a table: monotone piecewise cubic between the points, straight beyond the ends. */
export interface Curve extends TwoTerminal {
  readonly kind: 'curve';
  /** Volt, strictly ascending; at least two. */
  readonly voltages: readonly number[];
  /** Ampere, one for each voltage. */
  readonly currents: readonly number[];
}

export type Component =
  | Resistor
  | Capacitor
  | Inductor
  | VoltageSource
  | CurrentSource
  | ControlledSource
  | Switch
  | Diode
  | Curve;

export type ComponentKind = Component['kind'];
