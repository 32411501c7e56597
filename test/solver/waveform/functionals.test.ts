import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { add, divide, firstUndefined, multiply, power, subtract } from '../../../solver/waveform/arithmetic.ts';
import { derivative, slope } from '../../../solver/waveform/derivative.ts';
import { greatest, least, peak, span } from '../../../solver/waveform/extremes.ts';
import { refineGrid, resample, restrict, unionGrid } from '../../../solver/waveform/grids.ts';
import { integral, mean, rms } from '../../../solver/waveform/integrals.ts';
import { absolute, negativePart, positivePart } from '../../../solver/waveform/parts.ts';
import { valueAt } from '../../../solver/waveform/value-at.ts';
import type { Waveform } from '../../../solver/waveform/waveform.ts';
import { sample, sampleSmooth, uniformGrid } from './sample.ts';

const some = (result: Waveform | { none: string }): Waveform => {
  if ('none' in result) throw new Error(result.none);
  return result;
};

describe('values and grids', () => {
  // A cubic is represented exactly: every expected value is the polynomial itself.
  const polynomial = (t: number): number => 2 - 3 * t + 0.5 * t ** 2 + 4 * t ** 3;
  const grid = Float64Array.from([-1, -0.3, 0.1, 2]);
  const waveform = sampleSmooth(grid, polynomial);

  test('evaluates the cubic between the nodes', () => {
    for (const x of [-1, -0.9, -0.3, 0, 0.1, 0.7, 1.99, 2]) expect(valueAt(waveform, x)).toBeCloseTo(polynomial(x), 12);
    expect(valueAt(waveform, 2.01)).toBeNaN();
    expect(valueAt(waveform, Number.NaN)).toBeNaN();
  });

  test('tells the two sides of a jump apart', () => {
    const jump = sample(Float64Array.from([0, 1, 2]), (t) => (t < 1 ? 3 : 5));
    expect(valueAt(jump, 1, 'left')).toBe(3);
    expect(valueAt(jump, 1)).toBe(5);
    expect(valueAt(jump, 0, 'left')).toBe(3);
    expect(valueAt(jump, 2)).toBe(5);
  });

  test('resampling on a finer grid, and a part, is the same cubic', () => {
    const finer = resample(waveform, refineGrid(grid, [-0.5, 0.4, 0.4, 1.9]));
    expect(finer.grid).toEqual(Float64Array.from([-1, -0.5, -0.3, 0.1, 0.4, 1.9, 2]));
    const part = restrict(waveform, -0.2, 1)!;
    expect([...part.grid]).toEqual([-0.2, 0.1, 1]);
    for (const x of [-0.2, 0, 0.1, 0.5, 1]) {
      expect(valueAt(finer, x)).toBeCloseTo(polynomial(x), 12);
      expect(valueAt(part, x)).toBeCloseTo(polynomial(x), 12);
    }
    expect(restrict(waveform, 2, 3)).toBeUndefined();
    expect(restrict(waveform, -5, 5)).toBe(waveform);
  });

  test('the union of grids has the points of both where they overlap', () => {
    const union = unionGrid(Float64Array.from([0, 1, 2, 3]), Float64Array.from([0.5, 1, 1.5, 4]));
    expect([...union!]).toEqual([0.5, 1, 1.5, 2, 3]);
    expect(unionGrid(Float64Array.from([0, 1]), Float64Array.from([2, 3]))).toBeUndefined();
    expect(unionGrid(grid, grid.slice())).toBe(grid);
  });

  test('a point moved by rounding is the same point', () => {
    const union = unionGrid(Float64Array.from([0, 0.1 + 0.2, 1]), Float64Array.from([0, 0.3, 1]));
    expect(union).toHaveLength(3);
  });
});

