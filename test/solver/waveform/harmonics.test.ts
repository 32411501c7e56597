import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { distortion, harmonic } from '../../../solver/waveform/harmonics.ts';
import { mean, rms } from '../../../solver/waveform/integrals.ts';
import { absolute } from '../../../solver/waveform/parts.ts';
import { sample, sampleSmooth, uniformGrid } from './sample.ts';

interface Reference {
  readonly mean: number;
  readonly mean_abs: number;
  readonly rms: number;
  readonly a: readonly number[];
  readonly b: readonly number[];
  readonly distortion: number | null;
}

// Sources are stated in the file.
const references: { readonly [name: string]: Reference } = JSON.parse(
  readFileSync(new URL('../../references/08-fourier-waveforms.json', import.meta.url), 'utf8'),
).waveforms;

const sine = (t: number): number => Math.sin(2 * Math.PI * t);
/** Each over one period 1; the number is the tolerance: rounding where the steps hold the waveform exactly. */
const waveforms: readonly [name: string, grid: Float64Array, of: (t: number) => number, tolerance: number][] = [
  ['sine', uniformGrid(0, 1, 400), sine, 1e-9],
  ['square +-1', uniformGrid(0, 1, 2), (t) => (t < 0.5 ? 1 : -1), 1e-12],
  ['triangle +-1 (zero at t=0, rising)', uniformGrid(0, 1, 4), (t) => 1 - Math.abs(4 * ((t + 0.25) % 1) - 2), 1e-12],
  ['sawtooth +-1 (zero at t=0, rising, jump at T/2)', uniformGrid(0, 1, 2), (t) => 2 * t - (t < 0.5 ? 0 : 2), 1e-12],
  ['unipolar ramp 0..1', uniformGrid(0, 1, 3), (t) => t, 1e-12],
  ['half-wave rectified sine', uniformGrid(0, 1, 400), (t) => (t < 0.5 ? sine(t) : 0), 1e-9],
  ['full-wave rectified sine (period of the sine)', uniformGrid(0, 1, 400), (t) => Math.abs(sine(t)), 1e-9],
  [
    'alternating rectangular pulses, duty 0.82 of each half period, ending at T/2 and T',
    Float64Array.from([0, 0.09, 0.5, 0.59, 1]),
    (t) => (t < 0.09 ? 0 : t < 0.5 ? 1 : t < 0.59 ? 0 : -1),
    1e-12,
  ],
];

describe.each(waveforms)('%s', (name, grid, of, tolerance) => {
  const reference = references[name]!;
  const waveform = sample(grid, of);
  const near = (value: unknown, expected: number): void => {
    expect(Math.abs((value as number) - expected)).toBeLessThan(tolerance + 1e-14);
  };

  test('amplitudes of the harmonics 1 to 9', () => {
    for (let n = 1; n <= 9; n++) near(harmonic(waveform, n), Math.hypot(reference.a[n - 1]!, reference.b[n - 1]!));
    near(harmonic(waveform, 0), reference.mean);
  });

  test('mean, RMS, mean of the magnitude', () => {
    near(mean(waveform), reference.mean);
    near(rms(waveform), reference.rms);
    near(mean(absolute(waveform)), reference.mean_abs);
  });

  test('distortion', () => {
    const found = distortion(waveform);
    if (reference.distortion === null) expect(found).toHaveProperty('none');
    else near(found, reference.distortion);
  });
});

test('a high harmonic over a few wide steps is exact', () => {
  // Ramp 0..1: the n-th amplitude is 1/(π n) (the reference's closed form).
  const ramp = sample(uniformGrid(0, 1, 2), (t) => t);
  for (const n of [50, 199, 1000]) expect(harmonic(ramp, n)).toBeCloseTo(1 / (Math.PI * n), 12);
});

test('an explicit period takes the last full one', () => {
  // A decaying offset before, then a plain sine of 50 Hz and peak 3 from 20 ms on.
  const waveform = sampleSmooth(
    uniformGrid(0, 0.05, 1000),
    (t) => 3 * Math.sin(100 * Math.PI * t) + (t < 0.02 ? 5 : 0),
  );
  expect(harmonic(waveform, 1, 0.02)).toBeCloseTo(3, 8);
  expect(harmonic(waveform, 1, 0.06)).toHaveProperty('none');
  expect(harmonic(waveform, 1, -1)).toHaveProperty('none');
});
