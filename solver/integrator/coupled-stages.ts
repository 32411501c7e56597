/**
 * The three stages of a Radau step as one sparse system of size 3n, with the conductances of each stage: what the simplified iteration avoids, and
 * what is needed where it does not converge (junctions that swing by volts within a step) and for exact derivatives of a step.
 */
import { addLawConductance, applyConductance, applyStorage, evaluateDrives } from '../equations/evaluate.ts';
import type { System } from '../equations/system.ts';
import { analyseAndFactorise, factorise, type RealFactors, solveFactored } from '../linear/factors.ts';
import { buildPattern, type Pattern, slotOf } from '../linear/pattern.ts';
import { evaluateSegment } from '../wave-evaluation.ts';
import { ALPHA, BETA, C1, C2, GAMMA, T, T_INVERSE } from './radau-coefficients.ts';
import type { Stepper } from './radau-step.ts';

/** Inverse of the Radau coefficient matrix. */
export const A_INVERSE = T.map((row) =>
  [0, 1, 2].map((j) => {
    const [a, b, c] = [row[0], row[1] ?? 0, row[2] ?? 0];
    const x = T_INVERSE[0][j]!;
    const y = T_INVERSE[1][j]!;
    const z = T_INVERSE[2][j]!;
    return a * GAMMA * x + b * (ALPHA * y - BETA * z) + c * (BETA * y + ALPHA * z);
  }),
);

/** Its row sums: what a charge at the start of a step adds to the stages. */
export const ROW_SUMS = A_INVERSE.map((row) => row[0]! + row[1]! + row[2]!);

export interface StepSystem {
  readonly pattern: Pattern;
  /** For every entry of the circuit's pattern: where it goes, [block row 3][block column 3]. */
  readonly slots: readonly Int32Array[];
  factors?: RealFactors;
}

/** The pattern of three coupled stages. */
export function createStepSystem(system: System): StepSystem {
  const { size, pattern } = system;
  const positions: [number, number][] = [];
  for (let i = 0; i < size; i++) {
    for (let s = pattern.rowStart[i]!; s < pattern.rowStart[i + 1]!; s++) {
      for (let a = 0; a < 3; a++)
        for (let b = 0; b < 3; b++)
          if (a === b || system.storage[s] !== 0) positions.push([a * size + i, b * size + pattern.column[s]!]);
    }
  }
  const block = buildPattern(3 * size, positions);
  const slots: Int32Array[] = [];
  for (let a = 0; a < 3; a++) {
    for (let b = 0; b < 3; b++) {
      const map = new Int32Array(pattern.column.length).fill(-1);
      for (let i = 0; i < size; i++) {
        for (let s = pattern.rowStart[i]!; s < pattern.rowStart[i + 1]!; s++) {
          if (a === b || system.storage[s] !== 0) map[s] = slotOf(block, a * size + i, b * size + pattern.column[s]!);
        }
      }
      slots.push(map);
    }
  }
  return { pattern: block, slots };
}

/** Sums the stages' conductances (values on the circuit's pattern) and the coupling by the stored charge into `values`. */
export function assembleStages(
  system: System,
  stages: StepSystem,
  h: number,
  jacobians: readonly Float64Array[],
  values: Float64Array,
): void {
  values.fill(0);
  const { storage } = system;
  for (let a = 0; a < 3; a++) {
    const own = stages.slots[4 * a]!;
    const jacobian = jacobians[a]!;
    for (let s = 0; s < own.length; s++) values[own[s]!]! += jacobian[s]!;
    for (let b = 0; b < 3; b++) {
      const weight = A_INVERSE[a]![b]! / h;
      const map = stages.slots[3 * a + b]!;
      for (let s = 0; s < map.length; s++) if (map[s]! >= 0) values[map[s]!]! += weight * storage[s]!;
    }
  }
}

/** Factorises the assembled stages; false where they are singular. */
export function factoriseCoupled(stages: StepSystem, values: Float64Array): boolean {
  if (stages.factors && factorise(stages.factors, values)) return true;
  const analysed = analyseAndFactorise(stages.pattern, values);
  if ('singular' in analysed) return false;
  stages.factors = analysed;
  return true;
}

