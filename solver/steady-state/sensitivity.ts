/**
 * How the charges and fluxes at the end of a recorded march depend on those at its start: the variational equations of the integrator's own
 * steps. Each step's collocation equations are differentiated exactly, with the conductances of all three stages; at an event the instant
 * depends on the start too, which adds a jump (M. A. Aizerman and F. R. Gantmakher, 1958).
 */
import { evaluateConductances, evaluateCurrents, setDriven } from '../equations/evaluate.ts';
import type { System } from '../equations/system.ts';
import { exitMargin, setMode } from '../equations/system.ts';
import { assembleStages, factoriseCoupled, ROW_SUMS, type StepSystem } from '../integrator/coupled-stages.ts';
import { C1, C2 } from '../integrator/radau-coefficients.ts';
import type { Recorder } from '../integrator/recorder.ts';
import { solveFactored } from '../linear/factors.ts';
import { segmentAt } from '../wave-evaluation.ts';

/**
 * Carries changes of the starting charges (columns of length n) through the recorded march, in place. `fixedTimes` are the instants that do
 * not depend on the state: corners of sources.
 */
export function propagate(
  system: System,
  recorder: Recorder,
  stepSystem: StepSystem,
  columns: readonly Float64Array[],
  fixedTimes: ReadonlySet<number>,
): void {
  const { size } = system;
  const y = new Float64Array(system.vectorLength);
  const jacobians = [0, 1, 2].map(() => new Float64Array(system.pattern.column.length + 1));
  const values = new Float64Array(stepSystem.pattern.column.length);
  const right = new Float64Array(3 * size);
  const changes = columns.map(() => new Float64Array(size));
  const load = (step: number, node: number): void => {
    const at = (4 * step + node) * size;
    for (let i = 0; i < size; i++) y[i] = recorder.unknowns[at + i]!;
  };
  for (let step = 0; step < recorder.steps; step++) {
    const begin = recorder.grid[step]!;
    const end = recorder.grid[step + 1]!;
    const h = end - begin;
    for (const drive of [...system.drives, ...system.driven]) drive.segment = segmentAt(drive.wave, (begin + end) / 2);
    for (let k = 0; k < recorder.modal; k++) {
      const mode = recorder.modes[step * recorder.modal + k]!;
      if (system.modes[k] !== mode) setMode(system, k, mode);
    }
    for (let a = 0; a < 3; a++) {
      setDriven(system, begin + [C1, C2, 1][a]! * h, y);
      load(step, a + 1);
      evaluateConductances(system, y, jacobians[a]!);
    }
    assembleStages(system, stepSystem, h, jacobians, values);
    if (!factoriseCoupled(stepSystem, values)) continue;
    columns.forEach((column, c) => {
      for (let a = 0; a < 3; a++) for (let i = 0; i < size; i++) right[a * size + i] = (ROW_SUMS[a]! / h) * column[i]!;
      solveFactored(stepSystem.factors!, right);
      changes[c]!.set(right.subarray(2 * size, 3 * size));
      storageTimes(system, changes[c]!, column);
    });
    const next = step + 1;
    if (next < recorder.steps && recorder.modal > 0 && !fixedTimes.has(end)) {
      addEventJump(system, recorder, step, end, columns, changes);
    }
  }
}

/** column = C · change */
function storageTimes(system: System, change: Float64Array, column: Float64Array): void {
  const { rowStart, column: index, size } = system.pattern;
  for (let i = 0; i < size; i++) {
    let sum = 0;
    for (let s = rowStart[i]!; s < rowStart[i + 1]!; s++) sum += system.storage[s]! * change[index[s]!]!;
    column[i] = sum;
  }
}

/** An event that comes earlier by dt lets the later law act for dt longer: dq += (q̇before - q̇after) dt. */
function addEventJump(
  system: System,
  recorder: Recorder,
  step: number,
  t: number,
  columns: readonly Float64Array[],
  changes: readonly Float64Array[],
): void {
  const { size } = system;
  const { modal, modes, unknowns, grid } = recorder;
  const modesAt = (k: number, s: number): number => modes[s * modal + k]!;
  const trigger = system.modal.findIndex((_, k) => modesAt(k, step) !== modesAt(k, step + 1));
  if (trigger < 0) return;
  const device = system.modal[trigger]!;
  const exit = device.modes[modesAt(trigger, step)]!.exits.find(({ to }) => to === modesAt(trigger, step + 1));
  if (!exit) return;
  const before = new Float64Array(system.vectorLength);
  const after = new Float64Array(system.vectorLength);
  setDriven(system, t, before);
  for (let i = 0; i < size; i++) before[i] = unknowns[(4 * step + 3) * size + i]!;
  // how fast the watched quantity grows: the slope of the step's cubic at its end
  const h = grid[step + 1]! - grid[step]!;
  const margins = [0, 1, 2, 3].map((node) => {
    const at = new Float64Array(system.vectorLength);
    setDriven(system, grid[step]! + [0, C1, C2, 1][node]! * h, at);
    for (let i = 0; i < size; i++) at[i] = unknowns[(4 * step + node) * size + i]!;
    return exitMargin(exit, device, at);
  });
  const rate = endSlope(margins) / h;
  if (!(rate > 0)) return;
  const flowBefore = new Float64Array(size + 1);
  evaluateCurrents(system, t, before, flowBefore);
  for (let k = 0; k < modal; k++) setMode(system, k, modesAt(k, step + 1));
  setDriven(system, t, after);
  for (let i = 0; i < size; i++) after[i] = unknowns[4 * (step + 1) * size + i]!;
  const flowAfter = new Float64Array(size + 1);
  evaluateCurrents(system, t, after, flowAfter);
  columns.forEach((column, c) => {
    const change = new Float64Array(system.vectorLength);
    change.set(changes[c]!);
    const shift = exitMargin({ ...exit, level: 0 }, device, change) / rate;
    // q̇ = -f in the rows that carry charge; dt = -shift
    for (let i = 0; i < size; i++) column[i]! += shift * (flowBefore[i]! - flowAfter[i]!);
  });
}

/** Slope, for a step of length 1, at the end of the cubic through the four nodes. */
function endSlope(values: readonly number[]): number {
  const nodes = [0, C1, C2, 1];
  let sum = 0;
  for (let r = 0; r < 4; r++) {
    if (r === 3) {
      sum += values[3]! * (1 + 1 / (1 - C1) + 1 / (1 - C2));
      continue;
    }
    let product = 1 / (nodes[r]! - 1);
    for (let k = 0; k < 3; k++) if (k !== r) product *= (1 - nodes[k]!) / (nodes[r]! - nodes[k]!);
    sum += values[r]! * product;
  }
  return sum;
}
