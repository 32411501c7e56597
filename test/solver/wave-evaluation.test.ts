import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { evaluateSegment, segmentAt, waveCorners, wavePeriod, waveValue } from '../../solver/wave-evaluation.ts';
import type { Wave } from '../../solver/waves.ts';
import { constant, jump, ramp, sine, triangle } from './circuits.ts';

const values = (wave: Wave, times: readonly number[]): number[] => times.map((t) => waveValue(wave, t));
const close = (found: readonly number[], expected: readonly number[]): void => {
  expect(found.length).toBe(expected.length);
  found.forEach((value, k) => {
    expect(value).toBeCloseTo(expected[k]!, 11);
  });
};

describe('shapes, as waves.ts states them', () => {
  test('constant', () => {
    close(values(constant(3), [0, 1, 1e9]), [3, 3, 3]);
    expect(waveCorners(constant(3), 0, 1)).toEqual([]);
    expect(wavePeriod(constant(3))).toBe(0);
  });

  test('sine: offset + peak sin(2π frequency (t - delay) + phase), its first value before the delay', () => {
    const wave = sine(2, 50, { offset: 1, phase: Math.PI / 6, delay: 3e-3 });
    close(values(wave, [0, 2.9e-3, 3e-3]), [2, 2, 2]);
    for (const t of [4e-3, 0.01, 0.123])
      close([waveValue(wave, t)], [1 + 2 * Math.sin(2 * Math.PI * 50 * (t - 3e-3) + Math.PI / 6)]);
    expect(waveCorners(wave, 0, 1)).toEqual([3e-3]);
    expect(wavePeriod(wave)).toBe(0.02);
  });

  test('triangle: from the middle, rising; corners at a quarter and three quarters', () => {
    const wave = triangle(-1, 3, 10);
    close(values(wave, [0, 0.025, 0.05, 0.075, 0.1, 0.1125]), [1, 3, 1, -1, 1, 2]);
    close(
      waveCorners(wave, 0, 0.1).filter((t) => t !== 0.1),
      [0.025, 0.075],
    );
    close(values(triangle(-1, 3, 10, 0.2), [0, 0.1, 0.2, 0.225]), [1, 1, 1, 3]);
  });

  test('ramp: rises in all but the fraction `fall`', () => {
    const wave = ramp(1, 5, 2, 0.1);
    close(values(wave, [0, 0.225, 0.45, 0.475, 0.5, 0.95]), [1, 3, 5, 3, 1, 5]);
    close(waveCorners(wave, 0, 1), [0.45, 0.5, 0.95]);
    // without a return the value jumps, and the value at the jump is the one after it
    const saw = ramp(0, 1, 1, 0);
    close(values(saw, [0, 0.25, 0.999, 1, 1.5]), [0, 0.25, 0.999, 0, 0.5]);
    close(waveCorners(saw, 0, 2.5), [1, 2]);
  });

  test('pulse: `width` does not count the edges', () => {
    const wave: Wave = { shape: 'pulse', low: 0, high: 2, frequency: 1, width: 0.3, rise: 0.1, fall: 0.2, delay: 0.05 };
    close(values(wave, [0, 0.05, 0.1, 0.15, 0.45, 0.55, 0.65, 1, 1.1]), [0, 0, 1, 2, 2, 1, 0, 0, 1]);
    close(waveCorners(wave, 0, 1.2), [0.05, 0.15, 0.45, 0.65, 1.05, 1.15]);
  });

  test('pulse with upright edges jumps; frequency 0 happens once', () => {
    const wave: Wave = { shape: 'pulse', low: -1, high: 1, frequency: 0, width: 2, rise: 0, fall: 0, delay: 1 };
    close(values(wave, [0, 0.999, 1, 2.9, 3, 10, 1e6]), [-1, -1, 1, 1, -1, -1, -1]);
    expect(waveCorners(wave, 0, 100)).toEqual([1, 3]);
    expect(wavePeriod(wave)).toBeUndefined();
    const square: Wave = { shape: 'pulse', low: 0, high: 1, frequency: 1, width: 0.5, rise: 0, fall: 0, delay: 0 };
    close(values(square, [0, 0.4, 0.5, 0.9, 1, 7.25, 7.75]), [1, 1, 0, 0, 1, 1, 0]);
    close(waveCorners(square, 0, 2.1), [0.5, 1, 1.5, 2]);
  });

  test('a pulse that fills its period has no flat end', () => {
    const wave: Wave = {
      shape: 'pulse',
      low: 0,
      high: 1,
      frequency: 10,
      width: 0.04,
      rise: 0.03,
      fall: 0.03,
      delay: 0,
    };
    close(values(wave, [0, 0.015, 0.03, 0.07, 0.085, 0.1, 0.115]), [0, 0.5, 1, 1, 0.5, 0, 0.5]);
  });

  test('points: straight lines, held beyond the ends, two of one time being a jump', () => {
    const wave: Wave = { shape: 'points', times: [1, 2, 2, 4], values: [0, 10, 20, 0], repeat: false };
    close(values(wave, [0, 1, 1.5, 2, 3, 4, 9]), [0, 0, 5, 20, 10, 0, 0]);
    close(waveCorners(wave, 0, 10), [1, 2, 4]);
    close(values(jump(0, 5, 1e-3), [0, 9e-4, 1e-3, 1]), [0, 0, 5, 5]);
  });

  test('points repeated from the first to the last', () => {
    const wave: Wave = { shape: 'points', times: [0, 1, 3], values: [0, 2, 0], repeat: true };
    close(values(wave, [0.5, 1, 2, 3, 3.5, 30.5, 31]), [1, 2, 1, 0, 1, 1, 2]);
    expect(wavePeriod(wave)).toBe(3);
    close(waveCorners(wave, 0, 6.5), [1, 3, 4, 6]);
  });

  test('sum: values and corners of all its parts', () => {
    const wave: Wave = {
      shape: 'sum',
      waves: [constant(1), triangle(-1, 1, 1), sine(0.5, 3, { delay: 0.1 }), jump(0, 2, 0.4)],
    };
    close([waveValue(wave, 0.3)], [1 + 0.8 + 0.5 * Math.sin(2 * Math.PI * 3 * 0.2)]);
    close([waveValue(wave, 0.4)], [1 + 0.4 + 0.5 * Math.sin(2 * Math.PI * 3 * 0.3) + 2]);
    close(waveCorners(wave, 0, 0.99), [0.1, 0.25, 0.4, 0.75]);
  });
});

