/** A figure against its limits, at its worst over all runs. */
import type { Limit } from './language/model.ts';
import type { Measured, Verdict } from './results.ts';

/**
 * The verdict over all runs, and the limits that are tightest. Bounds come one for each run, or one for all. A value that its own
 * uncertainty carries across a limit is too close to call; a value on a limit that may be reached is kept.
 */
export function judge(
  runs: readonly Measured[],
  limit: Limit,
  lower: readonly Measured[] | undefined,
  upper: readonly Measured[] | undefined,
): { verdict: Verdict; lowerLimit?: number; upperLimit?: number } {
  let verdict: Verdict = 'kept';
  const worsen = (room: number, uncertainty: number, inclusive: boolean): void => {
    if (room < -uncertainty) verdict = 'broken';
    else if (verdict === 'kept' && (room > uncertainty || (inclusive && Math.abs(room) <= uncertainty))) return;
    else if (verdict === 'kept') verdict = 'too close to call';
  };
  runs.forEach((measured, k) => {
    const low = lower?.[lower.length === 1 ? 0 : k];
    const high = upper?.[upper.length === 1 ? 0 : k];
    if (low && limit.lower) {
      worsen(measured.value - low.value, measured.uncertainty + low.uncertainty, limit.lower.inclusive);
    }
    if (high && limit.upper) {
      worsen(high.value - measured.value, measured.uncertainty + high.uncertainty, limit.upper.inclusive);
    }
  });
  return {
    verdict,
    ...(lower ? { lowerLimit: Math.max(...lower.map(({ value }) => value)) } : {}),
    ...(upper ? { upperLimit: Math.min(...upper.map(({ value }) => value)) } : {}),
  };
}
