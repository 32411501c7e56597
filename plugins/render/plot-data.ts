/** The numbers of a plot: thinned points for drawing, and tables of values for reading. */
import { onCommonGrid } from '../../solver/waveform/grids.ts';
import { thin } from '../../solver/waveform/thin.ts';
import { valueAt } from '../../solver/waveform/value-at.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import type { Curve, SolvedPlot } from '../results.ts';

/** Points drawn of a curve, about: more are not seen on a page. */
const POINTS = 1200;

/** What is this small beside the greatest value of its curve is rounding: it is shown as zero. */
const ROUNDING = 1e-13;

/** Rows of the table beside a plot. */
const TABLE_ROWS = 13;

export interface DrawnPoint {
  /** In the units shown. */
  readonly x: number;
  /** null: a gap. */
  readonly y: number | null;
}

/** What a curve is called: its label, and what was set for its run. */
export function curveName(curve: Curve): string {
  const set = curve.conditions.map(({ name, text }) => `${name} = ${text}`).join(', ');
  return set === '' ? curve.label : `${curve.label}, ${set}`;
}

export function drawnPoints(curve: Curve, plot: SolvedPlot): DrawnPoint[] {
  const round = (value: number): number | null => (Number.isFinite(value) ? Number(value.toPrecision(6)) : null);
  if (curve.against) return againstPoints(curve, plot);
  return thin(curve.waveform, POINTS).map(({ x, y }) => ({
    x: Number((x * plot.horizontal.scale).toPrecision(8)),
    y: round(y * curve.scale),
  }));
}

/** One quantity against another: the nodes of every step, in the order of the axis; a step is thinned away where it hardly moves. */
function againstPoints(curve: Curve, plot: SolvedPlot): DrawnPoint[] {
  const [vertical, horizontal] = onCommonGrid(curve.waveform, curve.against!) ?? [curve.waveform, curve.against!];
  const points: DrawnPoint[] = [];
  const every = Math.max(1, Math.ceil(vertical.values.length / (4 * POINTS)));
  for (let k = 0; k < vertical.values.length; k++) {
    if (k % 4 !== 3 && Math.floor(k / 4) % every !== 0) continue;
    const x = horizontal.values[k]! * plot.horizontal.scale;
    const y = vertical.values[k]! * curve.scale;
    if (Number.isFinite(x))
      points.push({ x: Number(x.toPrecision(8)), y: Number.isFinite(y) ? Number(y.toPrecision(6)) : null });
  }
  return points;
}

export interface ValueTable {
  readonly columns: readonly string[];
  readonly rows: readonly (readonly string[])[];
}

/** A dozen values of every curve, evenly spaced along the axis. */
export function valueTable(plot: SolvedPlot): ValueTable {
  const columns = tableHeads(plot);
  const [from, to] = axisRange(plot);
  const rows = Array.from({ length: TABLE_ROWS }, (_, k) => {
    const at = from + ((to - from) * k) / (TABLE_ROWS - 1);
    return rowAt(plot, at, (value) => shortNumber(value));
  });
  return { columns, rows };
}

/** All drawn abscissae with every curve's value there; numbers to 7 digits. */
export function plotCsv(plot: SolvedPlot): string {
  const abscissae = new Set<number>();
  for (const { waveform } of plot.curves) {
    for (const { x } of thin(waveform, POINTS)) abscissae.add(x);
  }
  const [from, to] = axisRange(plot);
  const sorted = [...abscissae].filter((x) => x >= from && x <= to).sort((a, b) => a - b);
  const lines = [tableHeads(plot).map(csvCell).join(',')];
  for (const x of sorted)
    lines.push(
      rowAt(plot, x, (value) => (Number.isFinite(value) ? String(Number(value.toPrecision(7))) : '')).join(','),
    );
  return `${lines.join('\r\n')}\r\n`;
}

function tableHeads({ horizontal, curves }: SolvedPlot): string[] {
  const withUnit = (name: string, unit: string): string => (unit === '' ? name : `${name} (${unit})`);
  const first = curves.some(({ against }) => against)
    ? ['parameter', withUnit(horizontal.label, horizontal.unit)]
    : [withUnit(horizontal.label, horizontal.unit)];
  return [...first, ...curves.map((curve) => withUnit(curveName(curve), curve.unit))];
}

function rowAt(plot: SolvedPlot, x: number, text: (value: number) => string): string[] {
  const against = plot.curves.find((curve) => curve.against)?.against;
  const first = against
    ? [text(x), text(valueAt(against, x) * plot.horizontal.scale)]
    : [text(x * plot.horizontal.scale)];
  return [...first, ...plot.curves.map((curve) => text(cleanValue(curve, x) * curve.scale))];
}

function cleanValue({ waveform }: Curve, x: number): number {
  const value = valueAt(waveform, x);
  return Math.abs(value) < ROUNDING * greatestOf(waveform) ? 0 : value;
}

const greatest = new WeakMap<Waveform, number>();

function greatestOf(waveform: Waveform): number {
  let result = greatest.get(waveform);
  if (result === undefined) {
    result = 0;
    for (const value of waveform.values) if (Math.abs(value) > result) result = Math.abs(value);
    greatest.set(waveform, result);
  }
  return result;
}

function axisRange({ curves }: SolvedPlot): [number, number] {
  let from = Number.POSITIVE_INFINITY;
  let to = Number.NEGATIVE_INFINITY;
  for (const { waveform } of curves) {
    from = Math.min(from, waveform.grid[0]!);
    to = Math.max(to, waveform.grid.at(-1)!);
  }
  return [from, to];
}

/** RFC 4180; a head that a spreadsheet would take for a formula gets a blank before it. */
function csvCell(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? ` ${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** Four digits, as a reader writes them. */
export function shortNumber(value: number): string {
  if (!Number.isFinite(value)) return '–';
  const [mantissa, exponent] = String(Number(value.toPrecision(4))).split('e');
  const power = exponent === undefined ? '' : `·10${superscript(exponent.replace('+', ''))}`;
  return mantissa!.replace('-', '\u2212') + power;
}

function superscript(text: string): string {
  return text.replace(/[-0-9]/g, (character) => '⁻⁰¹²³⁴⁵⁶⁷⁸⁹'['-0123456789'.indexOf(character)]!);
}
