/**
 * Consistent values just after something jumped: the stored charges and fluxes are kept, everything else is solved for, and threshold devices
 * and voltage-driven switches are put into the modes that the circuit then asks for.
 */
import { NoSolution } from '../analysis.ts';
import { applyStorage } from '../equations/evaluate.ts';
import type { System } from '../equations/system.ts';
import { setMode } from '../equations/system.ts';
import { PLAIN, solveNewton } from '../newton.ts';
import { CONTACT_RESISTANCE, inconsistentDevice, OPEN_LEAK, type StaticContext } from '../operating-point.ts';
import { START_WEIGHTS } from './radau-coefficients.ts';
import { forgetHistory, type Stepper, solveStages } from './radau-step.ts';

/** Length of the backward step that finds consistent values, and of the probe that finds currents through ideal loops, as fractions of `span`. */
const TINY = 1e-15;
const PROBE = 1e-5;

/**
 * Makes `y` consistent at `t` with the charges and fluxes that it holds, or with those that it is to reach. `span` is the time scale
 * of the analysis in seconds. The currents of ideal loops (a capacitor across sources) are derivatives: a probing step finds them.
 */
export function restart(
  stepper: Stepper,
  t: number,
  span: number,
  toReach: ChargesToReach | undefined,
  y: Float64Array,
  context: StaticContext,
): void {
  const { system } = stepper;
  const tiny = TINY * span;
  const limit = 8 * system.modal.length + 64;
  const idealLoops = needsProbe(system);
  if (toReach) approachCharges(stepper, t, span, toReach, y, context);
  const before = y.slice();
  for (let attempt = 0; attempt <= limit; attempt++) {
    const takeFirst = attempt > 2 * system.modal.length + 4;
    y.set(before);
    holdCharges(stepper, t, tiny, undefined, y, context);
    let next: ReturnType<typeof inconsistentDevice>;
    if (movedCharge(system, before, y)) {
      // Charge or flux was moved in no time. Its impulse may put a device into another mode; if not, what it leaves behind is where things go on from.
      next = inconsistentDevice(system, y, takeFirst);
      if (!next) {
        // the impulse itself is over: unknowns without memory start afresh
        for (let i = 0; i < system.size; i++) if (!system.dynamic[i]) y[i] = 0;
        before.set(y);
        holdCharges(stepper, t, tiny, undefined, y, context);
      }
    }
    if (!next) {
      if (idealLoops) probe(stepper, t, PROBE * span, y);
      next = inconsistentDevice(system, y, takeFirst);
    }
    if (!next) {
      forgetHistory(stepper);
      return;
    }
    setMode(system, next.device, next.mode);
    if (attempt === limit) {
      const device = system.modal[next.device]!;
      throw new NoSolution({
        analysis: context.analysis,
        at: t,
        component: device.designator,
        reason: `${device.designator} finds no state that fits at this instant: each of its states contradicts itself`,
        advice: 'give it an on_resistance, or a switch some hysteresis',
      });
    }
  }
}

/** Charges and fluxes that a march is to start with. */
export interface ChargesToReach {
  /** What a vector lacks of them, by row (n + 1 elements). */
  readonly lacking: (y: Float64Array) => Float64Array;
  /** Fraction of the span of the shortest step for which `lacking` means more than rounding. */
  readonly shortest: number;
}

/** Lengths of the backward steps, as fractions of `span`, by which stated charges are approached. */
const APPROACH = [1e-6, 1e-10, 1e-12, 1e-14];

/** Moves y to charges far from its own, in steps that shorten: each leaves so much less to be moved, and its rounding with it. */
function approachCharges(
  stepper: Stepper,
  t: number,
  span: number,
  { lacking, shortest }: ChargesToReach,
  y: Float64Array,
  context: StaticContext,
): void {
  for (const fraction of APPROACH) {
    if (fraction < shortest) return;
    holdCharges(stepper, t, fraction * span, lacking(y), y, context);
  }
}

/** Charges and fluxes change by less than this fraction of the largest in a tiny step, unless an impulse moves them. */
const MOVED = 1e-7;

function movedCharge(system: System, before: Float64Array, after: Float64Array): boolean {
  const change = after.map((value, i) => value - before[i]!);
  const moved = new Float64Array(system.size + 1);
  const held = new Float64Array(system.size + 1);
  applyStorage(system, change, moved);
  applyStorage(system, before, held);
  let largest = 0;
  let scale = 0;
  for (let i = 0; i < system.size; i++) {
    largest = Math.max(largest, Math.abs(moved[i]!));
    scale = Math.max(scale, Math.abs(held[i]!), Math.abs(held[i]! + moved[i]!));
  }
  return largest > MOVED * scale;
}

/** How many times longer the tiny step is where a leak was needed. */
const LONGER = 1000;

