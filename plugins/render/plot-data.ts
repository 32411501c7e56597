/** The numbers of a plot: thinned points for drawing, in the units shown. */
import { type Point, thin } from '../../solver/waveform/thin.ts';
import { valueAt } from '../../solver/waveform/value-at.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import type { Curve, SolvedPlot } from '../results.ts';

/** Points drawn of a curve, about: more are not seen on a page. */
const POINTS = 1200;

/** Digits that are drawn of a value; more where a curve's range is small beside its values. */
const DIGITS_ACROSS = 8;
const DIGITS_UP = 6;
/** Digits of the range: a pixel is a thousandth of it. */
const DIGITS_OF_RANGE = 5;

export interface DrawnPoint {
  /** In the units shown. */
  readonly x: number;
  /** null: a gap. */
  readonly y: number | null;
}

export interface Extent {
  readonly least: number;
  readonly greatest: number;
}

/** What a curve is called: its label, and what was set for its run. */
export function curveName(curve: Curve): string {
  const set = conditionsText(curve);
  return set === '' ? curve.label : `${curve.label}, ${set}`;
}

/** What was set for a curve's run, e.g. `C1 = 470 nF`. */
export function conditionsText({ conditions }: Curve): string {
  return conditions.map(({ name, text }) => `${name} = ${text}`).join(', ');
}

const thinned = new WeakMap<Waveform, readonly Point[]>();

/** Points of a waveform in SI, both sides of jumps at the same x. */
export function thinnedPoints(waveform: Waveform): readonly Point[] {
  let points = thinned.get(waveform);
  if (points === undefined) {
    points = thin(waveform, POINTS);
    thinned.set(waveform, points);
  }
  return points;
}

export function drawnPoints(curve: Curve, plot: SolvedPlot): DrawnPoint[] {
  const points = curve.against ? pairedPoints(curve.waveform, curve.against) : thinnedPoints(curve.waveform);
  const across = digitsFor(extentOf(points.map(({ x }) => x)), DIGITS_ACROSS, DIGITS_OF_RANGE);
  const up = digitsFor(extentOf(points.map(({ y }) => y)), DIGITS_UP, DIGITS_OF_RANGE);
  return points.map(({ x, y }) => ({
    x: Number((x * plot.horizontal.scale).toPrecision(across)),
    y: Number.isFinite(y) ? Number((y * curve.scale).toPrecision(up)) : null,
  }));
}

/**
 * One quantity against another, in the order of the axis they share: their values wherever a point of either is kept, so that
 * the extremes of both are there.
 */
function pairedPoints(vertical: Waveform, horizontal: Waveform): Point[] {
  const gaps = new Set<number>();
  const places = new Set<number>();
  for (const { x, y } of [...thinnedPoints(vertical), ...thinnedPoints(horizontal)]) {
    places.add(x);
    if (Number.isNaN(y)) gaps.add(x);
  }
  const points: Point[] = [];
  const add = (x: number, y: number): void => {
    const last = points.at(-1);
    if (Number.isFinite(x) && Number.isFinite(y)) {
      if (last === undefined || last.x !== x || !Object.is(last.y, y)) points.push({ x, y });
    } else if (last !== undefined && !Number.isNaN(last.y)) points.push({ x: last.x, y: Number.NaN });
  };
  for (const at of [...places].sort((a, b) => a - b)) {
    add(valueAt(horizontal, at, 'left'), valueAt(vertical, at, 'left'));
    if (gaps.has(at)) add(Number.NaN, Number.NaN);
    else add(valueAt(horizontal, at), valueAt(vertical, at));
  }
  return points;
}

/** Of the finite ones; nothing where there are none. */
export function extentOf(values: Iterable<number | null>): Extent | undefined {
  let least = Number.POSITIVE_INFINITY;
  let greatest = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    if (value === null || !Number.isFinite(value)) continue;
    if (value < least) least = value;
    if (value > greatest) greatest = value;
  }
  return least <= greatest ? { least, greatest } : undefined;
}

/**
 * Significant digits to show values of a range with: `fewest`, and more where the values differ only in their last places, so
 * that their differences have `ofRange` digits.
 */
export function digitsFor(extent: Extent | undefined, fewest: number, ofRange: number): number {
  if (extent === undefined || extent.greatest === extent.least) return fewest;
  const size = Math.max(Math.abs(extent.least), Math.abs(extent.greatest));
  const more = Math.ceil(Math.log10(size / (extent.greatest - extent.least)));
  return Math.min(15, Math.max(fewest, ofRange + more));
}
