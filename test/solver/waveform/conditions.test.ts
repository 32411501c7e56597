import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type Comparison, compare } from '../../../solver/waveform/comparison.ts';
import { cubicRoots } from '../../../solver/waveform/cubic.ts';
import {
  complement,
  first,
  type IntervalSet,
  intersection,
  intervals,
  last,
  share,
  union,
  when,
} from '../../../solver/waveform/interval-set.ts';
import type { Waveform } from '../../../solver/waveform/waveform.ts';
import { sample, sampleSmooth, uniformGrid } from './sample.ts';

const where = (left: Waveform | number, comparison: Comparison, right: Waveform | number): IntervalSet => {
  const set = compare(left, comparison, right);
  if ('none' in set) throw new Error(set.none);
  return set;
};

describe('roots of a cubic in [0, 1]', () => {
  const roots = (...coefficients: number[]): number[] => {
    const out = new Float64Array(4);
    return [...out.subarray(0, cubicRoots(Float64Array.from(coefficients), 1e-13, out))];
  };
  test('are all found', () => {
    // (s - 0.2)(s - 0.5)(s - 0.9) = s³ - 1.6 s² + 0.73 s - 0.09
    const found = roots(-0.09, 0.73, -1.6, 1);
    expect(found).toHaveLength(3);
    for (const [k, root] of [0.2, 0.5, 0.9].entries()) expect(found[k]).toBeCloseTo(root, 13);
  });
  test('at a tangency', () => {
    // (s - 0.5)² (s + 1) = s³ - 0.75 s + 0.25
    const found = roots(0.25, -0.75, 0, 1);
    expect(found).toHaveLength(1);
    expect(found[0]).toBeCloseTo(0.5, 7);
  });
  test('at the ends, of straight and constant cubics', () => {
    expect(roots(0, 1, 0, 0)).toEqual([0]);
    expect(roots(-1, 1, 0, 0)).toEqual([1]);
    expect(roots(-0.25, 1, 0, 0)).toEqual([0.25]);
    expect(roots(1, 0, 0, 0)).toEqual([]);
    expect(roots(0, 0, 0, 0)).toEqual([]);
  });
  test('for any three roots', () => {
    const place = fc.double({ min: 0.001, max: 0.999, noNaN: true });
    fc.assert(
      fc.property(place, place, place, (a, b, c) => {
        fc.pre(Math.min(Math.abs(a - b), Math.abs(b - c), Math.abs(a - c)) > 1e-3);
        const expected = [a, b, c].sort((x, y) => x - y);
        const found = roots(-a * b * c, a * b + b * c + a * c, -(a + b + c), 1);
        expect(found).toHaveLength(3);
        for (const [k, root] of found.entries()) expect(root).toBeCloseTo(expected[k]!, 8);
      }),
    );
  });
});

describe('conditions on a sine of 50 Hz over 20 ms', () => {
  const sine = sampleSmooth(uniformGrid(0, 0.02, 200), (t) => Math.sin(2 * Math.PI * 50 * t));

  test('above one half for a third of the period', () => {
    // sin x > 1/2 for π/6 < x < 5π/6.
    const set = where(sine, '>', 0.5);
    expect(share(set)).toBeCloseTo(1 / 3, 7);
    expect(when(set)).toBeCloseTo(0.02 / 3, 9);
    expect(first(set)).toBeCloseTo(0.02 / 12, 9);
    expect(last(set)).toBeCloseTo((0.02 * 5) / 12, 9);
    expect(intervals(set)).toHaveLength(1);
  });

  test('never above two, always below', () => {
    expect(first(where(sine, '>', 2))).toEqual({ none: 'the condition never holds' });
    expect(last(where(sine, '>', 2))).toHaveProperty('none');
    expect(when(where(sine, '>', 2))).toBe(0);
    expect(share(where(sine, '<=', 2))).toBe(1);
  });

  test('equal to one half at two instants, of no length', () => {
    const set = where(sine, '==', 0.5);
    expect(intervals(set)).toHaveLength(2);
    expect(when(set)).toBe(0);
    expect(first(set)).toBeCloseTo(0.02 / 12, 9);
    expect(share(where(sine, '!=', 0.5))).toBeCloseTo(1, 12);
  });

  test('joined by and, or, not', () => {
    const high = where(sine, '>', 0.5);
    const low = where(sine, '<', -0.5);
    expect(when(intersection(high, low))).toBe(0);
    expect(intersection(where(sine, '>', 0.5), where(sine, '<', 0.5)).starts).toHaveLength(0);
    expect(share(union(high, low))).toBeCloseTo(2 / 3, 7);
    expect(share(complement(union(high, low)))).toBeCloseTo(1 / 3, 7);
    expect(intervals(complement(high))).toHaveLength(2);
  });

  test('zero over whole stretches is not above zero', () => {
    const rectified = sample(uniformGrid(0, 0.02, 200), (t) => (t < 0.01 ? Math.sin(2 * Math.PI * 50 * t) : 0));
    expect(intervals(where(rectified, '>', 0))).toHaveLength(1);
    expect(share(where(rectified, '>', 0))).toBeCloseTo(0.5, 9);
    expect(share(where(rectified, '==', 0))).toBeCloseTo(0.5, 9);
    expect(share(where(rectified, '>=', 0))).toBeCloseTo(1, 9);
    expect(share(where(rectified, '<', 0))).toBe(0);
  });

  test('a jump passes through equality', () => {
    const square = sample(Float64Array.from([0, 1, 2]), (t) => (t < 1 ? -1 : 1));
    expect(first(where(square, '==', 0))).toBe(1);
    expect(intervals(where(square, '>', 0))).toEqual([{ from: 1, to: 2 }]);
  });
});

test('for any waveform and level the three cases fill the axis', () => {
  const waveform = fc
    .array(fc.tuple(...Array.from({ length: 4 }, () => fc.integer({ min: -3, max: 3 }))), {
      minLength: 1,
      maxLength: 9,
    })
    .map(
      (steps): Waveform => ({
        grid: uniformGrid(0, steps.length, steps.length),
        values: Float64Array.from(steps.flat()),
      }),
    );
  fc.assert(
    fc.property(waveform, fc.integer({ min: -3, max: 3 }), (x, level) => {
      const above = where(x, '>', level);
      const below = where(x, '<', level);
      const equal = where(x, '==', level);
      expect(when(above) + when(below) + when(equal)).toBeCloseTo(x.grid.at(-1)!, 9);
      expect(when(complement(above))).toBeCloseTo(when(where(x, '<=', level)), 9);
      expect(when(intersection(above, below))).toBeLessThan(1e-12);
      expect(when(union(above, below))).toBeCloseTo(when(where(x, '!=', level)), 9);
      for (const set of [above, below, equal, complement(above), union(above, below)]) {
        for (let k = 0; k < set.starts.length; k++) {
          expect(set.starts[k]).toBeLessThanOrEqual(set.ends[k]!);
          if (k > 0) expect(set.starts[k]).toBeGreaterThan(set.ends[k - 1]!);
        }
      }
    }),
  );
});