const level = fc.double({ min: -10, max: 10, noNaN: true });
const frequency = fc.double({ min: 0.1, max: 100, noNaN: true });
const delay = fc.double({ min: 0, max: 3, noNaN: true });
const fraction = fc.double({ min: 0.01, max: 0.3, noNaN: true });

const simple: fc.Arbitrary<Wave> = fc.oneof(
  level.map(constant),
  fc
    .record({ peak: level, frequency, offset: level, phase: level, delay })
    .map((parts): Wave => ({ shape: 'sine', ...parts })),
  fc.record({ low: level, high: level, frequency, delay }).map((parts): Wave => ({ shape: 'triangle', ...parts })),
  fc
    .record({ low: level, high: level, frequency, fall: fraction, delay })
    .map((parts): Wave => ({ shape: 'ramp', ...parts })),
  fc
    .record({ low: level, high: level, frequency, width: fraction, rise: fraction, fall: fraction, delay })
    .map((parts): Wave => {
      const period = 1 / parts.frequency;
      return {
        shape: 'pulse',
        ...parts,
        width: parts.width * period,
        rise: parts.rise * period,
        fall: parts.fall * period,
      };
    }),
  fc
    .record({ steps: fc.array(fc.tuple(fraction, level), { minLength: 2, maxLength: 6 }), repeat: fc.boolean() })
    .map(({ steps, repeat }): Wave => {
      let t = 0;
      const times = steps.map(([dt], k) => {
        if (k > 0) t += dt;
        return t;
      });
      const wanted = steps.map(([, value]) => value);
      if (repeat) wanted[wanted.length - 1] = wanted[0]!;
      return { shape: 'points', times, values: wanted, repeat };
    }),
);
const anyWave: fc.Arbitrary<Wave> = fc.oneof(
  simple,
  fc.array(simple, { minLength: 1, maxLength: 3 }).map((waves): Wave => ({ shape: 'sum', waves })),
);

const steepest = 2 * 10 * 3 * 2 * Math.PI * 100 * 100;

describe('properties', () => {
  test('one segment holds between neighbouring corners, and segments meet at a corner unless the value jumps', () => {
    fc.assert(
      fc.property(anyWave, (wave) => {
        const corners = waveCorners(wave, 0, 5, 40);
        expect(corners.every((t, k) => k === 0 || t > corners[k - 1]!)).toBe(true);
        const ends = [0, ...corners];
        for (let k = 0; k + 1 < ends.length; k++) {
          const [from, to] = [ends[k]!, ends[k + 1]!];
          // corners that differ by rounding alone leave no room between them
          if (to - from < 1e-9) continue;
          const early = segmentAt(wave, from + 0.25 * (to - from));
          const late = segmentAt(wave, from + 0.75 * (to - from));
          for (const s of [0, 0.5, 1]) {
            const t = from + s * (to - from);
            expect(Math.abs(evaluateSegment(early, t) - evaluateSegment(late, t))).toBeLessThan(1e-8);
          }
          // these waves have no jumps
          const next = ends[k + 2];
          if (next === undefined || next - to < 1e-9) continue;
          const after = segmentAt(wave, to + (next - to) / 2);
          expect(Math.abs(evaluateSegment(late, to) - evaluateSegment(after, to))).toBeLessThan(1e-7);
        }
      }),
      { numRuns: 300, seed: 1 },
    );
  });

  test('continuous except at corners', () => {
    fc.assert(
      fc.property(anyWave, fc.double({ min: 0, max: 5, noNaN: true }), (wave, t) => {
        const h = 1e-9;
        if (waveCorners(wave, t - 2 * h, t + 2 * h).length > 0) return;
        expect(Math.abs(waveValue(wave, t + h) - waveValue(wave, t))).toBeLessThan(steepest * h);
      }),
      { numRuns: 1000, seed: 2 },
    );
  });

  test('repeats with its period', () => {
    fc.assert(
      fc.property(simple, fc.double({ min: 3, max: 4, noNaN: true }), fc.integer({ min: 1, max: 20 }), (wave, t, n) => {
        const period = wavePeriod(wave);
        if (period === undefined) return;
        const later = t + n * period;
        expect(Math.abs(waveValue(wave, later) - waveValue(wave, t))).toBeLessThan(1e-7);
      }),
      { numRuns: 1000, seed: 3 },
    );
  });

  test('a limit takes the first corners', () => {
    fc.assert(
      fc.property(
        anyWave,
        fc.double({ min: 0, max: 2, noNaN: true }),
        fc.integer({ min: 1, max: 5 }),
        (wave, from, n) => {
          const some = waveCorners(wave, from, 4, n);
          expect(some).toEqual(waveCorners(wave, from, 4).slice(0, n));
        },
      ),
      { numRuns: 300, seed: 4 },
    );
  });
});
