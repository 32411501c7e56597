/** The cubic of one step as a polynomial in s, the fraction of the step gone by. */
import { COLLOCATION_NODES } from './waveform.ts';

/** c[0] + c[1] s + c[2] s² + c[3] s³. */
export type Cubic = Float64Array;

/** MONOMIALS[k][r]: what (value at node r + 1) - (value at node 0) adds to the coefficient of s^(k + 1). */
const MONOMIALS = monomials();

/** Writes the coefficients of the cubic through the four values that begin at `offset`. */
export function cubicOf(values: Float64Array, offset: number, out: Cubic): Cubic {
  const first = values[offset]!;
  // Differences to the first value keep a small change on a large value exact.
  const d1 = values[offset + 1]! - first;
  const d2 = values[offset + 2]! - first;
  const d3 = values[offset + 3]! - first;
  out[0] = first;
  for (let k = 0; k < 3; k++) {
    const row = MONOMIALS[k]!;
    out[k + 1] = row[0]! * d1 + row[1]! * d2 + row[2]! * d3;
  }
  return out;
}

export function evaluateCubic(c: Cubic, s: number): number {
  return c[0]! + s * (c[1]! + s * (c[2]! + s * c[3]!));
}

/** dp/ds. */
export function cubicSlope(c: Cubic, s: number): number {
  return c[1]! + s * (2 * c[2]! + s * 3 * c[3]!);
}

/** Writes the places in (0, 1) where dp/ds is zero, ascending; returns how many. */
export function cubicTurns(c: Cubic, out: Float64Array): number {
  const a = 3 * c[3]!;
  const b = 2 * c[2]!;
  const constant = c[1]!;
  const scale = Math.max(Math.abs(a), Math.abs(b), Math.abs(constant));
  if (scale === 0) return 0;
  // The stable form of the quadratic formula: no difference of nearly equal numbers.
  const discriminant = (b / scale) ** 2 - 4 * (a / scale) * (constant / scale);
  if (discriminant < 0) return 0;
  const q = -0.5 * (b / scale + (b < 0 ? -1 : 1) * Math.sqrt(discriminant));
  const first = a === 0 ? Number.NaN : (q * scale) / a;
  const second = q === 0 ? Number.NaN : constant / (q * scale);
  let count = 0;
  for (const turn of first <= second || Number.isNaN(second) ? [first, second] : [second, first]) {
    if (turn > 0 && turn < 1 && (count === 0 || turn > out[count - 1]!)) out[count++] = turn;
  }
  return count;
}

const turns = new Float64Array(2);
const places = new Float64Array(4);
const levels = new Float64Array(4);

/**
 * Writes the real roots in [0, 1], ascending; returns how many. Values within `tolerance` of zero at the ends and at the
 * turns count as zero, so a curve that touches zero has a root where it touches. A cubic that is zero throughout has none.
 */
export function cubicRoots(c: Cubic, tolerance: number, out: Float64Array): number {
  // Between its turns the cubic is monotone, so a piece holds one root or none.
  const turnCount = cubicTurns(c, turns);
  places[0] = 0;
  for (let k = 0; k < turnCount; k++) places[k + 1] = turns[k]!;
  const last = turnCount + 1;
  places[last] = 1;
  let flat = true;
  for (let k = 0; k <= last; k++) {
    levels[k] = settle(evaluateCubic(c, places[k]!), tolerance);
    if (levels[k] !== 0) flat = false;
  }
  if (flat) return 0;
  let count = 0;
  for (let k = 0; k <= last; k++) {
    if (levels[k] === 0) out[count++] = places[k]!;
    if (k < last && levels[k]! * levels[k + 1]! < 0) out[count++] = crossing(c, places[k]!, places[k + 1]!, levels[k]!);
  }
  return count;
}

function settle(value: number, tolerance: number): number {
  return Math.abs(value) <= tolerance ? 0 : value;
}

/** The root in a bracket in which the cubic is monotone: Newton's method, kept inside by bisection. */
function crossing(c: Cubic, from: number, to: number, fromValue: number): number {
  let low = from;
  let high = to;
  let s = (low + high) / 2;
  for (let k = 0; k < 100; k++) {
    const value = evaluateCubic(c, s);
    if (value === 0) return s;
    if (value > 0 === fromValue > 0) low = s;
    else high = s;
    const slope = cubicSlope(c, s);
    let next = slope === 0 ? Number.NaN : s - value / slope;
    if (!(next > low && next < high)) next = (low + high) / 2;
    if (next === s || next === low || next === high) return next;
    if (Math.abs(next - s) < 1e-16) return next;
    s = next;
  }
  return s;
}

/** Lagrange's basis polynomials of nodes 1 to 3, divided by s (all vanish at node 0) and expanded. */
function monomials(): readonly (readonly number[])[] {
  const rows = [
    [0, 0, 0],
    [0, 0, 0],
    [0, 0, 0],
  ];
  for (let r = 1; r < 4; r++) {
    const at = COLLOCATION_NODES[r]!;
    const [p, q] = COLLOCATION_NODES.filter((_, k) => k !== 0 && k !== r) as [number, number];
    const norm = at * (at - p) * (at - q);
    rows[0]![r - 1] = (p * q) / norm;
    rows[1]![r - 1] = -(p + q) / norm;
    rows[2]![r - 1] = 1 / norm;
  }
  return rows;
}
