/**
 * Published and recomputed problems entered as notes: the accuracy asked is the accuracy kept, and the uncertainty that a reader is shown is true. Run with
 * `REFERENCES=show` to see every reference, result and error.
 */
import { afterAll, describe, expect, it } from 'vitest';
import { type Comparison, compareNote } from './note-case.ts';
import { PROBLEMS } from './problems.ts';

const comparisons: Comparison[] = [];

describe.each([1e-4, 1e-7])('at accuracy %s', (accuracy) => {
  it.each(PROBLEMS)('$name', (problem) => {
    const found = compareNote(problem, accuracy);
    expect(found.length).toBe(Object.keys(problem.figures).length);
    comparisons.push(...found);
    for (const { figure, relativeError, known, reference, found: measured } of found) {
      expect(relativeError, `${figure}: reference ${reference}, found ${measured.value}`).toBeLessThan(
        accuracy + known,
      );
    }
  });
});

describe('uncertainty', () => {
  it('bounds the true error in at least 95 of 100 figures', () => {
    // where the reference itself is not known better, an error below what it is known to proves nothing
    const bounded = comparisons.filter(
      ({ found, reference, known }) =>
        Math.abs(found.value - reference) <= found.uncertainty + known * Math.abs(reference),
    );
    expect(comparisons.length).toBeGreaterThan(150);
    expect(bounded.length / comparisons.length).toBeGreaterThanOrEqual(0.95);
  });
});

afterAll(() => {
  if (process.env.REFERENCES !== 'show') return;
  for (const { problem, figure, reference, found, relativeError } of comparisons) {
    console.log(
      `${problem} ${figure}: reference ${reference}, found ${found.value} ± ${found.uncertainty.toExponential(1)}, relative error ${relativeError.toExponential(1)}`,
    );
  }
});
