import { describe, expect, test } from 'vitest';
import { overshoot, riseTime, settlingTime } from '../../../solver/waveform/transients.ts';
import { sample, sampleSmooth, uniformGrid } from './sample.ts';

describe('step of a first order with time constant 1, over 20 time constants', () => {
  const rising = sampleSmooth(uniformGrid(0, 20, 500), (t) => 1 - Math.exp(-t));
  test('rise time is ln 9', () => expect(riseTime(rising)).toBeCloseTo(Math.log(9), 7));
  test('settles to 2 % after ln 50, to 5 % after ln 20', () => {
    expect(settlingTime(rising)).toBeCloseTo(Math.log(50), 6);
    expect(settlingTime(rising, 0.05)).toBeCloseTo(Math.log(20), 6);
  });
  test('has no overshoot', () => expect(overshoot(rising)).toBeCloseTo(0, 12));
  test('a decay has the same times', () => {
    const falling = sampleSmooth(rising.grid, (t) => 5 * Math.exp(-t));
    expect(riseTime(falling)).toBeCloseTo(Math.log(9), 7);
    expect(settlingTime(falling)).toBeCloseTo(Math.log(50), 6);
  });
});

test('step of a second order with damping 0.5 overshoots by exp(-π ζ/√(1-ζ²))', () => {
  const damping = 0.5;
  const omega = Math.sqrt(1 - damping ** 2);
  const response = sampleSmooth(
    uniformGrid(0, 60, 6000),
    (t) => 1 - Math.exp(-damping * t) * (Math.cos(omega * t) + (damping / omega) * Math.sin(omega * t)),
  );
  expect(overshoot(response)).toBeCloseTo(Math.exp((-Math.PI * damping) / omega), 8);
});

test('a jump rises in no time', () => {
  expect(riseTime(sample(Float64Array.from([0, 1, 2]), (t) => (t < 1 ? 0 : 1)))).toBe(0);
});

test('without a step there is no value, and the reason is given', () => {
  const flat = sampleSmooth(uniformGrid(0, 1, 3), () => 2);
  for (const outcome of [riseTime(flat), settlingTime(flat), overshoot(flat)]) {
    expect(outcome).toEqual({ none: 'the first and the last value are the same' });
  }
  expect(settlingTime(flat, 0)).toHaveProperty('none');
});
