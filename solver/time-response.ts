/**
 * The time response: Radau IIA steps under error control, landing on every corner of the sources and on every event of threshold devices and
 * switches, with consistent values after each.
 */
import type { Effort, TimeResponseRequest } from './analysis.ts';
import { NoSolution } from './analysis.ts';
import { REFERENCE_TEMPERATURE } from './circuit.ts';
import { applyStorage, evaluateCurrents } from './equations/evaluate.ts';
import type { System } from './equations/system.ts';
import { exitMargin, setMode } from './equations/system.ts';
import { type FoundEvent, findEvent } from './integrator/events.ts';
import {
  createStepper,
  estimateError,
  forgetHistory,
  type Stepper,
  solveStages,
  solveStagesRobustly,
} from './integrator/radau-step.ts';
import { createRecorder, type Recorder, recordStep } from './integrator/recorder.ts';
import { type ChargesToReach, leakAcrossJunctions, needsProbe, restart, unsettled } from './integrator/restart.ts';
import { findOperatingPoint, type StaticContext, unknownScale } from './operating-point.ts';
import { highestAngularFrequency, segmentAt, waveCorners } from './wave-evaluation.ts';
import { lagrangeWeights } from './waveform/waveform.ts';

/** Local errors are held to this fraction of the accuracy asked of a figure: they add up over a period. */
export const LOCAL_FRACTION = 1;

/** A tolerance is relative to an unknown, or to this fraction of the largest one of its kind. */
const SCALE_FRACTION = 0.1;

/**
 * Newton's method settles a junction's voltage to the tolerance (but not less than 1e-5: then the nodes' own do) times this many of its slope
 * voltages, so that its current is right too.
 */
const SLOPES = 10;

/** Steps that a single analysis may take. */
const MAXIMUM_STEPS = 5_000_000;

/** Steps below this fraction of the span do not move the time on. */
const STANDSTILL = 1e-12;

/** Events in a row without the time moving on. */
const MAXIMUM_CHATTER = 100;

export interface TimeMarch {
  readonly recorder: Recorder;
  /** Unknowns at the end, a vector. */
  readonly y: Float64Array;
  /** Instants of the march that do not depend on the state: corners of sources, toggles, the end. */
  readonly fixedTimes: readonly number[];
}

/** A march that goes on from known values instead of the request's start. */
export interface GivenStart {
  readonly y: Float64Array;
  readonly modes: Int8Array;
  /** Charges and fluxes by row that y lacks. */
  readonly missing?: Float64Array;
}

interface March {
  readonly system: System;
  readonly stepper: Stepper;
  readonly recorder: Recorder;
  readonly context: StaticContext;
  readonly tolerance: number;
  readonly span: number;
  readonly from: number;
  t: number;
  h: number;
  /** Unknowns at t, n + 1 elements. */
  readonly y: Float64Array;
  /** Largest potential, branch current and current of a nonlinear law so far. */
  readonly scale: { voltage: number; current: number; law: number };
  /** Error and step length of the last accepted step, for the predictive controller. */
  lastError: number;
  lastStep: number;
  chatter: number;
  /** Length of the step in which the event ahead was first seen. */
  approachFrom?: number;
  /** The next step has the length that it is to have. */
  exactStep: boolean;
  /** The event that the next step is meant to end on. */
  aim?: FoundEvent;
}

/** The charges that a given start lacks, as a march is told to reach them. */
function chargesToReach(system: System, { y, missing }: GivenStart): ChargesToReach | undefined {
  if (!missing) return undefined;
  const held = new Float64Array(system.size + 1);
  applyStorage(system, y, held);
  const target = missing.map((value, i) => value + held[i]!);
  const lacking = (at: Float64Array): Float64Array => {
    applyStorage(system, at, held);
    return target.map((value, i) => (i < system.size ? value - held[i]! : 0));
  };
  // what is left below this is the rounding of charges
  return { lacking, shortest: 1e-11 };
}

