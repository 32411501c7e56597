/** The three-stage Radau IIA method: its tables' identities, and its order measured. */
import { describe, expect, test } from 'vitest';
import type { Effort } from '../../../solver/analysis.ts';
import type { Circuit } from '../../../solver/circuit.ts';
import { buildSystem } from '../../../solver/equations/build-system.ts';
import { evaluateCurrents, setDriven } from '../../../solver/equations/evaluate.ts';
import { A_INVERSE, ROW_SUMS } from '../../../solver/integrator/coupled-stages.ts';
import {
  ALPHA,
  BETA,
  C1,
  C2,
  ERROR_WEIGHTS,
  GAMMA,
  START_WEIGHTS,
  T,
  T_INVERSE,
} from '../../../solver/integrator/radau-coefficients.ts';
import {
  createStepper,
  estimateError,
  solveStages,
  solveStagesRobustly,
} from '../../../solver/integrator/radau-step.ts';
import { segmentAt } from '../../../solver/wave-evaluation.ts';
import { RADAU_WEIGHTS } from '../../../solver/waveform/waveform.ts';
import { capacitor, circuit, diode, exponential, inductor, resistor, sine, source, VT_300 } from '../circuits.ts';

type Matrix = readonly (readonly number[])[];
const times = (a: Matrix, b: Matrix): number[][] =>
  a.map((row) => b[0]!.map((_, j) => row.reduce((sum, value, k) => sum + value * b[k]![j]!, 0)));
const expectMatrix = (found: Matrix, expected: Matrix): void => {
  found.forEach((row, i) => {
    row.forEach((value, j) => {
      expect(Math.abs(value - expected[i]![j]!)).toBeLessThan(1e-13);
    });
  });
};
const identity: Matrix = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];
const R6 = Math.sqrt(6);
/** E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd edition, table IV.5.6 (Radau IIA, order 5); from memory. */
const A: Matrix = [
  [(88 - 7 * R6) / 360, (296 - 169 * R6) / 1800, (-2 + 3 * R6) / 225],
  [(296 + 169 * R6) / 1800, (88 + 7 * R6) / 360, (-2 - 3 * R6) / 225],
  [(16 - R6) / 36, (16 + R6) / 36, 1 / 9],
];
const c = [C1, C2, 1];

describe('coefficients', () => {
  test('T and its inverse', () => {
    expectMatrix(times(T, T_INVERSE), identity);
    expectMatrix(times(T_INVERSE, T), identity);
  });

  test('T Λ T⁻¹ is the inverse of the coefficient matrix', () => {
    const blocks: Matrix = [
      [GAMMA, 0, 0],
      [0, ALPHA, -BETA],
      [0, BETA, ALPHA],
    ];
    const inverse = times(times(T, blocks), T_INVERSE);
    expectMatrix(times(inverse, A), identity);
    expectMatrix(A_INVERSE, inverse);
    ROW_SUMS.forEach((sum, i) => {
      expect(Math.abs(sum - inverse[i]!.reduce((total, value) => total + value, 0))).toBeLessThan(1e-13);
    });
  });

  test('eigenvalues: the characteristic polynomial of the inverse is λ³ - 9 λ² + 36 λ - 60 (Padé approximant 2/3 of exp)', () => {
    const p = (re: number, im: number): number => {
      const [a2, b2] = [re * re - im * im, 2 * re * im];
      const [a3, b3] = [a2 * re - b2 * im, a2 * im + b2 * re];
      return Math.hypot(a3 - 9 * a2 + 36 * re - 60, b3 - 9 * b2 + 36 * im);
    };
    expect(p(GAMMA, 0)).toBeLessThan(1e-12);
    expect(p(ALPHA, BETA)).toBeLessThan(1e-12);
  });

  test('order conditions: B(5) of the quadrature, C(3) and D(2) of the stages', () => {
    const b = A[2]!;
    b.forEach((weight, k) => {
      expect(Math.abs(weight - RADAU_WEIGHTS[k]!)).toBeLessThan(1e-15);
    });
    for (let q = 1; q <= 5; q++) {
      const sum = b.reduce((total, weight, k) => total + weight * c[k]! ** (q - 1), 0);
      expect(Math.abs(sum - 1 / q)).toBeLessThan(1e-15);
    }
    for (let q = 1; q <= 3; q++)
      A.forEach((row, i) => {
        const sum = row.reduce((total, weight, k) => total + weight * c[k]! ** (q - 1), 0);
        expect(Math.abs(sum - c[i]! ** q / q)).toBeLessThan(1e-15);
      });
    for (let q = 1; q <= 2; q++)
      for (let j = 0; j < 3; j++) {
        const sum = b.reduce((total, weight, i) => total + weight * c[i]! ** (q - 1) * A[i]![j]!, 0);
        expect(Math.abs(sum - (b[j]! / q) * (1 - c[j]! ** q))).toBeLessThan(1e-15);
      }
  });

  test('the error weights vanish on polynomials up to degree 3 together with the slope at the start', () => {
    // increments of t^q over a step of 1 are c^q; its slope at the start is 1 for q = 1, else 0; the estimate is weights · z + slope (times γ0 h)
    for (let q = 1; q <= 3; q++) {
      const sum = ERROR_WEIGHTS.reduce((total, weight, k) => total + weight * c[k]! ** q, 0);
      expect(Math.abs(sum + (q === 1 ? 1 : 0))).toBeLessThan(1e-14);
    }
  });

  test('the start weights carry parabolas back to 0', () => {
    for (let q = 0; q <= 2; q++) {
      const sum = START_WEIGHTS.reduce((total, weight, k) => total + weight * c[k]! ** q, 0);
      expect(Math.abs(sum - (q === 0 ? 1 : 0))).toBeLessThan(1e-14);
    }
  });
});

