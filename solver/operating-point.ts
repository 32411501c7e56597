/**
 * The operating point: every capacitor open, every inductor a short circuit. Newton's method first, then what helps when
 * it does not settle, in this order: damping, a shunt conductance that is stepped down, sources that are stepped up,
 * and a pseudo-transient. Threshold devices and voltage-driven switches are brought into consistent modes around it.
 */
import type { Effort } from './analysis.ts';
import { NoSolution } from './analysis.ts';
import type { System } from './equations/system.ts';
import { exitMargin, setMode } from './equations/system.ts';
import { type NewtonOutcome, PLAIN, type StaticProblem, solveNewton } from './newton.ts';

/** Siemens across an open threshold device or switch where nothing else would tie a node down. */
export const OPEN_LEAK = 1e-12;

/** Ohm in a closed one where nothing else would share a current out. */
export const CONTACT_RESISTANCE = 1e-9;

/** A mode is left only for a reason larger than rounding: volt or ampere relative to the level or the largest unknown. */
const MODE_TOLERANCE = 1e-10;

export interface StaticContext {
  readonly analysis: string;
  readonly t: number;
  readonly effort: Effort;
  /** Collects what the reader should know. */
  readonly remarks: Set<string>;
}

/** Solves for the operating point in place, from the guess in `y`, and leaves the system in its modes. */
export function findOperatingPoint(system: System, y: Float64Array, context: StaticContext): void {
  const seen = new Set<string>();
  for (let round = 0; ; round++) {
    solveWithFallbacks(system, y, context);
    const next = inconsistentDevice(system, y, round > 4 * system.modal.length + 8);
    if (!next) return;
    seen.add(system.modes.join(','));
    setMode(system, next.device, next.mode, OPEN_LEAK);
    if (seen.has(system.modes.join(',')) && round > 8 * system.modal.length + 64) {
      throw new NoSolution({
        analysis: context.analysis,
        component: system.modal[next.device]!.designator,
        reason: `${system.modal[next.device]!.designator} finds no state that fits: open and closed both contradict themselves`,
        advice: 'give the device an on_resistance, or use law: exponential',
      });
    }
  }
}

/** The device whose mode contradicts the solution most (or, to break a cycle, the first one), and the mode it asks for. */
export function inconsistentDevice(
  system: System,
  y: Float64Array,
  takeFirst: boolean,
): { device: number; mode: number } | undefined {
  let worst: { device: number; mode: number } | undefined;
  let worstMargin = 0;
  const scale = unknownScale(system, y);
  for (let k = 0; k < system.modal.length; k++) {
    const device = system.modal[k]!;
    for (const exit of device.modes[system.modes[k]!]!.exits) {
      const reference = exit.quantity === 'current' ? scale.current : scale.voltage;
      const margin = exitMargin(exit, device, y) / reference;
      if (margin > MODE_TOLERANCE && margin > worstMargin) {
        worst = { device: k, mode: exit.to };
        worstMargin = margin;
        if (takeFirst) return worst;
      }
    }
  }
  return worst;
}

/** The largest potential (at least 1 V) and branch current (at least 1 µA) of a vector of unknowns. */
export function unknownScale(system: System, y: Float64Array): { voltage: number; current: number } {
  let voltage = 1;
  let current = 1e-6;
  for (const { index } of system.driven) voltage = Math.max(voltage, Math.abs(y[index]!));
  for (let i = 0; i < system.size; i++) {
    if (i < system.nodeCount) voltage = Math.max(voltage, Math.abs(y[i]!));
    else current = Math.max(current, Math.abs(y[i]!));
  }
  return { voltage, current };
}