/** `accuracy` is the relative accuracy that figures must keep. */
export function marchInTime(
  system: System,
  request: TimeResponseRequest,
  accuracy: number,
  effort: Effort,
  remarks: Set<string>,
  given?: GivenStart,
  analysis: string = request.find,
): TimeMarch {
  const { until, from } = request;
  const corners = landingTimes(system, request);
  const y = new Float64Array(system.vectorLength);
  const stepper = createStepper(system, effort);
  const march: March = {
    system,
    stepper,
    recorder: createRecorder(system.size, system.modal.length),
    context: { analysis, t: 0, effort, remarks },
    tolerance: LOCAL_FRACTION * accuracy,
    span: until,
    from,
    t: 0,
    h: 0,
    y,
    scale: { voltage: 1e-3, current: 1e-9, law: 1e-9 },
    lastError: 1e-2,
    lastStep: 0,
    chatter: 0,
    exactStep: false,
  };
  stepper.newtonTolerance = Math.max((10 * 2.2e-16) / march.tolerance, Math.min(0.003, Math.sqrt(march.tolerance)));
  bindSegments(system, 0, corners[0]!);
  if (given) {
    y.set(given.y);
    given.modes.forEach((mode, k) => {
      setMode(system, k, mode);
    });
  }
  restart(stepper, 0, until, given ? chargesToReach(system, given) : startingCharges(march, request), y, march.context);
  updateScale(march);
  for (const [k, corner] of corners.entries()) {
    if (k > 0) enterSegment(march, corners[k - 1]!, corner);
    stepTo(march, corner);
  }
  return { recorder: march.recorder, y, fixedTimes: corners };
}

/** Corners of all sources, toggles of switches, and where keeping begins; ends with `until`. */
function landingTimes(system: System, request: TimeResponseRequest): number[] {
  const { until, from } = request;
  const times = new Set<number>(from > 0 ? [from] : []);
  for (const drive of [...system.drives, ...system.driven])
    for (const corner of waveCorners(drive.wave, 0, until)) times.add(corner);
  for (const device of system.modal)
    for (const toggle of device.toggles ?? []) if (toggle > 0 && toggle < until) times.add(toggle);
  const sorted = [...times].sort((a, b) => a - b);
  // corners of several sources that differ by rounding are one
  const kept = sorted.filter((time, k) => k === 0 || time - sorted[k - 1]! > 1e-12 * until);
  while (kept.length > 0 && until - kept.at(-1)! < 1e-12 * until) kept.pop();
  return [...kept, until];
}

function bindSegments(system: System, begin: number, end: number): void {
  for (const drive of [...system.drives, ...system.driven])
    drive.segment = segmentAt(drive.wave, begin + (end - begin) / 2);
}

/** Sets `y` to what the response starts from; returns the charges and fluxes by row that it still lacks. */
function startingCharges(march: March, request: TimeResponseRequest): ChargesToReach | undefined {
  const { system, y, context } = march;
  const { start } = request;
  if (start === 'operating point') {
    findOperatingPoint(system, y, context);
    // the leak that a node without other ties had at the operating point is taken away again
    for (let k = 0; k < system.modal.length; k++) setMode(system, k, system.modes[k]!);
    return undefined;
  }
  if (start === 'rest') return undefined;
  return { lacking: (at) => chargesLacking(system, start, at), shortest: 1e-14 };
}

/**
 * Charges and fluxes by row by which the vector misses the stated voltages and currents (zero where none is stated). What one plate lacks the other has too much of, to
 * the last bit, so that no rounding drives a current through the rest of the circuit.
 */