function holdCharges(
  stepper: Stepper,
  t: number,
  tiny: number,
  missing: Float64Array | undefined,
  y: Float64Array,
  context: StaticContext,
): void {
  const { system, effort } = stepper;
  const guess = y.slice();
  const attempt = (damped: boolean, step = tiny): boolean => {
    const outcome = solveNewton(
      system,
      { ...PLAIN, t, rate: 1 / step, missing, chargeRows: false, damped, maximumIterations: damped ? 400 : 100 },
      y,
    );
    effort.newtonIterations += outcome.iterations;
    effort.factorisations += outcome.factorisations;
    stepper.worst = outcome.singularColumns?.[0] ?? outcome.worst;
    return outcome.converged;
  };
  // over the shortest step, the rounding of charges may drive currents that keep potentials from settling
  for (const factor of [1, 100, 10_000]) {
    y.set(guess);
    if (attempt(false, factor * tiny)) return;
  }
  // what a leak alone holds must not be lost in the rounding of charges over the step
  const longer = LONGER * tiny;
  if (system.modal.length > 0) {
    y.set(guess);
    for (let k = 0; k < system.modal.length; k++) setMode(system, k, system.modes[k]!, OPEN_LEAK, CONTACT_RESISTANCE);
    if (attempt(false, longer)) {
      context.remarks.add(
        'ideal contacts were given a leak of 1 pS where open and 1 nΩ where closed, since nothing else fixes a potential or shares out a current',
      );
      return;
    }
  }
  if (leakAcrossJunctions(system, context)) {
    y.set(guess);
    if (attempt(false, longer)) return;
  }
  y.set(guess);
  if (attempt(true)) {
    context.remarks.add('Newton’s method was damped to find consistent values after a jump');
    return;
  }
  throw unsettled(stepper, t, context.analysis, 'no consistent values were found after a jump');
}

/** Siemens across junctions where blocked ones alone leave a node loose. */
const JUNCTION_LEAK = 1e-12;

/** The last resort: nodes between blocked junctions are held by a leak across each. False where that has been done already. */
export function leakAcrossJunctions(system: System, context: StaticContext): boolean {
  const { junctionLeak, laws } = system;
  if (junctionLeak.siemens > 0 || laws.length === 0) return false;
  junctionLeak.siemens = JUNCTION_LEAK;
  context.remarks.add('junctions were given a leak of 1 pS, since blocked ones alone leave a node loose');
  return true;
}

/** Replaces the unknowns that carry no charge or flux by what a short step, taken back to its start, says of them. */
function probe(stepper: Stepper, t: number, h: number, y: Float64Array): void {
  const { system, z } = stepper;
  forgetHistory(stepper);
  const tolerance = stepper.newtonTolerance;
  stepper.newtonTolerance = 1e-4 * tolerance;
  const solved = solveStages(stepper, t, h, y);
  stepper.newtonTolerance = tolerance;
  forgetHistory(stepper);
  if (!solved) return;
  const [a, b, c] = START_WEIGHTS;
  for (let i = 0; i < system.size; i++) {
    if (!system.dynamic[i]) y[i]! += a * z[0][i]! + b * z[1][i]! + c * z[2][i]!;
  }
}

/** The message for an instant at which the equations could not be solved. */
export function unsettled(stepper: Stepper, t: number, analysis: string, reason: string): NoSolution {
  const { system, worst } = stepper;
  const name = system.names[worst] ?? 'gnd';
  const component = name.endsWith('.i')
    ? name.slice(0, -2)
    : system.laws.find((law) => law.first === worst || law.second === worst)?.designator;
  return new NoSolution({
    analysis,
    at: t,
    unknown: name,
    component,
    reason,
    advice:
      'check the values there; add the series resistance or the capacitance that the real part has, or ask for less accuracy',
  });
}

/** True where some current or potential follows a derivative of a source: loops of sources and capacitors, or their dual. */
export function needsProbe(system: System): boolean {
  let known = probeNeeded.get(system);
  if (known === undefined) {
    known = hasIdealLoop(system) || hasIdealCut(system);
    probeNeeded.set(system, known);
  }
  return known;
}

const probeNeeded = new WeakMap<System, boolean>();

/** A loop of capacitors and branches whose voltage does not depend on their current. */
function hasIdealLoop(system: System): boolean {
  const join = joiner();
  let loop = false;
  for (const component of system.circuit.components) {
    const stiff =
      component.kind === 'capacitor' ||
      component.kind === 'source' ||
      (component.kind === 'controlled-source' && component.output === 'voltage') ||
      (component.kind === 'switch' && component.onResistance === 0) ||
      ('law' in component && component.law.law === 'threshold' && component.law.onResistance === 0);
    // ideal contacts in a loop by themselves are not both closed; counting them as a loop costs one probe
    if (stiff && join(component.nodes[0], component.nodes[1])) loop = true;
  }
  return loop;
}

/** A cut that only inductors, sources of current and open contacts cross. */
function hasIdealCut(system: System): boolean {
  const { components } = system.circuit;
  if (!components.some((component) => component.kind === 'inductor')) return false;
  const join = joiner();
  const crossing = components.filter((component) => {
    const open =
      component.kind === 'inductor' ||
      component.kind === 'current-source' ||
      (component.kind === 'controlled-source' && component.output === 'current') ||
      component.kind === 'switch' ||
      ('law' in component && component.law.law === 'threshold');
    if (!open) join(component.nodes[0], component.nodes[1]);
    return open;
  });
  return crossing.filter(({ nodes }) => !join(nodes[0], nodes[1])).length > 0;
}

/** Joins two nodes; true where they were joined already. */
function joiner(): (a: string, b: string) => boolean {
  const parent = new Map<string, string>();
  const find = (node: string): string => {
    let root = node;
    for (let up = parent.get(root); up !== undefined && up !== root; up = parent.get(root)) root = up;
    return root;
  };
  return (a, b) => {
    const from = find(a);
    const to = find(b);
    if (from === to) return true;
    parent.set(from, to);
    return false;
  };
}
