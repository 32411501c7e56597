/**
 * Newton's method for the static equations f(y, t) = 0, and for those with a storage term, f + rate (q(y) - q(start)) = 0,
 * which a small backward step and a pseudo-transient both are. The change since the start is an unknown of its own, so that a
 * large rate does not magnify the rounding of y. Junction voltages are limited device by device: each law is evaluated, and
 * taken as linear, about a voltage that moved no further than the law allows.
 */
import { applyConductance, applyStorage, evaluateDrives, setDriven } from './equations/evaluate.ts';
import type { System } from './equations/system.ts';
import { analyseAndFactorise, factorise, type RealFactors, solveFactored } from './linear/factors.ts';

/** Converged where the last update of every unknown was below this fraction of it ... */
const RELATIVE_UPDATE = 1e-11;
/** ... or below this fraction of the largest unknown of its kind. */
const ABSOLUTE_UPDATE = 1e-14;
/** An update that no longer shrinks is rounding error if it is below this. */
const ROUNDING_UPDATE = 1e-8;

export interface StaticProblem {
  readonly t: number;
  /** Factor on all sources: 1, or less while they are stepped up. */
  readonly driveScale: number;
  /** Conductance from every node to the reference, siemens: 0, or more while it is stepped down. */
  readonly shunt: number;
  /** 1/s; 0 leaves the storage term out. */
  readonly rate: number;
  /** Charge and flux by row that the starting vector lacks. */
  readonly missing?: Float64Array;
  /** Capacitance (farad) from every node to the reference, for a pseudo-transient. */
  readonly nodeCapacitance?: number;
  /** Charge rows in place of the current rows of floating islands. */
  readonly chargeRows: boolean;
  readonly damped: boolean;
  readonly maximumIterations: number;
}

export interface NewtonOutcome {
  readonly converged: boolean;
  readonly iterations: number;
  readonly factorisations: number;
  /** Index of the unknown that moved most in the last iteration. */
  readonly worst: number;
  /** Rows that turned out linearly dependent. */
  readonly singularColumns?: readonly number[];
}

export const PLAIN: StaticProblem = {
  t: 0,
  driveScale: 1,
  shunt: 0,
  rate: 0,
  chargeRows: true,
  damped: false,
  maximumIterations: 100,
};