function solveWithFallbacks(system: System, y: Float64Array, context: StaticContext): void {
  const guess = y.slice();
  const attempt = (problem: Partial<StaticProblem>): NewtonOutcome => {
    const outcome = solveNewton(system, { ...PLAIN, t: context.t, ...problem }, y);
    context.effort.newtonIterations += outcome.iterations;
    context.effort.factorisations += outcome.factorisations;
    return outcome;
  };
  let outcome = attempt({});
  if (outcome.converged) return;
  if (outcome.singularColumns && system.modal.length > 0) {
    // open contacts may leave a node with nothing to hold it
    for (let k = 0; k < system.modal.length; k++) setMode(system, k, system.modes[k]!, OPEN_LEAK, CONTACT_RESISTANCE);
    y.set(guess);
    outcome = attempt({});
    if (outcome.converged) return;
  }
  y.set(guess);
  if (attempt({ damped: true, maximumIterations: 300 }).converged) {
    context.remarks.add('Newton’s method was damped to find the operating point');
    return;
  }
  y.set(guess);
  if (stepShunt(attempt, y)) {
    context.remarks.add('a shunt conductance was stepped down to find the operating point');
    return;
  }
  y.fill(0);
  if (stepSources(attempt, y)) {
    context.remarks.add('the sources were stepped up to find the operating point');
    return;
  }
  y.fill(0);
  if (followPseudoTransient(attempt, y)) {
    context.remarks.add('a pseudo-transient was followed to find the operating point');
    return;
  }
  throw noOperatingPoint(system, outcome, context);
}

type Attempt = (problem: Partial<StaticProblem>) => NewtonOutcome;

function stepShunt(attempt: Attempt, y: Float64Array): boolean {
  y.fill(0);
  let shunt = 1;
  let factor = 10;
  let good = y.slice();
  if (!attempt({ shunt }).converged) return false;
  while (shunt > 1e-15) {
    good = y.slice();
    const next = shunt / factor;
    if (attempt({ shunt: next }).converged) {
      shunt = next;
      factor = Math.min(factor * 2, 100);
    } else {
      y.set(good);
      factor = Math.sqrt(factor);
      if (factor < 1.02) return false;
    }
  }
  return attempt({}).converged;
}

function stepSources(attempt: Attempt, y: Float64Array): boolean {
  let scale = 0;
  let step = 0.1;
  if (!attempt({ driveScale: 0 }).converged) return false;
  while (scale < 1) {
    const good = y.slice();
    const next = Math.min(1, scale + step);
    if (attempt({ driveScale: next }).converged) {
      scale = next;
      step *= 2;
    } else {
      y.set(good);
      step /= 4;
      if (step < 1e-6) return false;
    }
  }
  return true;
}

/** Volt or ampere: beyond this no rest is to be expected. */
const RUNAWAY = 1e9;

function followPseudoTransient(attempt: Attempt, y: Float64Array): boolean {
  let rate = 1e9;
  for (let step = 0; step < 400 && rate > 1e-9; step++) {
    const good = y.slice();
    const outcome = attempt({ rate, nodeCapacitance: 1e-9, chargeRows: false });
    // a circuit that runs away (a falling characteristic that outweighs the rest) has no point to come to
    if (y.some((value) => Math.abs(value) > RUNAWAY)) return false;
    if (outcome.converged) {
      rate /= outcome.iterations < 8 ? 4 : 1.5;
    } else {
      y.set(good);
      rate *= 8;
      if (rate > 1e15) return false;
    }
  }
  return attempt({}).converged;
}

function noOperatingPoint(system: System, outcome: NewtonOutcome, context: StaticContext): NoSolution {
  const culprit = outcome.singularColumns?.[0] ?? outcome.worst;
  const name = system.names[culprit] ?? 'gnd';
  const touching = system.laws.find((law) => law.first === culprit || law.second === culprit);
  const unknown = name.endsWith('.i') ? `the current of ${name.slice(0, -2)}` : `the potential of node '${name}'`;
  return new NoSolution({
    analysis: context.analysis,
    at: context.t,
    unknown: name,
    component: touching?.designator ?? (name.endsWith('.i') ? name.slice(0, -2) : undefined),
    reason: outcome.singularColumns
      ? `nothing in the circuit fixes ${unknown}`
      : `no operating point was found: ${unknown} would not settle${touching ? ` (at ${touching.designator})` : ''}`,
    advice: outcome.singularColumns
      ? 'give the node a resistance to some other node, or the loop a resistance of its own'
      : 'check values and polarity, add the series resistance that the part has, or start a time response from rest',
  });
}
