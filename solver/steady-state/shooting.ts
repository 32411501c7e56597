/**
 * The periodic steady state by shooting: Newton's method on the charges and fluxes at the start of a period, so that they are the same at its end
 * (T. J. Aprille and T. N. Trick, 1972), with the derivative of the integrator's own steps. Small circuits form the derivative as a matrix;
 * large ones only multiply by it (GMRES, Y. Saad and M. H. Schultz, 1986).
 */
import type { Effort, SteadyStateRequest } from '../analysis.ts';
import { NoSolution } from '../analysis.ts';
import { applyStorage } from '../equations/evaluate.ts';
import type { System } from '../equations/system.ts';
import { createStepSystem, type StepSystem } from '../integrator/coupled-stages.ts';
import type { Recorder } from '../integrator/recorder.ts';
import { findOperatingPoint, unknownScale } from '../operating-point.ts';
import { marchInTime, type TimeMarch } from '../time-response.ts';
import { segmentAt, waveCorners } from '../wave-evaluation.ts';
import { solveGmres, solveLeastSquares } from './dense.ts';
import { propagate } from './sensitivity.ts';
import { commonPeriod } from './settled-waves.ts';

/** Above this many independent charges and fluxes the derivative is not formed. */
const LARGEST_DENSE = 60;

const MAXIMUM_ITERATIONS = 40;

/** The period closes when every unknown returns to within this fraction of the accuracy asked. */
const CLOSING_FRACTION = 0.05;

/** Periods simply followed before the first Newton step, and when Newton's method does not get closer. */
const PERIODS_FOLLOWED = 2;

export function findSteadyState(
  system: System,
  request: SteadyStateRequest,
  accuracy: number,
  effort: Effort,
  remarks: Set<string>,
): Recorder {
  const common = commonPeriod(system.circuit, request.period);
  if ('reason' in common) throw new NoSolution({ analysis: request.find, ...common });
  const { period } = common;
  let { y, modes } = firstGuess(system, request, effort, remarks);
  let missing: Float64Array | undefined;
  const oneMarch = (): TimeMarch =>
    marchInTime(
      system,
      { find: 'time response', from: 0, until: period, start: 'rest' },
      accuracy,
      effort,
      remarks,
      { y, modes, ...(missing ? { missing } : {}) },
      request.find,
    );
  const stepSystem = createStepSystem(system);
  const basis = chargeBasis(system);
  let best = Number.POSITIVE_INFINITY;
  let stalled = 0;
  let follow = PERIODS_FOLLOWED;
  for (let iteration = 0; iteration < MAXIMUM_ITERATIONS; iteration++) {
    const march = oneMarch();
    const start = startOf(system, march.recorder);
    const distance = closingDistance(system, start.y, march.y) / accuracy;
    if (distance <= CLOSING_FRACTION || (distance <= 1 && stalled > 2)) return march.recorder;
    stalled = distance < 0.5 * best ? 0 : stalled + 1;
    best = Math.min(best, distance);
    if (follow > 0 || basis.length === 0 || stalled > 4) {
      // what the circuit does by itself leads towards an attracting state, if slowly
      if (stalled > 4) {
        follow = PERIODS_FOLLOWED;
        stalled = 0;
      }
      follow--;
      y = march.y.slice();
      modes = system.modes.slice();
      missing = undefined;
      continue;
    }
    const endModes = system.modes.slice();
    const residual = differenceOfCharges(system, march.y, start.y);
    const change = newtonStep(system, march, stepSystem, basis, residual);
    if (!change) {
      y = march.y.slice();
      modes = endModes;
      missing = undefined;
      continue;
    }
    y = start.y;
    modes = start.modes;
    missing = change;
  }
  const volts = closestApproach(best * accuracy);
  throw new NoSolution({
    analysis: request.find,
    reason: `no periodic solution was found: after ${MAXIMUM_ITERATIONS} corrections the unknowns still change by ${volts} of their size over a period`,
    advice:
      'check that the circuit has a steady state at this period (give a multiple as `period` where it answers at a subharmonic), or follow it by a time response',
  });
}

function closestApproach(relative: number): string {
  return `${Number((100 * relative).toPrecision(2))} %`;
}

function firstGuess(
  system: System,
  request: SteadyStateRequest,
  effort: Effort,
  remarks: Set<string>,
): { y: Float64Array; modes: Int8Array } {
  const y = new Float64Array(system.vectorLength);
  for (const drive of [...system.drives, ...system.driven]) {
    const corner = waveCorners(drive.wave, 0, Number.POSITIVE_INFINITY, 1)[0];
    drive.segment = segmentAt(drive.wave, corner === undefined ? 1 : corner / 2);
  }
  try {
    findOperatingPoint(system, y, { analysis: request.find, t: 0, effort, remarks: new Set() });
  } catch (error) {
    if (!(error instanceof NoSolution)) throw error;
    y.fill(0);
  }
  for (const island of system.islands) {
    remarks.add(
      `no direct current reaches ${island.nodes.join(', ')}, so any mean potential would repeat: the one without charge was taken`,
    );
  }
  return { y, modes: system.modes.slice() };
}