function chargesLacking(
  system: System,
  start: { readonly [designator: string]: number },
  y: Float64Array,
): Float64Array {
  const lacking = new Float64Array(system.size + 1);
  for (const component of system.circuit.components) {
    const stated = start[component.designator] ?? 0;
    const branch = system.branchIndex.get(component.designator);
    const scale =
      1 +
      ('temperatureCoefficient' in component ? (component.temperatureCoefficient ?? 0) : 0) *
        (system.circuit.temperature - REFERENCE_TEMPERATURE);
    if (component.kind === 'inductor') {
      lacking[branch!]! -= component.inductance * scale * (stated - y[branch!]!);
    } else if (component.kind === 'capacitor') {
      const first = system.nodeIndex.get(component.nodes[0])!;
      const second = system.nodeIndex.get(component.nodes[1])!;
      const charge = component.capacitance * scale * (stated - (y[first]! - y[second]!));
      if (branch !== undefined) lacking[branch]! -= charge;
      else {
        // the reference and driven nodes hold whatever charge they are asked to
        if (first < system.size) lacking[first]! += charge;
        if (second < system.size) lacking[second]! -= charge;
      }
    }
  }
  return lacking;
}

function enterSegment(march: March, begin: number, end: number): void {
  const { system } = march;
  let changed = false;
  for (const drive of [...system.drives, ...system.driven]) {
    const segment = segmentAt(drive.wave, begin + (end - begin) / 2);
    if (!sameSegment(segment, drive.segment, begin)) changed = true;
    drive.segment = segment;
  }
  system.modal.forEach((device, k) => {
    const toggles = device.toggles?.filter((toggle) => Math.abs(toggle - begin) <= 1e-12 * march.span).length ?? 0;
    if (toggles % 2 === 1) {
      setMode(system, k, 1 - system.modes[k]!);
      changed = true;
    }
  });
  if (changed) restartHere(march);
}

function sameSegment(a: ReturnType<typeof segmentAt>, b: ReturnType<typeof segmentAt>, t: number): boolean {
  if (a.slope !== b.slope || a.sines.length !== b.sines.length) return false;
  const offsetA = a.offset + a.slope * (t - a.origin);
  const offsetB = b.offset + b.slope * (t - b.origin);
  const same = Math.abs(offsetA - offsetB) <= 1e-14 * (Math.abs(offsetA) + Math.abs(offsetB));
  return (
    same &&
    a.sines.every((sine, k) => sine.peak === b.sines[k]!.peak && sine.angularFrequency === b.sines[k]!.angularFrequency)
  );
}

function restartHere(march: March): void {
  const { stepper, y } = march;
  restart(stepper, march.t, march.span, undefined, y, march.context);
  updateScale(march);
  march.lastStep = 0;
}

function updateScale(march: March): void {
  const now = unknownScale(march.system, march.y);
  march.scale.voltage = Math.max(march.scale.voltage, now.voltage);
  march.scale.current = Math.max(march.scale.current, now.current);
}

