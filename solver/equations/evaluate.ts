/** Evaluating the equations: the innermost loops of every analysis. */
import { evaluateSegment } from '../wave-evaluation.ts';
import type { System } from './system.ts';

const scratch = new Float64Array(2);

/** f(y, t) with the drives' segments in force, to `f` (n + 1 elements). */
export function evaluateCurrents(system: System, t: number, y: Float64Array, f: Float64Array): void {
  applyLinear(system, system.conductance, y, f);
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

/** result = matrix · y with the matrix given by its values on the system's pattern. */
export function applyLinear(system: System, values: Float64Array, y: Float64Array, result: Float64Array): void {
  const { rowStart, column } = system.pattern;
  const n = system.size;
  let slot = 0;
  for (let i = 0; i < n; i++) {
    const end = rowStart[i + 1]!;
    let sum = 0;
    for (; slot < end; slot++) sum += values[slot]! * y[column[slot]!]!;
    result[i] = sum;
  }
}

/** The sum of the drives and constants alone: f at y = 0 without the laws. */
export function evaluateDrives(system: System, t: number, f: Float64Array): void {
  f.set(system.constant);
  for (const drive of system.drives) {
    const value = evaluateSegment(drive.segment, t);
    f[drive.plus]! += value;
    f[drive.minus]! -= value;
  }
}
