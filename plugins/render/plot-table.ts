/** The values of a plot as tables: a short one to read, and all of them as CSV. */
import { valueAt } from '../../solver/waveform/value-at.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import type { SolvedPlot } from '../results.ts';
import { conditionsText, curveName, digitsFor, type Extent, extentOf, thinnedPoints } from './plot-data.ts';

/** Rows of the table beside a plot. */
const TABLE_ROWS = 13;
/** Significant digits of the values, and of the differences between them. */
const TABLE_DIGITS = [4, 3] as const;
const CSV_DIGITS = [7, 5] as const;

/** What is this small beside the greatest value of its curve is rounding: it is shown as zero. */
const ROUNDING = 1e-13;

export interface ValueTable {
  readonly columns: readonly string[];
  readonly rows: readonly (readonly string[])[];
}

interface Column {
  readonly head: string;
  /** In the unit of the head. */
  readonly valueAt: (x: number, side: 'left' | 'right') => number;
  /** In SI. */
  readonly extent: Extent | undefined;
}

/** A dozen values of every curve, evenly spaced along the axis. */
export function valueTable(plot: SolvedPlot): ValueTable {
  const columns = columnsOf(plot);
  const { least, greatest } = axisExtent(plot);
  const steps = greatest > least ? TABLE_ROWS - 1 : 0;
  const rows = Array.from({ length: steps + 1 }, (_, k) => {
    const x = steps === 0 ? least : least + ((greatest - least) * k) / steps;
    return columns.map((column) => shortNumber(column.valueAt(x, 'right'), digitsFor(column.extent, ...TABLE_DIGITS)));
  });
  return { columns: columns.map(({ head }) => head), rows };
}

/** All drawn abscissae with every curve's value there; where a curve jumps, a row before and a row after. */
export function plotCsv(plot: SolvedPlot): string {
  const columns = columnsOf(plot);
  const places = new Set<number>();
  const jumps = new Set<number>();
  for (const waveform of waveformsOf(plot)) {
    let previous: { readonly x: number; readonly y: number } | undefined;
    for (const point of thinnedPoints(waveform)) {
      places.add(point.x);
      if (previous?.x === point.x && previous.y !== point.y) jumps.add(point.x);
      previous = point;
    }
  }
  const row = (x: number, side: 'left' | 'right'): string =>
    columns.map((column) => csvNumber(column.valueAt(x, side), digitsFor(column.extent, ...CSV_DIGITS))).join(',');
  const lines = [columns.map(({ head }) => csvCell(head)).join(',')];
  for (const x of [...places].sort((a, b) => a - b)) {
    if (jumps.has(x)) lines.push(row(x, 'left'));
    lines.push(row(x, 'right'));
  }
  return `${lines.join('\r\n')}\r\n`;
}

/** The axis, the horizontal quantity of each run where there is one in its place, and the curves. */
function columnsOf(plot: SolvedPlot): Column[] {
  const { horizontal, curves } = plot;
  const columns: Column[] = [];
  const axis = axisExtent(plot);
  const paired = curves.some(({ against }) => against);
  const axisScale = paired ? 1 : horizontal.scale;
  columns.push({
    head: paired ? 'parameter' : withUnit(horizontal.label, horizontal.unit),
    valueAt: (x) => x * axisScale,
    extent: axis,
  });
  const runs = new Map<string, Waveform>();
  for (const curve of curves) {
    if (curve.against && !runs.has(conditionsText(curve))) runs.set(conditionsText(curve), curve.against);
  }
  for (const [conditions, against] of runs) {
    const name = runs.size > 1 ? `${horizontal.label}, ${conditions}` : horizontal.label;
    columns.push(columnOf(withUnit(name, horizontal.unit), against, horizontal.scale));
  }
  for (const curve of curves) {
    columns.push(columnOf(withUnit(curveName(curve), curve.unit), curve.waveform, curve.scale));
  }
  return columns;
}

function columnOf(head: string, waveform: Waveform, scale: number): Column {
  const extent = extentOf(waveform.values);
  const size = extent ? Math.max(Math.abs(extent.least), Math.abs(extent.greatest)) : 0;
  return {
    head,
    extent,
    valueAt: (x, side) => {
      const value = valueAt(waveform, x, side);
      return Math.abs(value) < ROUNDING * size ? 0 : value * scale;
    },
  };
}

function waveformsOf({ curves }: SolvedPlot): Waveform[] {
  return curves.flatMap(({ waveform, against }) => (against ? [waveform, against] : [waveform]));
}

function axisExtent({ curves }: SolvedPlot): { least: number; greatest: number } {
  return extentOf(curves.flatMap(({ waveform: { grid } }) => [grid[0]!, grid.at(-1)!])) ?? { least: 0, greatest: 0 };
}

function withUnit(name: string, unit: string): string {
  return unit === '' ? name : `${name} (${unit})`;
}

function csvNumber(value: number, digits: number): string {
  return Number.isFinite(value) ? String(Number(value.toPrecision(digits))) : '';
}

/** RFC 4180; a head that a spreadsheet would take for a formula gets a blank before it. */
function csvCell(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? ` ${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** Four digits unless more are asked for, as a reader writes them; a dash where there is no value. */
export function shortNumber(value: number, digits: number = TABLE_DIGITS[0]): string {
  if (!Number.isFinite(value)) return '–';
  const rounded = Number(value.toPrecision(digits));
  const text = Math.abs(rounded) >= 1e6 ? rounded.toExponential() : String(rounded);
  const [mantissa, exponent] = text.split('e');
  return exponent === undefined ? mantissa!.replace('-', '\u2212') : powerOfTen(mantissa!, exponent);
}

/** `2`, `-13` → 2·10⁻¹³; zero has no power. */
export function powerOfTen(mantissa: string, exponent: string): string {
  const text = mantissa.replace('-', '\u2212');
  return Number(exponent) === 0 ? text : `${text}·10${superscript(exponent.replace('+', ''))}`;
}

function superscript(text: string): string {
  return text.replace(/[-0-9]/g, (character) => '⁻⁰¹²³⁴⁵⁶⁷⁸⁹'['-0123456789'.indexOf(character)]!);
}