/** Steps from march.t to `end`, through the events on the way. */
function stepTo(march: March, end: number): void {
  const { system, stepper, y, context } = march;
  const start = new Float64Array(system.size + 1);
  const scratch = new Float64Array(system.vectorLength);
  const longest = longestStep(march, end - march.t);
  const begin = march.t;
  if (march.h <= 0) march.h = 1e-4 * (end - begin);
  // after a restart nothing is known of how fast things move now
  if (march.lastStep === 0) march.h = Math.min(march.h, 0.02 * (end - begin));
  march.h = Math.min(march.h, longest);
  const { effort } = stepper;
  let failures = 0;
  let rejected = false;
  while (march.t < end) {
    if (effort.steps + effort.rejectedSteps > MAXIMUM_STEPS) {
      throw unsettled(stepper, march.t, context.analysis, `more than ${MAXIMUM_STEPS} steps were needed`);
    }
    let h = Math.min(march.h, longest);
    const left = end - march.t;
    let last = false;
    // a step that is meant to end at an event is not stretched to the end that lies just behind it
    if (h * (march.exactStep ? 1 : 1.01) >= left) {
      h = left;
      last = true;
    } else if (2 * h > left && !march.exactStep) h = left / 2;
    march.exactStep = false;
    setWeights(march);
    // refused by the simplified iteration, a step of some length is worth a full one
    let solved = solveStages(stepper, march.t, h, y);
    if (!solved) solved = solveStagesRobustly(stepper, march.t, h, y);
    if (!solved) {
      effort.rejectedSteps++;
      failures++;
      forgetHistory(stepper);
      march.h = h * (failures > 3 ? 0.1 : 0.4);
      rejected = true;
      if (march.h < 1e-14 * march.span || failures > 60) {
        if (tieDown(march)) {
          march.h = 1e-3 * (end - march.t);
          failures = 0;
          continue;
        }
        throw unsettled(
          stepper,
          march.t,
          context.analysis,
          'the step could not be made small enough for the equations to settle',
        );
      }
      continue;
    }
    evaluateCurrents(system, march.t, y, start);
    estimateError(stepper, h, start);
    const error = errorNorm(march, h);
    const safety = (0.9 * (2 * 10 + 1)) / (2 * 10 + stepper.iterations);
    if (!(error <= 1)) {
      effort.rejectedSteps++;
      march.h = h * Math.max(0.1, Math.min(0.9, safety * error ** -0.25));
      rejected = true;
      failures++;
      forgetHistory(stepper);
      // values that drifted off the algebraic equations look like an error that no step length cures
      if (failures % 5 === 0) {
        restartHere(march);
        march.h = Math.min(march.h, 0.1 * h);
      }
      if (march.h < 1e-14 * march.span) {
        throw unsettled(
          stepper,
          march.t,
          context.analysis,
          'the step could not be made small enough for the accuracy asked',
        );
      }
      continue;
    }
    const event =
      system.modal.length > 0
        ? (arrival(march, scratch) ?? findEvent(system, y, stepper.z, relaxed(march), scratch))
        : undefined;
    if (event) {
      const landing = planLanding(march, event, h);
      if (landing === 'shorter') continue;
      if (landing === 'at the end') accept(march, last ? end : march.t + h);
      const before = march.approachFrom ?? h;
      takeEvent(march, event);
      rejected = false;
      failures = 0;
      // the steps that led up to the event say nothing of how fast things move after it
      march.h = Math.min(0.2 * before, 0.05 * (end - begin));
      continue;
    }
    let factor = safety * error ** -0.25;
    if (march.lastStep > 0 && !rejected) {
      // predictive controller (K. Gustafsson, 1994)
      factor = Math.min(factor, (0.9 * h * (march.lastError / (error * error)) ** 0.25) / march.lastStep);
    }
    // what barely converged at this length will not at a greater one
    const bold = stepper.contraction > 0.3 ? 1 : stepper.contraction > 0.1 ? 1.5 : 8;
    factor = Math.max(0.125, Math.min(rejected ? 1 : bold, factor));
    march.lastError = Math.max(1e-2, error);
    march.lastStep = h;
    if (h > STANDSTILL * march.span) march.chatter = 0;
    accept(march, last ? end : march.t + h);
    if (!(last && h * factor < march.h)) march.h = h * factor;
    rejected = false;
    failures = 0;
  }
}

/** Where blocked junctions alone leave a node loose: holds it, and goes on from consistent values. False where that has been done already. */
function tieDown(march: March): boolean {
  if (!leakAcrossJunctions(march.system, march.context)) return false;
  restartHere(march);
  return true;
}

function accept(march: March, end: number): void {
  const { system, stepper, y } = march;
  if (end > march.from) recordStep(march.recorder, march.t, end, y, stepper.z, system.modes);
  const increment = stepper.z[2];
  for (let i = 0; i < system.vectorLength; i++) y[i]! += increment[i]!;
  march.t = end;
  stepper.effort.steps++;
  updateScale(march);
}

