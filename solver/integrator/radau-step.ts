/**
 * One step of the Radau IIA method for f(y, t) + d/dt q(y) = 0: the collocation equations are solved by a simplified Newton iteration
 * on transformed increments (Hairer and Wanner, Solving ODEs II, section IV.8). All memory is taken once, before the time loop.
 */
import type { Effort } from '../analysis.ts';
import { addLawConductance, applyConductance, applyStorage, evaluateDrives } from '../equations/evaluate.ts';
import type { System } from '../equations/system.ts';
import {
  allocateComplexFactors,
  type ComplexFactors,
  factoriseComplex,
  solveComplex,
} from '../linear/complex-factors.ts';
import { analyseAndFactorise, factorise, type RealFactors, solveFactored } from '../linear/factors.ts';
import { evaluateSegment } from '../wave-evaluation.ts';
import { solveStagesFully } from './coupled-stages.ts';
import { ALPHA, BETA, C1, C2, ERROR_WEIGHTS, GAMMA, T, T_INVERSE } from './radau-coefficients.ts';

// taken apart once, not in the innermost loop
const [[t11, t12, t13], [t21, t22, t23], [t31]] = T;
const [[i11, i12, i13], [i21, i22, i23], [i31, i32, i33]] = T_INVERSE;
const [e1, e2, e3] = ERROR_WEIGHTS;

const MAXIMUM_ITERATIONS = 10;

/** Remaining error after a second iteration, as a fraction of its update, at least. */
const UNPROVEN = 0.3;

export interface Stepper {
  readonly system: System;
  readonly effort: Effort;
  /** Increments over the step's start at the three stages: vectors, driven potentials included. */
  readonly z: readonly [Float64Array, Float64Array, Float64Array];
  /** Increments that the predictor gave, for the check of the dense output. */
  readonly predicted: Float64Array;
  /** Error estimate of the last step by unknown. */
  readonly error: Float64Array;
  /** 1 / tolerance by unknown; the caller keeps it up to date. */
  readonly weight: Float64Array;
  /** The same for updates of Newton's method: at a junction's nodes, by how far its voltage may be off. */
  readonly newtonWeight: Float64Array;
  /** Least slope voltage of the junctions at a node; infinite where there is none. */
  readonly nodeSlope: Float64Array;
  /** Length of the step that `z` belongs to; 0 where there is none to extrapolate from. */
  previousStep: number;
  /** Length of the step that the last prediction was extrapolated from; 0 where it was a constant. */
  extrapolatedFrom: number;
  /** Rate of convergence and iterations of the last Newton solve. */
  contraction: number;
  iterations: number;
  /** Stop once the last update is this small in the weighted norm. */
  newtonTolerance: number;
  /** The unknown that was furthest from settled, for messages. */
  worst: number;
  readonly memory: StepMemory;
}

interface StepMemory {
  readonly w: readonly [Float64Array, Float64Array, Float64Array];
  readonly f: readonly [Float64Array, Float64Array, Float64Array];
  readonly drive: readonly [Float64Array, Float64Array, Float64Array];
  /** G y at the step's start. */
  readonly base: Float64Array;
  readonly y: Float64Array;
  readonly right: readonly [Float64Array, Float64Array, Float64Array];
  readonly stored: readonly [Float64Array, Float64Array, Float64Array];
  readonly jacobian: Float64Array;
  readonly stageConductance: Float64Array;
  readonly conductanceOfStage: Float64Array;
  readonly real: Float64Array;
  readonly complexReal: Float64Array;
  readonly complexImaginary: Float64Array;
  readonly law: Float64Array;
  factors?: RealFactors;
  complex?: ComplexFactors;
}

type Three = [Float64Array, Float64Array, Float64Array];