/** Unknowns and modes at the start of the first recorded step. */
function startOf(system: System, recorder: Recorder): { y: Float64Array; modes: Int8Array } {
  const y = new Float64Array(system.vectorLength);
  y.set(recorder.unknowns.subarray(0, system.size));
  return { y, modes: recorder.modes.slice(0, recorder.modal) };
}

/** Largest relative change of an unknown that carries charge or flux. */
function closingDistance(system: System, start: Float64Array, end: Float64Array): number {
  const scale = unknownScale(system, end);
  let largest = 0;
  for (let i = 0; i < system.size; i++) {
    if (!system.dynamic[i]) continue;
    const reference = Math.abs(end[i]!) + 0.1 * (i < system.nodeCount ? scale.voltage : scale.current);
    largest = Math.max(largest, Math.abs(end[i]! - start[i]!) / reference);
  }
  return largest;
}

function differenceOfCharges(system: System, end: Float64Array, start: Float64Array): Float64Array {
  const difference = new Float64Array(system.vectorLength);
  // sources are where they were a period ago: only the unknowns differ
  for (let i = 0; i < system.size; i++) difference[i] = end[i]! - start[i]!;
  const result = new Float64Array(system.size + 1);
  applyStorage(system, difference, result);
  return result;
}

/**
 * Independent charges and fluxes: one column for each capacitor that closes no loop of capacitors, at one volt, and one for each inductor's
 * branch, at one ampere.
 */
function chargeBasis(system: System): Float64Array[] {
  const { size, circuit, nodeIndex, branchIndex } = system;
  const parent = Array.from({ length: size + 1 }, (_, i) => i);
  const find = (i: number): number => {
    let root = i;
    while (parent[root] !== root) root = parent[root]!;
    return root;
  };
  const basis: Float64Array[] = [];
  for (const component of circuit.components) {
    const column = new Float64Array(size);
    const branch = branchIndex.get(component.designator);
    if (component.kind === 'inductor') column[branch!] = component.inductance;
    else if (component.kind === 'capacitor') {
      // driven nodes hold whatever charge they are asked to, like the reference
      const first = Math.min(nodeIndex.get(component.nodes[0])!, size);
      const second = Math.min(nodeIndex.get(component.nodes[1])!, size);
      if (branch !== undefined) column[branch] = component.capacitance;
      else {
        if (find(first) === find(second)) continue;
        parent[find(first)] = find(second);
        if (first < size) column[first]! += component.capacitance;
        if (second < size) column[second]! -= component.capacitance;
      }
    } else continue;
    basis.push(column);
  }
  return basis;
}

/** Change of the starting charges that would close the period if the circuit were linear; undefined where it cannot be found. */
function newtonStep(
  system: System,
  march: TimeMarch,
  stepSystem: StepSystem,
  basis: readonly Float64Array[],
  residual: Float64Array,
): Float64Array | undefined {
  const { size } = system;
  const fixed = new Set(march.fixedTimes);
  const carry = (columns: Float64Array[]): void => propagate(system, march.recorder, stepSystem, columns, fixed);
  // rows of different size count alike: each is taken relative to the charge of one volt or ampere there
  const rowScale = new Float64Array(size).fill(0);
  for (const column of basis) for (let i = 0; i < size; i++) rowScale[i] = Math.max(rowScale[i]!, Math.abs(column[i]!));
  const weight = rowScale.map((value) => (value > 0 ? 1 / value : 0));
  const change = new Float64Array(size + 1);
  if (basis.length > LARGEST_DENSE) {
    const multiply = (x: Float64Array): Float64Array => {
      const column = x.map((value, i) => value * rowScale[i]!);
      carry([column]);
      return x.map((value, i) => value - column[i]! * weight[i]!);
    };
    const right = Float64Array.from({ length: size }, (_, i) => residual[i]! * weight[i]!);
    const x = solveGmres(multiply, right, 1e-4, LARGEST_DENSE);
    for (let i = 0; i < size; i++) change[i] = x[i]! * rowScale[i]!;
    return change;
  }
  const carried = basis.map((column) => column.slice());
  carry(carried);
  const rows: number[][] = [];
  const right: number[] = [];
  for (let i = 0; i < size; i++) {
    if (rowScale[i] === 0) continue;
    rows.push(basis.map((column, c) => (column[i]! - carried[c]![i]!) * weight[i]!));
    right.push(residual[i]! * weight[i]!);
  }
  for (const island of system.islands) {
    // the charge of a floating island is nobody's to change
    const largest = Math.max(...island.rows.map((row) => rowScale[row]!));
    rows.push(basis.map((column) => island.rows.reduce((sum, row) => sum + column[row]!, 0) / largest));
    right.push(0);
  }
  const x = solveLeastSquares(rows, right);
  if (!x) return undefined;
  basis.forEach((column, c) => {
    for (let i = 0; i < size; i++) change[i]! += x[c]! * column[i]!;
  });
  return change;
}