/** The tolerance of each unknown: relative to itself, or to a fraction of the largest of its kind so far. */
function setWeights(march: March): void {
  const { system, stepper, y, tolerance, scale } = march;
  const nodes = system.nodeCount;
  const voltage = SCALE_FRACTION * scale.voltage;
  const current = SCALE_FRACTION * scale.current;
  for (let i = 0; i < system.size; i++) {
    const weight = 1 / (tolerance * (Math.abs(y[i]!) + (i < nodes ? voltage : current)));
    stepper.weight[i] = weight;
    stepper.newtonWeight[i] = Math.max(weight, 1 / (Math.max(tolerance, 1e-5) * SLOPES * stepper.nodeSlope[i]!));
  }
}

/** Weighted error of the step: of the unknowns that carry charge by the embedded formula, of the others by what extrapolation missed. */
function errorNorm(march: March, h: number): number {
  const { system, stepper } = march;
  const { error, weight, z, predicted } = stepper;
  let square = 0;
  let count = 0;
  // What a quartic term adds to the extrapolation at the first stage, and to the interpolation within the step, for the ratio of the steps.
  // a derivative over a very short step is rounding noise
  const extrapolated = stepper.extrapolatedFrom > 0 && h > 1e-8 * march.span;
  const ratio = extrapolated ? h / stepper.extrapolatedFrom : 0;
  const inwards = Math.min(9, 0.25 * ratio ** 2.7);
  let largest = 0;
  for (let i = 0; i < system.size; i++) {
    if (system.dynamic[i]) {
      const scaled = error[i]! * weight[i]!;
      square += scaled * scaled;
      count++;
    } else if (extrapolated) {
      largest = Math.max(largest, Math.abs(predicted[i]! - z[0][i]!) * weight[i]! * inwards * OUTPUT_FRACTION);
    }
  }
  const drawn = OUTPUT_FRACTION * lawMismatch(march);
  return Math.max(count > 0 ? Math.sqrt(square / count) : 0, largest, drawn, 1e-6);
}

/**
 * How well the dense output of each law's current follows the law, in units of its tolerance: the cubic through the currents at the step's four nodes
 * against the law at the cubic of the voltage, between two nodes.
 */
function lawMismatch(march: March): number {
  const { system, stepper, y, tolerance } = march;
  const z1 = stepper.z[0];
  const z2 = stepper.z[1];
  const z3 = stepper.z[2];
  let worst = 0;
  for (let k = 0; k < system.laws.length; k++) {
    const { first, second, evaluate } = system.laws[k]!;
    const v0 = y[first]! - y[second]!;
    const d1 = z1[first]! - z1[second]!;
    const d2 = z2[first]! - z2[second]!;
    const d3 = z3[first]! - z3[second]!;
    evaluate(v0, lawResult);
    let drawn = w0 * lawResult[0]!;
    let largest = Math.abs(lawResult[0]!);
    evaluate(v0 + d1, lawResult);
    drawn += w1 * lawResult[0]!;
    evaluate(v0 + d2, lawResult);
    drawn += w2 * lawResult[0]!;
    evaluate(v0 + d3, lawResult);
    drawn += w3 * lawResult[0]!;
    largest = Math.max(largest, Math.abs(lawResult[0]!));
    evaluate(v0 + w1 * d1 + w2 * d2 + w3 * d3, lawResult);
    const mismatch = Math.abs(drawn - lawResult[0]!);
    if (largest > march.scale.law) march.scale.law = largest;
    if (mismatch > worst * tolerance * march.scale.law) worst = mismatch / (tolerance * march.scale.law);
  }
  return worst;
}

const lawResult = new Float64Array(2);

/** Lagrange weights of the step's four nodes at 0.4 of it, between the two inner nodes. */
const [w0, w1, w2, w3] = lagrangeWeights(0.4);

/** Dense output need not be better than the figures: its error does not add up. */
const OUTPUT_FRACTION = 0.3;

