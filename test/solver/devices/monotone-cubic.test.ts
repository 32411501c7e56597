import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  buildMonotoneCubic,
  evaluateMonotoneCubic,
  type MonotoneCubic,
} from '../../../solver/devices/monotone-cubic.ts';

function read(curve: MonotoneCubic, x: number): [value: number, slope: number] {
  const result = new Float64Array(2);
  evaluateMonotoneCubic(curve, x, result);
  return [result[0]!, result[1]!];
}

const table = fc
  .array(fc.tuple(fc.double({ min: 1e-3, max: 2, noNaN: true }), fc.double({ min: -1, max: 1, noNaN: true })), {
    minLength: 2,
    maxLength: 12,
  })
  .map((steps) => {
    const x = [0];
    const y = [0];
    for (const [dx, dy] of steps) {
      x.push(x.at(-1)! + dx);
      y.push(y.at(-1)! + dy);
    }
    return { x, y };
  });

describe('monotone cubic', () => {
  test('passes through every point', () => {
    fc.assert(
      fc.property(table, ({ x, y }) => {
        const curve = buildMonotoneCubic(x, y);
        x.forEach((at, k) => {
          expect(Math.abs(read(curve, at)[0] - y[k]!)).toBeLessThanOrEqual(1e-13);
        });
      }),
      { seed: 1 },
    );
  });

  test('stays between neighbouring points, and rises where the table rises', () => {
    fc.assert(
      fc.property(table, fc.double({ min: 0, max: 1, noNaN: true }), ({ x, y }, fraction) => {
        const curve = buildMonotoneCubic(x, y);
        for (let k = 0; k + 1 < x.length; k++) {
          const [value, slope] = read(curve, x[k]! + fraction * (x[k + 1]! - x[k]!));
          const [low, high] = [Math.min(y[k]!, y[k + 1]!), Math.max(y[k]!, y[k + 1]!)];
          expect(value).toBeGreaterThanOrEqual(low - 1e-12);
          expect(value).toBeLessThanOrEqual(high + 1e-12);
          const secant = (y[k + 1]! - y[k]!) / (x[k + 1]! - x[k]!);
          expect(slope * Math.sign(secant)).toBeGreaterThanOrEqual(-1e-9 * (1 + Math.abs(secant)));
        }
      }),
      { seed: 2 },
    );
  });

  test('the slope is the derivative, and continuous at the points', () => {
    fc.assert(
      fc.property(table, ({ x, y }) => {
        const curve = buildMonotoneCubic(x, y);
        for (let k = 1; k + 1 < x.length; k++) {
          const width = Math.min(x[k]! - x[k - 1]!, x[k + 1]! - x[k]!);
          const left = read(curve, x[k]! - 1e-7 * width)[1];
          const right = read(curve, x[k]! + 1e-7 * width)[1];
          // within 3e-7 of a secant's slope per width
          expect(Math.abs(left - right)).toBeLessThan((1e-5 * 2) / width);
          const middle = (x[k]! + x[k - 1]!) / 2;
          const step = 1e-4 * (x[k]! - x[k - 1]!);
          const difference = (read(curve, middle + step)[0] - read(curve, middle - step)[0]) / (2 * step);
          const secant = Math.abs((y[k]! - y[k - 1]!) / (x[k]! - x[k - 1]!));
          // the cubic's third derivative over step² / 6, plus rounding
          expect(Math.abs(difference - read(curve, middle)[1])).toBeLessThan(1e-6 * (1 + secant));
        }
      }),
      { seed: 3 },
    );
  });

  test('a straight line is reproduced, between the points and beyond them', () => {
    const curve = buildMonotoneCubic([0, 1, 4, 5], [1, 3, 9, 11]);
    for (const x of [-10, 0.3, 2, 4.9, 100]) {
      expect(read(curve, x)[0]).toBeCloseTo(1 + 2 * x, 12);
      expect(read(curve, x)[1]).toBeCloseTo(2, 12);
    }
    expect(read(buildMonotoneCubic([0, 2], [0, 1]), 7)).toEqual([3.5, 0.5]);
  });

  test('the error on a smooth law falls with the square of the spacing or faster (F. N. Fritsch and R. E. Carlson, 1980)', () => {
    const error = (n: number): number => {
      const x = Array.from({ length: n + 1 }, (_, k) => k / n);
      const curve = buildMonotoneCubic(x, x.map(Math.exp));
      let worst = 0;
      for (let k = 0; k <= 1000; k++) worst = Math.max(worst, Math.abs(read(curve, k / 1000)[0] - Math.exp(k / 1000)));
      return worst;
    };
    expect(Math.log2(error(16) / error(32))).toBeGreaterThan(1.9);
  });
});
