/** What can be wrong in a benchmark without being seen: that all solve the same circuit, and that the methods compared are what they are called. */
import { describe, expect, it } from 'vitest';
import { solveLampExplicitly } from './explicit-lamp.ts';
import { solveLampDiagonally } from './integrators/diagonal.ts';
import { SDIRK4, TR_BDF2 } from './integrators/tableaux.ts';
import { chargeError, LAMP_CASES, solveLamp } from './lamp.ts';

describe.each(LAMP_CASES)('lamp circuit $name', (lamp) => {
  // reference: Radau IIA of order 5 in C at a relative tolerance of 1e-12 (test/bench/peers)
  it('by the solver', () => {
    expect(chargeError(lamp.name, solveLamp(lamp, 1e-6).charges)).toBeLessThan(1e-6);
  });
  it('by the explicit library', () => {
    expect(chargeError(lamp.name, solveLampExplicitly(lamp, 1e-8).charges)).toBeLessThan(1e-6);
  });
  it.each([TR_BDF2, SDIRK4])('by $name', (tableau) => {
    expect(chargeError(lamp.name, solveLampDiagonally(lamp, tableau, 1e-7).charges)).toBeLessThan(1e-4);
  });
});

// order conditions of Runge-Kutta methods: J. C. Butcher, 1963 (e.g. Hairer, Nørsett and Wanner, Solving ODEs I, section II.2)
describe.each([TR_BDF2, SDIRK4])('order conditions of $name', ({ a, embedded, order, embeddedOrder }) => {
  const s = a.length;
  const A = a.map((row) => Array.from({ length: s }, (_, j) => row[j] ?? 0));
  const c = A.map((row) => row.reduce((sum, value) => sum + value, 0));
  const times = (x: readonly number[]): number[] =>
    A.map((row) => row.reduce((sum, value, j) => sum + value * x[j]!, 0));
  const dot = (b: readonly number[], x: readonly number[]): number =>
    b.reduce((sum, value, j) => sum + value * x[j]!, 0);
  const conditions = (b: readonly number[]): [number, number, number][] => [
    [
      1,
      dot(
        b,
        c.map(() => 1),
      ),
      1,
    ],
    [2, dot(b, c), 1 / 2],
    [
      3,
      dot(
        b,
        c.map((x) => x * x),
      ),
      1 / 3,
    ],
    [3, dot(b, times(c)), 1 / 6],
    [
      4,
      dot(
        b,
        c.map((x) => x ** 3),
      ),
      1 / 4,
    ],
    [
      4,
      dot(
        b,
        times(c).map((x, j) => x * c[j]!),
      ),
      1 / 8,
    ],
    [4, dot(b, times(c.map((x) => x * x))), 1 / 12],
    [4, dot(b, times(times(c))), 1 / 24],
  ];
  it('weights and embedded weights', () => {
    for (const [p, found, expected] of conditions(A[s - 1]!)) if (p <= order) expect(found).toBeCloseTo(expected, 13);
    for (const [p, found, expected] of conditions(embedded))
      if (p <= embeddedOrder) expect(found).toBeCloseTo(expected, 13);
  });
});
