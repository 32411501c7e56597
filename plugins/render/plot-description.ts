/** A plot in a sentence or two, for those who do not see it. */
import type { Curve, SolvedPlot } from '../results.ts';
import { typographicWords } from './number-text.ts';
import { conditionsText, curveName, digitsFor, drawnPoints, extentOf } from './plot-data.ts';
import { shortNumber } from './plot-table.ts';

/** More curves than this are told by their lines, not one by one. */
const TOLD_APART = 6;
/** Significant digits of the values, and of the differences between them. */
const DIGITS = [4, 2] as const;
/** Beside the greatest value this is nothing: far below the accuracy of solving, unless more was asked for than a sentence needs. */
const NOTHING = 1e-6;

export function describePlot(plot: SolvedPlot): string {
  const { curves, horizontal, spans } = plot;
  const groups = curves.length <= TOLD_APART ? curves.map((curve) => [curve]) : families(curves);
  const ranges = groups.map((group) => `${groupName(group)} ${rangeOf(group, plot)}`);
  const count = curves.length === 1 ? 'A curve' : `${curves.length} curves`;
  const marks = [...new Set(spans.map(({ label }) => label))];
  const shaded = marks.length > 0 ? ` Shaded: ${marks.join(', ')}.` : '';
  return `${count} over ${horizontal.label}: ${ranges.join('; ')}.${shaded}`;
}

function families(curves: readonly Curve[]): Curve[][] {
  const groups = new Map<string, Curve[]>();
  for (const curve of curves) {
    const key = JSON.stringify([curve.side, curve.label]);
    const group = groups.get(key);
    if (group) group.push(curve);
    else groups.set(key, [curve]);
  }
  return [...groups.values()];
}

function groupName(group: readonly Curve[]): string {
  const [first, last] = [group[0]!, group.at(-1)!];
  if (group.length === 1) return typographicWords(curveName(first));
  return typographicWords(`${first.label}, from ${conditionsText(first)} to ${conditionsText(last)},`);
}

function rangeOf(group: readonly Curve[], plot: SolvedPlot): string {
  const extent = extentOf(group.flatMap((curve) => drawnPoints(curve, plot).map(({ y }) => y)));
  if (extent === undefined) return 'without a value';
  const unit = group[0]!.unit === '' ? '' : ` ${group[0]!.unit}`;
  const digits = digitsFor(extent, ...DIGITS);
  const size = Math.max(Math.abs(extent.least), Math.abs(extent.greatest));
  const [least, greatest] = [extent.least, extent.greatest].map((value) => {
    return `${shortNumber(Math.abs(value) < NOTHING * size ? 0 : value, digits)}${unit}`;
  });
  return least === greatest ? `at ${least}` : `from ${least} to ${greatest}`;
}
