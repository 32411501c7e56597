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

/** More than the simplified iteration is given: each iteration is a full one, with voltages limited. */
const MAXIMUM_ITERATIONS = 60;

/** Newton's method proper squares its error: an update this many times the tolerance leaves one far below it. */
const QUADRATIC_MARGIN = 10;

const STAGES = [C1, C2, 1] as const;

interface CoupledMemory {
  readonly stages: StepSystem;
  readonly values: Float64Array;
  readonly right: Float64Array;
  readonly base: Float64Array;
  readonly currents: Float64Array;
  readonly result: Float64Array;
  /** By stage. */
  readonly jacobians: readonly Float64Array[];
  readonly drives: readonly Float64Array[];
  readonly charges: readonly Float64Array[];
  /** The voltage about which each law was last evaluated. */
  readonly points: readonly Float64Array[];
}

const memories = new WeakMap<System, CoupledMemory>();

function memoryOf(system: System): CoupledMemory {
  let memory = memories.get(system);
  if (!memory) {
    const { size, laws, pattern } = system;
    const stages = createStepSystem(system);
    const three = (length: number): Float64Array[] => STAGES.map(() => new Float64Array(length));
    memory = {
      stages,
      values: new Float64Array(stages.pattern.column.length),
      right: new Float64Array(3 * size),
      base: new Float64Array(size + 1),
      currents: new Float64Array(size + 1),
      result: new Float64Array(2),
      jacobians: three(pattern.column.length + 1),
      drives: three(size + 1),
      charges: three(size + 1),
      points: three(laws.length),
    };
    memories.set(system, memory);
  }
  return memory;
}

/**
 * Solves the collocation equations by Newton's method proper, from increments of zero, with the junctions limited device by device at every stage.
 * Leaves the increments in `stepper.z`; false where it does not converge either.
 */
export function solveStagesFully(stepper: Stepper, t: number, h: number, y: Float64Array): boolean {
  const { system, z, effort } = stepper;
  const { laws } = system;
  const memory = memoryOf(system);
  applyConductance(system, y, memory.base);
  for (let a = 0; a < 3; a++) {
    const increment = z[a]!;
    const time = t + STAGES[a]! * h;
    increment.fill(0);
    for (const { index, sign, segment } of system.driven)
      increment[index] = sign * evaluateSegment(segment, time) - y[index]!;
    evaluateDrives(system, time, memory.drives[a]!);
    const points = memory.points[a]!;
    for (let k = 0; k < laws.length; k++) points[k] = y[laws[k]!.first]! - y[laws[k]!.second]!;
  }
  for (let iteration = 1; iteration <= MAXIMUM_ITERATIONS; iteration++) {
    effort.newtonIterations++;
    effort.factorisations++;
    linearise(stepper, memory, h, y);
    assembleStages(system, memory.stages, h, memory.jacobians, memory.values);
    if (!factoriseCoupled(memory.stages, memory.values)) return false;
    solveFactored(memory.stages.factors!, memory.right);
    const update = addUpdate(stepper, memory.right);
    if (!(update < 1e100)) return false;
    const limited = movePoints(stepper, memory, y);
    if (!limited && update <= QUADRATIC_MARGIN * stepper.newtonTolerance) {
      stepper.iterations = Math.min(iteration, 10);
      return true;
    }
  }
  return false;
}

/** Residuals and conductances of all stages, each law taken as linear about its point. */
function linearise(stepper: Stepper, memory: CoupledMemory, h: number, y: Float64Array): void {
  const { system, z } = stepper;
  const { size, laws } = system;
  const { base, currents, charges, drives, jacobians, points, result, right } = memory;
  for (let a = 0; a < 3; a++) applyStorage(system, z[a]!, charges[a]!);
  for (let a = 0; a < 3; a++) {
    const increment = z[a]!;
    const jacobian = jacobians[a]!;
    const point = points[a]!;
    applyConductance(system, increment, currents);
    jacobian.set(system.conductance);
    for (let k = 0; k < laws.length; k++) {
      const law = laws[k]!;
      const { first, second } = law;
      law.evaluate(point[k]!, result);
      const v = y[first]! - y[second]! + (increment[first]! - increment[second]!);
      const current = result[0]! + result[1]! * (v - point[k]!);
      currents[law.plus]! += current;
      currents[law.minus]! -= current;
      addLawConductance(law.slots, result[1]!, jacobian);
    }
    const w0 = A_INVERSE[a]![0]! / h;
    const w1 = A_INVERSE[a]![1]! / h;
    const w2 = A_INVERSE[a]![2]! / h;
    const drive = drives[a]!;
    for (let i = 0; i < size; i++) {
      const stored = w0 * charges[0]![i]! + w1 * charges[1]![i]! + w2 * charges[2]![i]!;
      right[a * size + i] = -(base[i]! + currents[i]! + drive[i]! + stored);
    }
  }
}

/** Adds the update to the increments; its largest element in units of the tolerance. */
function addUpdate(stepper: Stepper, update: Float64Array): number {
  const { system, z, newtonWeight } = stepper;
  const { size } = system;
  let largest = 0;
  for (let a = 0; a < 3; a++) {
    const increment = z[a]!;
    for (let i = 0; i < size; i++) {
      const change = update[a * size + i]!;
      increment[i]! += change;
      const scaled = Math.abs(change) * newtonWeight[i]!;
      if (!(scaled <= largest)) {
        largest = scaled;
        stepper.worst = i;
      }
    }
  }
  return largest;
}

/** Moves each law's point to the new voltage, as far as the law allows; true where one was held back. */
function movePoints(stepper: Stepper, memory: CoupledMemory, y: Float64Array): boolean {
  const { system, z } = stepper;
  let limited = false;
  for (let a = 0; a < 3; a++) {
    const increment = z[a]!;
    const points = memory.points[a]!;
    for (let k = 0; k < system.laws.length; k++) {
      const { first, second, limit } = system.laws[k]!;
      const asked = y[first]! - y[second]! + (increment[first]! - increment[second]!);
      const taken = limit ? limit(points[k]!, asked) : asked;
      if (Math.abs(taken - asked) > 1e-9 * Math.abs(asked)) limited = true;
      points[k] = taken;
    }
  }
  return limited;
}
