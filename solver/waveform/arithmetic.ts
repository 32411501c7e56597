/**
 * Arithmetic at the nodes, between waveforms of one axis (on the union of their grids) and with numbers. A result that
 * is no cubic any more is the cubic through its nodes; integrals over it keep the order of the quadrature.
 */
import { cubicOf, cubicRoots } from './cubic.ts';
import { peak } from './extremes.ts';
import { onCommonGrid } from './grids.ts';
import type { NoValue, Waveform } from './waveform.ts';

type Operand = Waveform | number;

export function add(left: Operand, right: Operand): Waveform | NoValue {
  return pointwise(left, right, (a, b) => a + b);
}

export function subtract(left: Operand, right: Operand): Waveform | NoValue {
  return pointwise(left, right, (a, b) => a - b);
}

export function multiply(left: Operand, right: Operand): Waveform | NoValue {
  return pointwise(left, right, (a, b) => a * b);
}

/**
 * Quotient. In a step in which the divisor is zero or passes through zero the quotient has a pole or no value: all its
 * nodes are NaN there, which a plot shows as a gap and a functional reports as no value.
 */
export function divide(left: Operand, right: Operand): Waveform | NoValue {
  const quotient = pointwise(left, right, (a, b) => a / b);
  if ('none' in quotient) return quotient;
  if (typeof right === 'number') return right === 0 ? blank(quotient, () => true) : quotient;
  const [divisor] = onCommonGrid(right, quotient)!;
  const tolerance = 1e-14 * peak(divisor);
  const cubic = new Float64Array(4);
  const roots = new Float64Array(4);
  return blank(quotient, (step) => {
    cubicOf(divisor.values, 4 * step, cubic);
    return isZero(divisor, step, tolerance) || cubicRoots(cubic, tolerance, roots) > 0;
  });
}

/** Power with a constant exponent, or of a constant base. NaN where it is not real (a root of a negative value). */
export function power(base: Operand, exponent: Operand): Waveform | NoValue {
  return pointwise(base, exponent, (a, b) => a ** b);
}

/** A function of one number at every node. */
export function map(waveform: Waveform, of: (value: number) => number): Waveform {
  return { grid: waveform.grid, values: waveform.values.map(of) };
}

export function negate(waveform: Waveform): Waveform {
  return map(waveform, (value) => -value);
}

/** Where the waveform is undefined for the first time; nothing where it is defined throughout. */
export function firstUndefined({ grid, values }: Waveform): number | undefined {
  const at = values.findIndex((value) => !Number.isFinite(value));
  return at === -1 ? undefined : grid[at >> 2];
}

function pointwise(left: Operand, right: Operand, of: (a: number, b: number) => number): Waveform | NoValue {
  if (typeof right === 'number') {
    if (typeof left === 'number') throw new Error('Internal error: one operand must be a waveform');
    return map(left, (value) => of(value, right));
  }
  if (typeof left === 'number') return map(right, (value) => of(left, value));
  const common = left.grid === right.grid ? ([left, right] as const) : onCommonGrid(left, right);
  if (!common) return { none: 'the two quantities have no part of the axis in common' };
  const [one, other] = common;
  return { grid: one.grid, values: one.values.map((value, k) => of(value, other.values[k]!)) };
}

function isZero({ values }: Waveform, step: number, tolerance: number): boolean {
  for (let s = 0; s < 4; s++) if (!(Math.abs(values[4 * step + s]!) <= tolerance)) return false;
  return true;
}

function blank(waveform: Waveform, where: (step: number) => boolean): Waveform {
  const values = waveform.values.slice();
  for (let k = 0; k + 1 < waveform.grid.length; k++) if (where(k)) values.fill(Number.NaN, 4 * k, 4 * k + 4);
  return { grid: waveform.grid, values };
}