/** Fixed steps from y(0); returns the unknowns at the end. */
function march(of: Circuit, start: readonly number[], until: number, steps: number): Float64Array {
  const system = buildSystem(of);
  for (const drive of [...system.drives, ...system.driven]) drive.segment = segmentAt(drive.wave, until / 2);
  const effort: Effort = { steps: 0, rejectedSteps: 0, newtonIterations: 0, factorisations: 0, events: 0 };
  const stepper = createStepper(system, effort);
  stepper.newtonTolerance = 1e-3;
  stepper.weight.fill(1e10);
  const y = new Float64Array(system.vectorLength);
  y.set(start);
  setDriven(system, 0, y);
  const h = until / steps;
  for (let k = 0; k < steps; k++) {
    // to ten digits the simplified iteration may want more rounds than it is given; the full one then takes over, as in the time loop
    expect(solveStages(stepper, k * h, h, y) || solveStagesRobustly(stepper, k * h, h, y)).toBe(true);
    for (let i = 0; i < y.length; i++) y[i]! += stepper.z[2][i]!;
  }
  return y;
}

function order(errors: readonly number[]): number[] {
  return errors.slice(1).map((error, k) => Math.log2(errors[k]! / error));
}

describe('order', () => {
  // equations are named by their unknowns; index 0 is node a, the capacitor's
  test('five at the end points: RC driven by a sine (closed form)', () => {
    const rc = circuit(
      source('G1', 'in', 'gnd', sine(10, 200)),
      resistor('R1', 'in', 'a', 1e3),
      capacitor('C1', 'a', 'gnd', 1e-6),
    );
    const x = 2 * Math.PI * 200 * 1e-3;
    const [a, p] = [10 / Math.hypot(1, x), Math.atan(x)];
    const exact = a * (Math.sin(x * 5 - p) + Math.sin(p) * Math.exp(-5));
    const errors = [8, 16, 32, 64, 128].map((steps) => Math.abs(march(rc, [0], 5e-3, steps)[0]! - exact));
    for (const found of order(errors).slice(1)) {
      expect(found).toBeGreaterThan(4.8);
      expect(found).toBeLessThan(5.3);
    }
  });

  test('five for a weakly damped RLC circuit (closed form)', () => {
    const rlc = circuit(
      source('G1', 'in', 'gnd', 10),
      resistor('R1', 'in', 'a', 20),
      inductor('L1', 'a', 'b', 1e-3),
      capacitor('C1', 'b', 'gnd', 100e-9),
    );
    const [alpha, w] = [1e4, Math.sqrt(1e10 - 1e8)];
    const t = 1e-4;
    const exact = 10 * (1 - Math.exp(-alpha * t) * (Math.cos(w * t) + (alpha / w) * Math.sin(w * t)));
    const b = buildSystem(rlc).nodeIndex.get('b')!;
    const start = new Array<number>(3).fill(0);
    start[buildSystem(rlc).nodeIndex.get('a')!] = 10;
    const errors = [20, 40, 80, 160].map((steps) => Math.abs(march(rlc, start, t, steps)[b]! - exact));
    for (const found of order(errors)) {
      expect(found).toBeGreaterThan(4.8);
      expect(found).toBeLessThan(5.2);
    }
  });

  test('five for a diode that discharges a capacitor (nonlinear; closed form)', () => {
    // C dv/dt = -Is (e^(v/s) - 1): with w = 1 - e^(-v/s) the solution is w = w0 e^(-Is t / (C s))
    const [is, slope, farad] = [1e-6, 2 * VT_300, 1e-6];
    const discharge = circuit(capacitor('C1', 'a', 'gnd', farad), diode('D1', 'a', 'gnd', exponential(is, slope)));
    const v0 = 0.2;
    const until = 0.02;
    const w = -Math.expm1(-v0 / slope) * Math.exp((-is * until) / (farad * slope));
    const exact = -slope * Math.log1p(-w);
    const errors = [20, 40, 80, 160].map((steps) => Math.abs(march(discharge, [v0], until, steps)[0]! - exact));
    for (const found of order(errors).slice(1)) {
      expect(found).toBeGreaterThan(4.6);
      expect(found).toBeLessThan(5.4);
    }
  });

  test('stiffness does not spoil it: a fast RC in line with a slow one keeps the order of the slow one', () => {
    // 1 ns beside 1 ms; against many steps of the same method
    const stiff = circuit(
      source('G1', 'in', 'gnd', sine(10, 200)),
      resistor('R1', 'in', 'a', 1e3),
      capacitor('C1', 'a', 'gnd', 1e-6),
      resistor('R2', 'a', 'b', 1),
      capacitor('C2', 'b', 'gnd', 1e-9),
    );
    const exact = march(stiff, [0, 0], 5e-3, 2048)[0]!;
    const errors = [16, 32, 64].map((steps) => Math.abs(march(stiff, [0, 0], 5e-3, steps)[0]! - exact));
    for (const found of order(errors)) expect(found).toBeGreaterThan(4.5);
  });

  test('L-stable: a step a million times the time constant kills the transient', () => {
    const rc = circuit(resistor('R1', 'a', 'gnd', 1), capacitor('C1', 'a', 'gnd', 1e-9));
    // R(z) → 0 like 3 / z... of the approximant (1 + 2z/5 + z²/20) / (1 - 3z/5 + 3z²/20 - z³/60)
    expect(Math.abs(march(rc, [1], 1e-3, 1)[0]!)).toBeLessThan(4e-6);
  });

  test('the stability function of the step is the Padé approximant', () => {
    const rc = circuit(resistor('R1', 'a', 'gnd', 1), capacitor('C1', 'a', 'gnd', 1));
    for (const h of [0.1, 1, 5, 50]) {
      const z = -h;
      const exact = (1 + (2 * z) / 5 + (z * z) / 20) / (1 - (3 * z) / 5 + (3 * z * z) / 20 - z ** 3 / 60);
      expect(Math.abs(march(rc, [1], h, 1)[0]! - exact)).toBeLessThan(1e-13);
    }
  });
});

test('the error estimate is of order 4 per step and never far below the true error', () => {
  const rc = circuit(
    source('G1', 'in', 'gnd', sine(10, 200)),
    resistor('R1', 'in', 'a', 1e3),
    capacitor('C1', 'a', 'gnd', 1e-6),
  );
  const estimates = [4e-4, 2e-4, 1e-4, 5e-5].map((h) => {
    const system = buildSystem(rc);
    for (const drive of system.driven) drive.segment = segmentAt(drive.wave, 1e-3);
    const effort: Effort = { steps: 0, rejectedSteps: 0, newtonIterations: 0, factorisations: 0, events: 0 };
    const stepper = createStepper(system, effort);
    stepper.weight.fill(1e10);
    const y = new Float64Array(system.vectorLength);
    const start = new Float64Array(system.size + 1);
    y[0] = 3;
    setDriven(system, 1e-3, y);
    expect(solveStages(stepper, 1e-3, h, y)).toBe(true);
    evaluateCurrents(system, 1e-3, y, start);
    estimateError(stepper, h, start);
    return Math.abs(stepper.error[0]!);
  });
  for (const found of order(estimates)) {
    expect(found).toBeGreaterThan(3.6);
    expect(found).toBeLessThan(4.3);
  }
});