/** Improves `y` in place, and sets its driven potentials. */
export function solveNewton(system: System, problem: StaticProblem, y: Float64Array): NewtonOutcome {
  const { size, pattern, laws, islands } = system;
  const entries = pattern.column.length;
  const jacobian = new Float64Array(entries + 1);
  const linear = new Float64Array(entries + 1);
  const right = new Float64Array(size + 1);
  const drives = new Float64Array(size + 1);
  const charge = new Float64Array(size + 1);
  const start = y.slice();
  const change = new Float64Array(system.vectorLength);
  const update = new Float64Array(size + 1);
  const base = new Float64Array(size + 1);
  applyConductance(system, start, base);
  setDriven(system, problem.t, y, problem.driveScale);
  for (const { index } of system.driven) change[index] = y[index]! - start[index]!;
  const point = Float64Array.from(laws, (law) => y[law.first]! - y[law.second]!);
  const result = new Float64Array(2);
  const nodes = system.nodeCount;
  evaluateDrives(system, problem.t, drives);
  if (problem.driveScale !== 1) for (let i = 0; i < size; i++) drives[i]! *= problem.driveScale;
  linear.set(system.conductance);
  const held = problem.rate * (problem.nodeCapacitance ?? 0);
  const diagonal = problem.shunt + held;
  if (problem.rate !== 0) for (let s = 0; s < entries; s++) linear[s]! += problem.rate * system.storage[s]!;
  if (diagonal !== 0) for (let i = 0; i < nodes; i++) linear[diagonalSlot(system, i)]! += diagonal;

  /** Ampere: the largest current of a law in the last residual. */
  let lawCurrent = 0;
  const residual = (at: Float64Array, withJacobian: boolean): void => {
    lawCurrent = 0;
    applyConductance(system, change, right);
    if (withJacobian) jacobian.set(linear);
    for (let i = 0; i < size; i++) right[i]! += base[i]! + drives[i]!;
    if (problem.shunt !== 0) for (let i = 0; i < nodes; i++) right[i]! += problem.shunt * at[i]!;
    if (problem.rate !== 0) {
      applyStorage(system, change, charge);
      for (let i = 0; i < size; i++) right[i]! += problem.rate * (charge[i]! - (problem.missing?.[i] ?? 0));
      if (held !== 0) for (let i = 0; i < nodes; i++) right[i]! += held * change[i]!;
    }
    for (let k = 0; k < laws.length; k++) {
      const law = laws[k]!;
      const v = at[law.first]! - at[law.second]!;
      law.evaluate(point[k]!, result);
      const current = result[0]! + result[1]! * (v - point[k]!);
      lawCurrent = Math.max(lawCurrent, Math.abs(current));
      right[law.plus]! += current;
      right[law.minus]! -= current;
      if (!withJacobian) continue;
      jacobian[law.slots[0]]! += result[1]!;
      jacobian[law.slots[1]]! -= result[1]!;
      jacobian[law.slots[2]]! -= result[1]!;
      jacobian[law.slots[3]]! += result[1]!;
    }
    if (problem.chargeRows && problem.rate === 0 && problem.shunt === 0 && islands.length > 0) {
      applyStorage(system, at, charge);
      for (const island of islands)
        putChargeRow(system, island.rows, charge, right, withJacobian ? jacobian : undefined);
    }
  };

  let factors: RealFactors | undefined;
  let factorisations = 0;
  let previousSize = Number.POSITIVE_INFINITY;
  let worst = 0;
  for (let iteration = 1; iteration <= problem.maximumIterations; iteration++) {
    residual(y, true);
    if (!factors || !factorise(factors, jacobian)) {
      const analysed = analyseAndFactorise(pattern, jacobian);
      if ('singular' in analysed) {
        return { converged: false, iterations: iteration, factorisations, worst, singularColumns: analysed.columns };
      }
      factors = analysed;
    }
    factorisations++;
    update.set(right);
    update[size] = 0;
    solveFactored(factors, update);
    let largestVoltage = 0;
    // a branch that carries next to nothing is known to the rounding of what its neighbours carry
    let largestCurrent = lawCurrent;
    for (let i = 0; i < size; i++) {
      const magnitude = Math.abs(y[i]! - update[i]!);
      if (i < nodes) largestVoltage = Math.max(largestVoltage, magnitude);
      else largestCurrent = Math.max(largestCurrent, magnitude);
    }
    let updateSize = 0;
    for (let i = 0; i < size; i++) {
      const scale =
        RELATIVE_UPDATE * Math.abs(y[i]! - update[i]!) +
        ABSOLUTE_UPDATE * (i < nodes ? largestVoltage + 1e-3 : largestCurrent + 1e-9);
      const relative = Math.abs(update[i]!) / scale;
      if (!(relative <= updateSize)) {
        updateSize = relative;
        worst = i;
      }
    }
    if (!Number.isFinite(updateSize)) return { converged: false, iterations: iteration, factorisations, worst };
    const fraction = problem.damped ? dampingFactor(y, update, nodes) : 1;
    for (let i = 0; i < size; i++) {
      change[i]! -= fraction * update[i]!;
      y[i] = start[i]! + change[i]!;
    }
    let limited = false;
    for (let k = 0; k < laws.length; k++) {
      const law = laws[k]!;
      const asked = y[law.first]! - y[law.second]!;
      const taken = law.limit ? law.limit(point[k]!, asked) : asked;
      if (Math.abs(taken - asked) > 1e-12 * Math.abs(asked)) limited = true;
      point[k] = taken;
    }
    if (!limited && fraction === 1) {
      const rounding = updateSize < ROUNDING_UPDATE / RELATIVE_UPDATE && updateSize > 0.3 * previousSize;
      if (updateSize <= 1 || rounding) return { converged: true, iterations: iteration, factorisations, worst };
    }
    previousSize = updateSize;
  }
  return { converged: false, iterations: problem.maximumIterations, factorisations, worst };
}

/** No node moves by more than a few volts in a damped iteration, nor by more than its own size. */
function dampingFactor(y: Float64Array, update: Float64Array, nodes: number): number {
  let fraction = 1;
  for (let i = 0; i < nodes; i++) {
    const allowed = Math.max(0.5, 0.5 * Math.abs(y[i]!));
    if (Math.abs(update[i]!) * fraction > allowed) fraction = allowed / Math.abs(update[i]!);
  }
  return fraction;
}

function diagonalSlot(system: System, row: number): number {
  const { rowStart, column } = system.pattern;
  let slot = rowStart[row]!;
  while (column[slot] !== row) slot++;
  return slot;
}

/** Replaces the first row by the sum of the charges on all rows of an island. */
function putChargeRow(
  system: System,
  rows: readonly number[],
  charge: Float64Array,
  right: Float64Array,
  jacobian: Float64Array | undefined,
): void {
  const { rowStart, column } = system.pattern;
  const target = rows[0]!;
  right[target] = 0;
  for (const row of rows) right[target]! += charge[row]!;
  if (!jacobian) return;
  const slots = new Map<number, number>();
  for (let s = rowStart[target]!; s < rowStart[target + 1]!; s++) {
    slots.set(column[s]!, s);
    jacobian[s] = 0;
  }
  for (const row of rows) {
    for (let s = rowStart[row]!; s < rowStart[row + 1]!; s++) {
      const value = system.storage[s]!;
      if (value !== 0) jacobian[slots.get(column[s]!)!]! += value;
    }
  }
}
