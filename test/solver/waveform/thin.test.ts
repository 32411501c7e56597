import { expect, test } from 'vitest';
import { thin } from '../../../solver/waveform/thin.ts';
import { sample, sampleSmooth, uniformGrid } from './sample.ts';

test('a straight line needs two points', () => {
  const line = sampleSmooth(uniformGrid(0, 10, 1000), (t) => 3 * t - 1);
  expect(thin(line, 400).map(({ x }) => x)).toEqual([0, 10]);
});

test('corners are kept exactly', () => {
  const triangle = sampleSmooth(uniformGrid(0, 4, 400), (t) => 1 - Math.abs(t - 2));
  expect(thin(triangle, 100)).toEqual([
    { x: 0, y: -1 },
    { x: 2, y: 1 },
    { x: 4, y: -1 },
  ]);
});

test('both sides of a jump are kept', () => {
  const square = sample(Float64Array.from([0, 1, 2]), (t) => (t < 1 ? 0 : 1));
  expect(thin(square, 400)).toEqual([
    { x: 0, y: 0 },
    { x: 1, y: 0 },
    { x: 1, y: 1 },
    { x: 2, y: 1 },
  ]);
});

test('a smooth curve keeps its shape and its extremes', () => {
  const sine = sampleSmooth(uniformGrid(0, 1, 100), (t) => Math.sin(2 * Math.PI * t));
  const points = thin(sine, 400);
  expect(points.length).toBeLessThanOrEqual(400);
  expect(Math.max(...points.map(({ y }) => y))).toBeCloseTo(1, 6);
  expect(Math.min(...points.map(({ y }) => y))).toBeCloseTo(-1, 6);
  for (let k = 1; k < points.length; k++) {
    // The middle of each drawn line is near the curve.
    const x = (points[k - 1]!.x + points[k]!.x) / 2;
    expect(Math.abs((points[k - 1]!.y + points[k]!.y) / 2 - Math.sin(2 * Math.PI * x))).toBeLessThan(1e-3);
  }
});

test('many oscillations stay within the count and keep the envelope', () => {
  const dense = sampleSmooth(uniformGrid(0, 1, 20000), (t) => Math.sin(2 * Math.PI * 1000 * t));
  const points = thin(dense, 400);
  expect(points.length).toBeLessThanOrEqual(400);
  expect(points.length).toBeGreaterThan(300);
  for (let k = 1; k < points.length; k++) expect(points[k]!.x).toBeGreaterThanOrEqual(points[k - 1]!.x);
  expect(Math.max(...points.map(({ y }) => y))).toBeCloseTo(1, 6);
});

test('a spike of one step survives', () => {
  const grid = uniformGrid(0, 1, 3000);
  const spike = sample(grid, (t) => Math.sin(900 * t));
  spike.values.fill(7, 4 * 1234, 4 * 1235);
  expect(Math.max(...thin(spike, 200).map(({ y }) => y))).toBe(7);
});

test('undefined steps are gaps', () => {
  const waveform = sample(uniformGrid(0, 3, 3), (t) => (t > 1 && t < 2 ? Number.NaN : t));
  expect(thin(waveform, 100).map(({ y }) => (Number.isNaN(y) ? 'gap' : y))).toEqual(
    [0, 1, 'gap', 2, 3].map((y) => (typeof y === 'number' ? expect.closeTo(y, 9) : y)),
  );
});