/** No step is longer than what its dense output can follow of the fastest sine. */
function longestStep(march: March, stretch: number): number {
  let fastest = 0;
  for (const drive of [...march.system.drives, ...march.system.driven])
    fastest = Math.max(fastest, highestAngularFrequency(drive.segment));
  // cubic through the collocation nodes: error about (ωh)⁴ / 1000; its derivative, where currents are one: (ωh)³ / 50
  const angle = needsProbe(march.system) ? (50 * march.tolerance) ** (1 / 3) : (1000 * march.tolerance) ** 0.25;
  const resolved = fastest > 0 ? angle / fastest : Number.POSITIVE_INFINITY;
  return Math.min(stretch, Math.max(resolved, 1e-9 * stretch));
}

/**
 * How to meet the event: at the end of the step just solved, right here without a step, or with a shorter one (set in `march.h`). Where a
 * current is the derivative of a charge, its zero is approached in ever shorter steps, since only short ones know it exactly.
 */
function planLanding(march: March, event: FoundEvent, h: number): 'at the end' | 'here' | 'shorter' {
  const target = event.at * h;
  if (target <= 1e-13 * march.span) return 'here';
  if (event.at >= 1 - 1e-10) return 'at the end';
  march.approachFrom ??= h;
  const coarse =
    event.quantity === 'current' && needsProbe(march.system) && target > FINAL_APPROACH * march.approachFrom;
  march.h = coarse ? 0.97 * target : target;
  march.exactStep = true;
  march.aim = coarse ? undefined : event;
  forgetHistory(march.stepper);
  return 'shorter';
}

/**
 * The event that the step just solved was aimed at, where its end meets it to within the rounding of a derivative over a short step. Without this, the
 * remaining distance would be crossed by a step so short that its currents are noise.
 */
function arrival(march: March, scratch: Float64Array): FoundEvent | undefined {
  const { aim, system, y, stepper } = march;
  march.aim = undefined;
  if (aim?.quantity !== 'current' || !needsProbe(system)) return undefined;
  const device = system.modal[aim.device]!;
  const exit = device.modes[system.modes[aim.device]!]!.exits.find(({ to }) => to === aim.mode)!;
  for (let i = 0; i < system.vectorLength; i++) scratch[i] = y[i]! + stepper.z[2][i]!;
  const margin = exitMargin(exit, device, scratch);
  return Math.abs(margin) <= DERIVATIVE_ROUNDING * march.scale.current ? { ...aim, at: 1 } : undefined;
}

/** A current that is a derivative is known to this fraction of the largest one. */
const DERIVATIVE_ROUNDING = 1e-9;

/** The last step before the zero of a derivative current, as a fraction of the step in which the zero was first seen. */
const FINAL_APPROACH = 0.003;

/** Events in a row without the time moving on, after which what is taken for rounding grows tenfold with every so many more. */
const PATIENCE = 10;

/**
 * The scale that events are measured by. Where several devices hang in the balance at one instant (a bridge of ideal diodes at a zero of its source), rounding
 * can send them back and forth: what counts as a crossing then grows until the time moves on.
 */
function relaxed(march: March): { voltage: number; current: number } {
  if (march.chatter <= PATIENCE) return march.scale;
  const factor = 10 ** ((march.chatter - PATIENCE) / PATIENCE);
  return { voltage: march.scale.voltage * factor, current: march.scale.current * factor };
}

function takeEvent(march: March, event: FoundEvent): void {
  const { system, stepper } = march;
  march.approachFrom = undefined;
  stepper.effort.events++;
  march.chatter++;
  if (march.chatter > MAXIMUM_CHATTER) {
    const device = system.modal[event.device]!;
    throw new NoSolution({
      analysis: march.context.analysis,
      at: march.t,
      component: device.designator,
      reason: `${device.designator} switches back and forth without the time moving on`,
      advice: 'give a switch some hysteresis, or a threshold device an on_resistance',
    });
  }
  setMode(system, event.device, event.mode);
  restartHere(march);
}