describe('arithmetic', () => {
  const one = sampleSmooth(uniformGrid(0, 2, 4), (t) => 1 + t);
  const other = sampleSmooth(uniformGrid(0, 2, 3), (t) => t * t);

  test('on different grids goes onto the union', () => {
    const sum = some(add(one, other));
    expect(sum.grid.length).toBe(7);
    for (const x of [0, 0.3, 1, 1.7, 2]) expect(valueAt(sum, x)).toBeCloseTo(1 + x + x * x, 13);
    const product = some(multiply(one, other));
    for (const x of [0, 0.3, 1, 1.7, 2]) expect(valueAt(product, x)).toBeCloseTo((1 + x) * x * x, 13);
  });

  test('with a number on either side', () => {
    expect(valueAt(some(subtract(5, one)), 1)).toBeCloseTo(3, 13);
    expect(valueAt(some(divide(one, 2)), 1)).toBeCloseTo(1, 13);
    expect(valueAt(some(power(one, 3)), 1)).toBeCloseTo(8, 12);
  });

  test('a quotient has no value in the steps in which the divisor passes through zero', () => {
    const divisor = sampleSmooth(uniformGrid(-1, 1, 5), (t) => t);
    const quotient = some(
      divide(
        sampleSmooth(divisor.grid, () => 1),
        divisor,
      ),
    );
    expect(valueAt(quotient, 0)).toBeNaN();
    expect(valueAt(quotient, 0.6)).toBeCloseTo(1 / 0.6, 12);
    expect(firstUndefined(quotient)).toBeCloseTo(-0.2, 12);
    expect(mean(quotient)).toBeNaN();
    expect(greatest(quotient)).toBeNaN();
    expect(firstUndefined(some(divide(one, 0)))).toBe(0);
  });

  test('waveforms without a common axis have no sum', () => {
    const later = sampleSmooth(uniformGrid(5, 6, 1), () => 1);
    expect(add(one, later)).toHaveProperty('none');
  });
});

describe('integrals', () => {
  test('are exact for polynomials of degree four at the nodes', () => {
    const grid = Float64Array.from([0, 0.2, 0.9, 1.5]);
    for (let degree = 0; degree <= 4; degree++) {
      const waveform = sampleSmooth(grid, (t) => t ** degree);
      expect(integral(waveform)).toBeCloseTo(1.5 ** (degree + 1) / (degree + 1), 13);
    }
  });

  test('of a sine: mean 0, RMS 1/√2, mean of the magnitude 2/π', () => {
    const sine = sampleSmooth(uniformGrid(0, 1, 64), (t) => Math.sin(2 * Math.PI * t));
    expect(Math.abs(mean(sine))).toBeLessThan(1e-9);
    expect(rms(sine)).toBeCloseTo(Math.SQRT1_2, 8);
    expect(mean(absolute(sine))).toBeCloseTo(2 / Math.PI, 8);
    expect(mean(positivePart(sine))).toBeCloseTo(1 / Math.PI, 8);
  });

  test('of an exponential: RC discharge over five time constants', () => {
    const waveform = sampleSmooth(uniformGrid(0, 5, 200), (t) => Math.exp(-t));
    // ∫ exp(-t) = 1 - exp(-5); ∫ exp(-2t) = (1 - exp(-10))/2
    expect(integral(waveform)).toBeCloseTo(1 - Math.exp(-5), 10);
    expect(rms(waveform)).toBeCloseTo(Math.sqrt((1 - Math.exp(-10)) / 2 / 5), 10);
  });

  test('the mean converges with order five', () => {
    // Mean of exp over [0, 2] is (e² - 1)/2.
    const errors = [4, 8, 16, 32].map((steps) =>
      Math.abs(mean(sampleSmooth(uniformGrid(0, 2, steps), Math.exp)) - (Math.exp(2) - 1) / 2),
    );
    for (let k = 1; k < errors.length; k++) {
      const order = Math.log2(errors[k - 1]! / errors[k]!);
      expect(order).toBeGreaterThan(4.8);
      expect(order).toBeLessThan(5.4);
    }
  });

  test('of tiny and huge values', () => {
    for (const scale of [1e-200, 1e200]) {
      const sine = sampleSmooth(uniformGrid(0, 1, 64), (t) => scale * Math.sin(2 * Math.PI * t));
      expect(rms(sine) / scale).toBeCloseTo(Math.SQRT1_2, 8);
    }
  });

  test('an axis of no length: the value itself', () => {
    const point: Waveform = { grid: Float64Array.of(0, 0), values: Float64Array.of(-3, -3, -3, -3) };
    expect(mean(point)).toBe(-3);
    expect(rms(point)).toBe(3);
    expect(valueAt(point, 0)).toBe(-3);
  });
});