export function createStepper(system: System, effort: Effort): Stepper {
  const n = system.vectorLength;
  const entries = system.pattern.column.length + 1;
  const three = (): Three => [new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  return {
    system,
    effort,
    z: three(),
    predicted: new Float64Array(n),
    error: new Float64Array(n),
    weight: new Float64Array(n).fill(1),
    newtonWeight: new Float64Array(n).fill(1),
    nodeSlope: slopesAtNodes(system),
    previousStep: 0,
    extrapolatedFrom: 0,
    contraction: 0,
    iterations: 0,
    newtonTolerance: 1e-2,
    worst: 0,
    memory: {
      w: three(),
      f: three(),
      drive: three(),
      base: new Float64Array(n),
      y: new Float64Array(n),
      right: three(),
      stored: three(),
      jacobian: new Float64Array(entries),
      stageConductance: new Float64Array(entries),
      conductanceOfStage: new Float64Array(entries),
      real: new Float64Array(entries),
      complexReal: new Float64Array(entries),
      complexImaginary: new Float64Array(entries),
      law: new Float64Array(2),
    },
  };
}

function slopesAtNodes(system: System): Float64Array {
  const slopes = new Float64Array(system.vectorLength).fill(Number.POSITIVE_INFINITY);
  for (const { first, second, slopeVoltage } of system.laws) {
    for (const node of [first, second])
      slopes[node] = Math.min(slopes[node]!, slopeVoltage ?? Number.POSITIVE_INFINITY);
  }
  return slopes;
}

/** Forgets the last step: the next one starts from a constant. */
export function forgetHistory(stepper: Stepper): void {
  stepper.previousStep = 0;
}

/** Solves the collocation equations of a step from (t, y) over h; false where Newton's method does not converge. */
export function solveStages(stepper: Stepper, t: number, h: number, y: Float64Array): boolean {
  const { system, z, memory } = stepper;
  stepper.extrapolatedFrom = stepper.previousStep;
  predict(stepper, h);
  stepper.predicted.set(z[0]);
  evaluateDrives(system, t + C1 * h, memory.drive[0]);
  evaluateDrives(system, t + C2 * h, memory.drive[1]);
  evaluateDrives(system, t + h, memory.drive[2]);
  for (const { index, sign, segment } of system.driven) {
    z[0][index] = sign * evaluateSegment(segment, t + C1 * h) - y[index]!;
    z[1][index] = sign * evaluateSegment(segment, t + C2 * h) - y[index]!;
    z[2][index] = sign * evaluateSegment(segment, t + h) - y[index]!;
  }
  applyConductance(system, y, memory.base);
  linearise(stepper, y);
  if (!factoriseStages(stepper, h)) return false;
  const converged = iterate(stepper, h, y);
  stepper.previousStep = converged ? h : 0;
  return converged;
}

/**
 * The same by Newton's method proper, for steps at which the simplified iteration fails; several times the work. Leaves the matrices that the error
 * estimate needs.
 */
export function solveStagesRobustly(stepper: Stepper, t: number, h: number, y: Float64Array): boolean {
  stepper.extrapolatedFrom = 0;
  if (!solveStagesFully(stepper, t, h, y)) return false;
  linearise(stepper, y);
  if (!factoriseStages(stepper, h)) return false;
  stepper.previousStep = h;
  return true;
}

/** Increments from the collocation polynomial of the step before, continued (section IV.8, equation 8.5). */
function predict(stepper: Stepper, h: number): void {
  const z1 = stepper.z[0];
  const z2 = stepper.z[1];
  const z3 = stepper.z[2];
  const n = stepper.system.size;
  if (stepper.previousStep === 0) {
    z1.fill(0);
    z2.fill(0);
    z3.fill(0);
    return;
  }
  const ratio = h / stepper.previousStep;
  const s1 = C1 * ratio;
  const s2 = C2 * ratio;
  for (let i = 0; i < n; i++) {
    // divided differences about the last step's end
    const a = z1[i]!;
    const b = z2[i]!;
    const c = z3[i]!;
    const d1 = (b - c) / (C2 - 1);
    const d12 = (a - b) / (C1 - C2);
    const d2 = (d12 - d1) / (C1 - 1);
    const d3 = d2 - (d12 - a / C1) / C2;
    z1[i] = s1 * (d1 + (s1 - (C2 - 1)) * (d2 + (s1 - (C1 - 1)) * d3));
    z2[i] = s2 * (d1 + (s2 - (C2 - 1)) * (d2 + (s2 - (C1 - 1)) * d3));
    z3[i] = ratio * (d1 + (ratio - (C2 - 1)) * (d2 + (ratio - (C1 - 1)) * d3));
  }
}

/**
 * df/dy for the simplified iteration: each law's conductance is taken at the middle stage as predicted, nearer to what the three
 * stages see than the step's start is.
 */
function linearise(stepper: Stepper, y: Float64Array): void {
  const { system, z, memory } = stepper;
  const { jacobian, law: result } = memory;
  const middle = z[1];
  jacobian.set(system.conductance);
  for (const law of system.laws) {
    const { first, second } = law;
    law.evaluate(y[first]! - y[second]! + (middle[first]! - middle[second]!), result);
    addLawConductance(law.slots, result[1]!, jacobian);
  }
}

/**
 * How many times smaller than the true correction an update may be, because the iteration uses conductances far above those of the stages it
 * has come to: on the steep part of a junction's law every update then looks small, however far the solution is.
 */
function shortfall(stepper: Stepper): number {
  const { system, memory } = stepper;
  const { real, jacobian, stageConductance } = memory;
  let worst = 1;
  for (let k = 0; k < system.laws.length; k++) {
    const law = system.laws[k]!;
    const diagonal = law.plus < system.size ? law.slots[0] : law.slots[3];
    const held = Math.abs(real[diagonal]!);
    const used = jacobian[diagonal]! - system.conductance[diagonal]!;
    const needed = held - used + stageConductance[diagonal]!;
    if (held > worst * needed) worst = needed > 0 ? held / needed : Number.POSITIVE_INFINITY;
  }
  return worst;
}

function factoriseStages(stepper: Stepper, h: number): boolean {
  const { system, memory, effort } = stepper;
  const { storage, pattern } = system;
  const { jacobian, real, complexReal, complexImaginary } = memory;
  const entries = pattern.column.length;
  const gamma = GAMMA / h;
  const alpha = ALPHA / h;
  const beta = BETA / h;
  for (let s = 0; s < entries; s++) {
    const c = storage[s]!;
    const g = jacobian[s]!;
    real[s] = g + gamma * c;
    complexReal[s] = g + alpha * c;
    complexImaginary[s] = beta * c;
  }
  effort.factorisations++;
  if (!memory.factors || !factorise(memory.factors, real)) {
    const analysed = analyseAndFactorise(pattern, real);
    if ('singular' in analysed) {
      stepper.worst = analysed.columns[0] ?? 0;
      return false;
    }
    memory.factors = analysed;
    memory.complex = allocateComplexFactors(analysed.elimination);
  }
  return factoriseComplex(memory.complex!, complexReal, complexImaginary);
}

function iterate(stepper: Stepper, h: number, y: Float64Array): boolean {
  const { system, z, memory, effort, newtonWeight } = stepper;
  const z1 = z[0];
  const z2 = z[1];
  const z3 = z[2];
  const w1 = memory.w[0];
  const w2 = memory.w[1];
  const w3 = memory.w[2];
  const r1 = memory.right[0];
  const r2 = memory.right[1];
  const r3 = memory.right[2];
  const f1 = memory.f[0];
  const f2 = memory.f[1];
  const f3 = memory.f[2];
  const s1 = memory.stored[0];
  const s2 = memory.stored[1];
  const s3 = memory.stored[2];
  const n = system.size;
  const factors = memory.factors!;
  const complex = memory.complex!;
  const gamma = GAMMA / h;
  const alpha = ALPHA / h;
  const beta = BETA / h;
  const all = system.vectorLength;
  for (let i = 0; i < all; i++) {
    const a = z1[i]!;
    const b = z2[i]!;
    const c = z3[i]!;
    w1[i] = i11 * a + i12 * b + i13 * c;
    w2[i] = i21 * a + i22 * b + i23 * c;
    w3[i] = i31 * a + i32 * b + i33 * c;
  }
  // one iteration solves a linear circuit
  const linear = system.laws.length === 0;
  let previous = 0;
  let contraction = 0;
  let previousContraction = 0;
  stepper.contraction = 0;
  for (let iteration = 1; iteration <= MAXIMUM_ITERATIONS; iteration++) {
    stepper.iterations = iteration;
    effort.newtonIterations++;
    stageCurrents(stepper, y);
    applyStorage(system, w1, s1);
    applyStorage(system, w2, s2);
    applyStorage(system, w3, s3);
    for (let i = 0; i < n; i++) {
      const a = f1[i]!;
      const b = f2[i]!;
      const c = f3[i]!;
      r1[i] = -(i11 * a + i12 * b + i13 * c) - gamma * s1[i]!;
      r2[i] = -(i21 * a + i22 * b + i23 * c) - alpha * s2[i]! + beta * s3[i]!;
      r3[i] = -(i31 * a + i32 * b + i33 * c) - alpha * s3[i]! - beta * s2[i]!;
    }
    solveFactored(factors, r1);
    solveComplex(complex, r2, r3);
    let square = 0;
    let largest = 0;
    for (let i = 0; i < n; i++) {
      const a = r1[i]!;
      const b = r2[i]!;
      const c = r3[i]!;
      w1[i]! += a;
      w2[i]! += b;
      w3[i]! += c;
      const d1 = t11 * a + t12 * b + t13 * c;
      const d2 = t21 * a + t22 * b + t23 * c;
      const d3 = t31 * a + b;
      z1[i]! += d1;
      z2[i]! += d2;
      z3[i]! += d3;
      const scale = newtonWeight[i]!;
      const size = (d1 * d1 + d2 * d2 + d3 * d3) * scale * scale;
      square += size;
      if (size > largest) {
        largest = size;
        stepper.worst = i;
      }
    }
    const update = Math.sqrt(square / (3 * n || 1));
    if (!(update < 1e100)) return false;
    if (iteration > 1) {
      const rate = update / previous;
      contraction = iteration === 2 ? rate : Math.sqrt(rate * previousContraction);
      previousContraction = rate;
      stepper.contraction = contraction;
      if (contraction >= 0.99) {
        // a law that bends within the step may need one more look before it contracts
        if (iteration > 3 || contraction > 10) return false;
      } else {
        // the first update moves what is linear all the way: set against it, the second shows little of how fast the laws converge
        const convergence = Math.max(contraction / (1 - contraction), iteration === 2 ? UNPROVEN : 0);
        if (convergence * update <= stepper.newtonTolerance) {
          if (convergence * update * shortfall(stepper) <= stepper.newtonTolerance) return true;
        }
        const forecast = convergence * update * contraction ** (MAXIMUM_ITERATIONS - 1 - iteration);
        if (forecast > stepper.newtonTolerance && iteration > 2) return false;
      }
      // a single small update proves nothing: a conductance taken far too large makes every update small
    } else if (linear || update === 0) return true;
    previous = Math.max(update, 1e-300);
  }
  return false;
}

/**
 * f at the three stages. The linear part is taken of the increments, over its value at the step's start: its rounding is then the same in every
 * iteration, and does not keep a node from settling that almost nothing holds.
 */
function stageCurrents(stepper: Stepper, y: Float64Array): void {
  const { system, z, memory } = stepper;
  const n = system.size;
  const { base, law: result, stageConductance } = memory;
  const { laws } = system;
  // by diagonal entry of the matrix: the conductance of the laws there, at the stage where it is least
  for (const law of laws) stageConductance[law.plus < n ? law.slots[0] : law.slots[3]] = 0;
  const ofStage = memory.conductanceOfStage;
  for (let stage = 0; stage < 3; stage++) {
    const increment = z[stage]!;
    const f = memory.f[stage]!;
    const drive = memory.drive[stage]!;
    applyConductance(system, increment, f);
    for (let i = 0; i < n; i++) f[i]! += base[i]! + drive[i]!;
    for (const law of laws) ofStage[law.plus < n ? law.slots[0] : law.slots[3]] = 0;
    for (let k = 0; k < laws.length; k++) {
      const law = laws[k]!;
      const { first, second } = law;
      law.evaluate(y[first]! - y[second]! + (increment[first]! - increment[second]!), result);
      ofStage[law.plus < n ? law.slots[0] : law.slots[3]]! += result[1]!;
      f[law.plus]! += result[0]!;
      f[law.minus]! -= result[0]!;
    }
    for (const law of laws) {
      const diagonal = law.plus < n ? law.slots[0] : law.slots[3];
      const value = ofStage[diagonal]!;
      if (stage === 0 || value < stageConductance[diagonal]!) stageConductance[diagonal] = value;
    }
  }
}

/**
 * Local error of the step just solved, by unknown, to `stepper.error`: the difference to an embedded formula of order 3, filtered through the real
 * matrix so that stiff components are not overestimated (section IV.8, equation 8.20). `start` is f(y, t) at the step's start.
 */
export function estimateError(stepper: Stepper, h: number, start: Float64Array): void {
  const { system, z, memory, error } = stepper;
  const z1 = z[0];
  const z2 = z[1];
  const z3 = z[2];
  const n = system.size;
  const combined = memory.y;
  for (let i = 0; i < system.vectorLength; i++) combined[i] = (e1 * z1[i]! + e2 * z2[i]! + e3 * z3[i]!) / h;
  applyStorage(system, combined, error);
  // an equation without charge holds at the start to rounding, of which a node that next to nothing holds would make an error
  for (let i = 0; i < n; i++) if (system.storing[i]) error[i]! -= start[i]!;
  solveFactored(memory.factors!, error);
}
