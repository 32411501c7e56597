/** Evaluating the equations: the innermost loops of every analysis. */
import type { Pattern } from '../linear/pattern.ts';
import { evaluateSegment } from '../wave-evaluation.ts';
import type { System } from './system.ts';

const scratch = new Float64Array(2);

/** f(y, t) with the drives' segments in force, to `f`; `y` holds the driven potentials at t. */
export function evaluateCurrents(system: System, t: number, y: Float64Array, f: Float64Array): void {
  applyConductance(system, y, f);
  const { constant, size } = system;
  for (let i = 0; i < size; i++) f[i]! += constant[i]!;
  for (const drive of system.drives) {
    const value = evaluateSegment(drive.segment, t);
    f[drive.plus]! += value;
    f[drive.minus]! -= value;
  }
  for (const law of system.laws) {
    law.evaluate(y[law.first]! - y[law.second]!, scratch);
    f[law.plus]! += scratch[0]!;
    f[law.minus]! -= scratch[0]!;
  }
}

/** df/dy at y, to `jacobian` (one element more than the pattern has entries). */
export function evaluateConductances(system: System, y: Float64Array, jacobian: Float64Array): void {
  jacobian.set(system.conductance);
  for (const law of system.laws) {
    law.evaluate(y[law.first]! - y[law.second]!, scratch);
    addLawConductance(law.slots, scratch[1]!, jacobian);
  }
}

export function addLawConductance(
  slots: readonly [number, number, number, number],
  conductance: number,
  jacobian: Float64Array,
): void {
  jacobian[slots[0]]! += conductance;
  jacobian[slots[1]]! -= conductance;
  jacobian[slots[2]]! -= conductance;
  jacobian[slots[3]]! += conductance;
}

/** result = G y, the linear part of f. */
export function applyConductance(system: System, y: Float64Array, result: Float64Array): void {
  apply(system.pattern, system.conductance, y, result);
  addDriven(system.drivenPattern, system.conductanceOfDriven, y, result);
}

/** result = C y: charges and fluxes by row, or with increments for y, their changes. */
export function applyStorage(system: System, y: Float64Array, result: Float64Array): void {
  apply(system.pattern, system.storage, y, result);
  addDriven(system.drivenPattern, system.storageOfDriven, y, result);
}

/** Writes the driven nodes' potentials at t into `y`. */
export function setDriven(system: System, t: number, y: Float64Array, scale = 1): void {
  for (const node of system.driven) y[node.index] = scale * node.sign * evaluateSegment(node.segment, t);
}

/** The sources' and constants' part of f. */
export function evaluateDrives(system: System, t: number, f: Float64Array): void {
  f.set(system.constant);
  for (const drive of system.drives) {
    const value = evaluateSegment(drive.segment, t);
    f[drive.plus]! += value;
    f[drive.minus]! -= value;
  }
}

function apply(pattern: Pattern, values: Float64Array, y: Float64Array, result: Float64Array): void {
  const { rowStart, column, size } = pattern;
  let slot = 0;
  for (let i = 0; i < size; i++) {
    const end = rowStart[i + 1]!;
    let sum = 0;
    for (; slot < end; slot++) sum += values[slot]! * y[column[slot]!]!;
    result[i] = sum;
  }
}

function addDriven(pattern: Pattern, values: Float64Array, y: Float64Array, result: Float64Array): void {
  const { rowStart, column, size } = pattern;
  let slot = 0;
  for (let i = 0; i < size; i++) {
    const end = rowStart[i + 1]!;
    for (; slot < end; slot++) result[i]! += values[slot]! * y[column[slot]!]!;
  }
}