const coupled = new WeakMap<System, StepSystem>();

/** More than the simplified iteration is given: each iteration is a full one, with voltages limited. */
const MAXIMUM_ITERATIONS = 60;

/**
 * Solves the collocation equations by Newton's method proper, from increments of zero, with the junctions limited device by device at every stage.
 * Leaves the increments in `stepper.z`; false where it does not converge either.
 */
export function solveStagesFully(stepper: Stepper, t: number, h: number, y: Float64Array): boolean {
  const { system, z, weight, effort } = stepper;
  const { size, laws } = system;
  let stages = coupled.get(system);
  if (!stages) {
    stages = createStepSystem(system);
    coupled.set(system, stages);
  }
  const nodes = [C1, C2, 1];
  for (const increment of z) increment.fill(0);
  for (const { index, sign, segment } of system.driven) {
    nodes.forEach((node, a) => {
      z[a]![index] = sign * evaluateSegment(segment, t + node * h) - y[index]!;
    });
  }
  const base = new Float64Array(size + 1);
  applyConductance(system, y, base);
  const values = new Float64Array(stages.pattern.column.length);
  const right = new Float64Array(3 * size);
  const jacobians = nodes.map(() => new Float64Array(system.pattern.column.length + 1));
  const drives = nodes.map((node) => {
    const drive = new Float64Array(size + 1);
    evaluateDrives(system, t + node * h, drive);
    return drive;
  });
  const currents = new Float64Array(size + 1);
  const charges = z.map(() => new Float64Array(size + 1));
  const result = new Float64Array(2);
  const points = nodes.map(() => Float64Array.from(laws, (law) => y[law.first]! - y[law.second]!));
  for (let iteration = 1; iteration <= MAXIMUM_ITERATIONS; iteration++) {
    effort.newtonIterations++;
    effort.factorisations++;
    z.forEach((increment, a) => {
      applyStorage(system, increment, charges[a]!);
    });
    for (let a = 0; a < 3; a++) {
      const increment = z[a]!;
      applyConductance(system, increment, currents);
      const jacobian = jacobians[a]!;
      jacobian.set(system.conductance);
      laws.forEach((law, k) => {
        const point = points[a]![k]!;
        law.evaluate(point, result);
        const v = y[law.first]! - y[law.second]! + (increment[law.first]! - increment[law.second]!);
        const current = result[0]! + result[1]! * (v - point);
        currents[law.plus]! += current;
        currents[law.minus]! -= current;
        addLawConductance(law.slots, result[1]!, jacobian);
      });
      const [w0, w1, w2] = A_INVERSE[a]!;
      for (let i = 0; i < size; i++) {
        const stored = (w0! * charges[0]![i]! + w1! * charges[1]![i]! + w2! * charges[2]![i]!) / h;
        right[a * size + i] = -(base[i]! + currents[i]! + drives[a]![i]! + stored);
      }
    }
    assembleStages(system, stages, h, jacobians, values);
    if (!factoriseCoupled(stages, values)) return false;
    solveFactored(stages.factors!, right);
    let update = 0;
    for (let a = 0; a < 3; a++) {
      for (let i = 0; i < size; i++) {
        const change = right[a * size + i]!;
        z[a]![i]! += change;
        const scaled = Math.abs(change) * weight[i]!;
        if (!(scaled <= update)) {
          update = scaled;
          stepper.worst = i;
        }
      }
    }
    if (!(update < 1e100)) return false;
    let limited = false;
    for (let a = 0; a < 3; a++) {
      laws.forEach((law, k) => {
        const asked = y[law.first]! - y[law.second]! + (z[a]![law.first]! - z[a]![law.second]!);
        const taken = law.limit ? law.limit(points[a]![k]!, asked) : asked;
        if (Math.abs(taken - asked) > 1e-9 * Math.abs(asked)) limited = true;
        points[a]![k] = taken;
      });
    }
    if (!limited && update <= 0.1 * stepper.newtonTolerance) {
      stepper.iterations = Math.min(iteration, 10);
      return true;
    }
  }
  return false;
}
