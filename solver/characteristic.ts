/**
 * The characteristic: operating points along the swept value of a source, laid down on the same piecewise cubic grid as a time response. An
 * interval is halved where the cubic does not follow the curve, and split where a threshold device or a switch changes its mode.
 */
import type { CharacteristicRequest, Effort } from './analysis.ts';
import type { NonlinearLaw, System } from './equations/system.ts';
import { setMode } from './equations/system.ts';
import { createRecorder, type Recorder, recordStep } from './integrator/recorder.ts';
import { findOperatingPoint, type StaticContext } from './operating-point.ts';
import { COLLOCATION_NODES, lagrangeWeights } from './waveform/waveform.ts';

/** Intervals are not halved below this fraction of the sweep. */
const SHORTEST = 1e-9;

/** Where in an interval the cubic is checked, and the weights of its nodes there. */
const CHECKED_AT = 0.4;
const CHECK_WEIGHTS = lagrangeWeights(CHECKED_AT);

/** The same for the laws' currents, which cost no solution: between every two nodes. */
const LAW_CHECK_WEIGHTS = [0.07, CHECKED_AT, 0.85].map(lagrangeWeights);

interface Point {
  readonly at: number;
  readonly y: Float64Array;
  readonly modes: Int8Array;
}

/** `system` must be built for the circuit; its swept drive is set to each value in turn. */
export function traceCharacteristic(
  system: System,
  request: CharacteristicRequest,
  accuracy: number,
  effort: Effort,
  remarks: Set<string>,
): Recorder {
  const drive = [...system.drives, ...system.driven].find(({ designator }) => designator === request.sweep);
  if (!drive) throw new Error(`Internal error: no source '${request.sweep}' to sweep`);
  const low = Math.min(request.from, request.to);
  const high = Math.max(request.from, request.to);
  const recorder = createRecorder(system.size, system.modal.length);
  const context: StaticContext = { analysis: request.find, t: 0, effort, remarks };
  const solveAt = (at: number, near: Point | undefined): Point => {
    drive.segment = { origin: 0, offset: at, slope: 0, sines: [] };
    const y = near ? near.y.slice() : new Float64Array(system.vectorLength);
    if (near) for (let k = 0; k < near.modes.length; k++) setMode(system, k, near.modes[k]!);
    findOperatingPoint(system, y, { ...context, t: at });
    return { at, y, modes: system.modes.slice() };
  };
  const scale = { voltage: 0, current: 0 };
  const nodes = system.nodeCount;
  const noteScale = ({ y }: Point): void => {
    for (let i = 0; i < system.size; i++) {
      const key = i < nodes ? 'voltage' : 'current';
      scale[key] = Math.max(scale[key], Math.abs(y[i]!));
    }
    for (const law of system.laws)
      scale.current = Math.max(scale.current, Math.abs(lawCurrent(law, y[law.first]! - y[law.second]!)));
  };
  const shortest = SHORTEST * (high - low);

  const cover = (start: Point, end: Point): Point => {
    const width = end.at - start.at;
    const halve = (): Point => {
      const middle = solveAt(start.at + width / 2, start);
      return cover(cover(start, middle), end);
    };
    if (!sameModes(start.modes, end.modes)) {
      if (width > shortest) return halve();
      // the corner itself: the modes beyond it hold from here on
      return { at: start.at, y: start.y, modes: end.modes };
    }
    const inner = [1, 2].map((s) => solveAt(start.at + COLLOCATION_NODES[s]! * width, start));
    if (inner.some((point) => !sameModes(point.modes, start.modes))) return width > shortest ? halve() : end;
    const nodesOfStep = [start, inner[0]!, inner[1]!, end] as const;
    if (width > shortest && !cubicFollows(solveAt(start.at + CHECKED_AT * width, inner[0]!), nodesOfStep))
      return halve();
    const z = [inner[0]!.y, inner[1]!.y, end.y].map((y) => y.map((value, i) => value - start.y[i]!));
    recordStep(recorder, start.at, end.at, start.y, [z[0]!, z[1]!, z[2]!], start.modes);
    effort.steps++;
    return end;
  };

  /** Does the cubic through the four nodes meet a fifth point (0.4 of the way, between two of them)? */
  const cubicFollows = (check: Point, step: readonly [Point, Point, Point, Point]): boolean => {
    for (let i = 0; i < system.size; i++) {
      let value = 0;
      for (let s = 0; s < 4; s++) value += CHECK_WEIGHTS[s]! * step[s]!.y[i]!;
      const allowed = accuracy * (Math.abs(check.y[i]!) + 0.01 * (i < nodes ? scale.voltage : scale.current));
      if (Math.abs(value - check.y[i]!) > allowed) return false;
    }
    // a junction straight across the swept source is no unknown, but its current is what bends
    for (const law of system.laws) {
      const voltages = step.map(({ y }) => y[law.first]! - y[law.second]!);
      const currents = voltages.map((voltage) => lawCurrent(law, voltage));
      for (const weights of LAW_CHECK_WEIGHTS) {
        const current = lawCurrent(law, combine(weights, voltages));
        const allowed = accuracy * (Math.abs(current) + 0.01 * scale.current);
        if (Math.abs(combine(weights, currents) - current) > allowed) return false;
      }
    }
    return true;
  };

  let previous = solveAt(low, undefined);
  noteScale(previous);
  const far = solveAt(high, previous);
  noteScale(far);
  const intervals = Math.max(1, request.points - 1);
  for (let k = 1; k <= intervals; k++) {
    const next = solveAt(k === intervals ? high : low + ((high - low) * k) / intervals, previous);
    noteScale(next);
    previous = cover(previous, next);
    // a corner hands on the point before it: what remains of the interval is covered from there
    if (previous.at < next.at) previous = cover({ ...previous, modes: next.modes }, next);
  }
  return recorder;
}

const evaluated = new Float64Array(2);

function lawCurrent(law: NonlinearLaw, voltage: number): number {
  law.evaluate(voltage, evaluated);
  return evaluated[0]!;
}

function combine(weights: readonly number[], values: readonly number[]): number {
  return weights.reduce((sum, weight, k) => sum + weight * values[k]!, 0);
}

function sameModes(a: Int8Array, b: Int8Array): boolean {
  return a.every((mode, k) => mode === b[k]);
}
