/**
 * Monotone piecewise cubic interpolation of a table (F. N. Fritsch and R. E. Carlson, 1980, with the slopes of
 * F. N. Fritsch and J. Butland, 1984): passes through every point, has a continuous slope and no wiggle between points.
 */
export interface MonotoneCubic {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly slope: Float64Array;
}

/** `x` strictly ascending, at least two points. */
export function buildMonotoneCubic(x: ArrayLike<number>, y: ArrayLike<number>): MonotoneCubic {
  const n = x.length;
  const slope = new Float64Array(n);
  const secant = (k: number): number => (y[k + 1]! - y[k]!) / (x[k + 1]! - x[k]!);
  for (let k = 1; k < n - 1; k++) {
    const before = secant(k - 1);
    const after = secant(k);
    if (before * after <= 0) continue;
    const left = x[k]! - x[k - 1]!;
    const right = x[k + 1]! - x[k]!;
    slope[k] = (3 * (left + right)) / ((2 * right + left) / before + (right + 2 * left) / after);
  }
  if (n > 0) {
    slope[0] = endSlope(secant(0), n > 2 ? slope[1]! : secant(0));
    slope[n - 1] = endSlope(secant(n - 2), n > 2 ? slope[n - 2]! : secant(n - 2));
  }
  return { x: Float64Array.from(x), y: Float64Array.from(y), slope };
}

/** One-sided slope: a parabola's, kept within what leaves the end interval monotone. */
function endSlope(secant: number, inner: number): number {
  const slope = (3 * secant - inner) / 2;
  if (slope * secant <= 0) return 0;
  return Math.abs(slope) > 3 * Math.abs(secant) ? 3 * secant : slope;
}

/** Value and slope at `at`, straight beyond the ends; writes them to result[0] and result[1]. */
export function evaluateMonotoneCubic(curve: MonotoneCubic, at: number, result: Float64Array): void {
  const { x, y, slope } = curve;
  const last = x.length - 1;
  if (at <= x[0]! || at >= x[last]!) {
    const end = at <= x[0]! ? 0 : last;
    result[0] = y[end]! + slope[end]! * (at - x[end]!);
    result[1] = slope[end]!;
    return;
  }
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle]! <= at) low = middle;
    else high = middle;
  }
  const width = x[high]! - x[low]!;
  const secant = (y[high]! - y[low]!) / width;
  const u = at - x[low]!;
  const c = (3 * secant - 2 * slope[low]! - slope[high]!) / width;
  const d = (slope[low]! + slope[high]! - 2 * secant) / (width * width);
  result[0] = y[low]! + u * (slope[low]! + u * (c + u * d));
  result[1] = slope[low]! + u * (2 * c + 3 * u * d);
}