describe('extremes and slopes', () => {
  test('lie between the nodes too', () => {
    // t³ - t has its turns at ±1/√3 with the values ∓2/(3√3).
    const waveform = sampleSmooth(Float64Array.from([-1, 1]), (t) => t ** 3 - t);
    const turn = 2 / (3 * Math.sqrt(3));
    expect(greatest(waveform)).toBeCloseTo(turn, 14);
    expect(least(waveform)).toBeCloseTo(-turn, 14);
    expect(peak(waveform)).toBeCloseTo(turn, 14);
    expect(span(waveform)).toBeCloseTo(2 * turn, 14);
  });

  test('see both sides of a jump', () => {
    const waveform = sample(Float64Array.from([0, 1, 2]), (t) => (t < 1 ? t : t - 3));
    expect(greatest(waveform)).toBeCloseTo(1, 12);
    expect(least(waveform)).toBeCloseTo(-2, 12);
  });

  test('the derivative of a cubic is exact', () => {
    const waveform = sampleSmooth(Float64Array.from([0, 0.4, 3]), (t) => t ** 3 - 2 * t);
    const rate = derivative(waveform);
    for (const x of [0, 0.2, 0.4, 1.3, 3]) expect(valueAt(rate, x)).toBeCloseTo(3 * x * x - 2, 11);
    expect(slope(waveform)).toBeCloseTo(25, 11);
    expect(slope(waveform, 0)).toBeCloseTo(-2, 11);
    const falling = sampleSmooth(uniformGrid(0, 1, 10), (t) => Math.exp(-5 * t));
    expect(slope(falling)).toBeCloseTo(-5, 2);
  });
});

describe('for any waveform', () => {
  const anyWaveform = fc
    .array(
      fc.record({
        width: fc.double({ min: 1e-3, max: 1, noNaN: true }),
        values: fc.tuple(...Array.from({ length: 4 }, () => fc.double({ min: -10, max: 10, noNaN: true }))),
      }),
      { minLength: 1, maxLength: 8 },
    )
    .map((steps): Waveform => {
      const grid = [0];
      for (const { width } of steps) grid.push(grid.at(-1)! + width);
      return { grid: Float64Array.from(grid), values: Float64Array.from(steps.flatMap(({ values }) => values)) };
    });

  test('the positive and the negative part add up to it', () => {
    fc.assert(
      fc.property(anyWaveform, fc.double({ min: 0, max: 1, noNaN: true }), (waveform, fraction) => {
        const positive = positivePart(waveform);
        const negative = negativePart(waveform);
        const x = fraction * waveform.grid.at(-1)!;
        expect(valueAt(positive, x) + valueAt(negative, x)).toBeCloseTo(valueAt(waveform, x), 8);
        expect(Math.min(...positive.values)).toBeGreaterThanOrEqual(0);
        expect(Math.max(...negative.values)).toBeLessThanOrEqual(0);
        const total = integral(positive) + integral(negative);
        expect(total).toBeCloseTo(integral(waveform), 8);
        expect(integral(absolute(waveform))).toBeCloseTo(integral(positive) - integral(negative), 8);
      }),
    );
  });

  test('mean is linear and lies between the extremes', () => {
    fc.assert(
      fc.property(anyWaveform, fc.double({ min: -5, max: 5, noNaN: true }), (waveform, factor) => {
        expect(mean(some(multiply(waveform, factor)))).toBeCloseTo(factor * mean(waveform), 9);
        expect(mean(some(add(waveform, factor)))).toBeCloseTo(mean(waveform) + factor, 9);
        expect(greatest(waveform)).toBeGreaterThanOrEqual(mean(waveform) - 1e-12);
        expect(least(waveform)).toBeLessThanOrEqual(mean(waveform) + 1e-12);
        expect(peak(waveform)).toBeGreaterThanOrEqual(rms(waveform) - 1e-12);
      }),
    );
  });

  test('resampling changes no integral of a cubic', () => {
    fc.assert(
      fc.property(
        anyWaveform,
        fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { maxLength: 5 }),
        (waveform, at) => {
          const points = at.map((fraction) => fraction * waveform.grid.at(-1)!).sort((a, b) => a - b);
          const finer = resample(waveform, refineGrid(waveform.grid, points));
          expect(integral(finer)).toBeCloseTo(integral(waveform), 9);
        },
      ),
    );
  });
});
