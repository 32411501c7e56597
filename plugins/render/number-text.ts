/** Numbers as a page shows them: no more digits than their uncertainty supports, a typographic minus, unbreakable units. */
import { type Dimension, isDimensionless } from '../language/dimensions.ts';
import { fittingUnit, formatNumber } from '../language/format.ts';
import { fromSI, parseUnit, type Unit } from '../language/units.ts';
import type { Measured } from '../results.ts';

export const DEFAULT_DIGITS = 3;

/** Significant digits whose last place is not below twice the uncertainty; 0 where the value drowns in it. */
export function supportedDigits({ value, uncertainty }: Measured): number {
  if (value === 0 || !(Math.abs(value) > uncertainty)) return 0;
  if (uncertainty === 0) return 15;
  const leading = Math.floor(Math.log10(Math.abs(value)));
  return Math.max(0, Math.min(15, leading - Math.ceil(Math.log10(2 * uncertainty)) + 1));
}

/** The number alone, in `unit`. A value that is zero to within its uncertainty is `0`. */
export function numberText(measured: Measured, unit: Unit, digits = DEFAULT_DIGITS): string {
  const supported = supportedDigits(measured);
  if (supported === 0) return '0';
  return typographic(formatNumber(fromSI(measured.value, unit), Math.min(digits, supported)));
}

/** The number and its unit, held together by a no-break space. */
export function quantityText(measured: Measured, unit: Unit, digits = DEFAULT_DIGITS): string {
  const number = numberText(measured, unit, digits);
  if (unit.text === '') return number;
  return unit.text === '°' ? `${number}°` : `${number}\u00a0${unit.text}`;
}

/** The author's unit, or the one that reads best for a value of this magnitude. */
export function unitFor(text: string | undefined, dimension: Dimension, magnitude: number): Unit {
  const stated = text === undefined ? undefined : parseUnit(text);
  if (stated) return stated;
  return fittingUnit(dimension, isDimensionless(dimension) ? 1 : magnitude);
}

/** A limit's number: as many digits as it needs, at most four significant ones. */
export function limitText(value: number, unit: Unit): string {
  return typographic(String(Number(fromSI(value, unit).toPrecision(4))));
}

export function typographic(number: string): string {
  return number.replace(/-/g, '\u2212');
}

/** The numbers within a text: their minus is a minus, and the units of temperature stay with them. */
export function typographicWords(text: string): string {
  return text.replace(/(?<![\w)])-(?=[\d.])/g, '\u2212').replace(/ °C/g, '\u00a0°C');
}

/**
 * Numbers of a column with their decimal points under each other, right-aligned: what follows the point is filled up with blanks of a
 * digit's and a point's width. Entries without digits are left alone.
 */
export function alignedAtPoint(numbers: readonly string[]): string[] {
  const decimals = numbers
    .map((number) => /^[^.·]*\d(?:\.(\d+))?$/.exec(number))
    .map((found) => found && (found[1] ?? '').length);
  const most = Math.max(0, ...decimals.map((count) => count ?? 0));
  if (most === 0) return [...numbers];
  return numbers.map((number, k) => {
    const count = decimals[k];
    if (count === null || count === undefined) return number;
    return number + (count === 0 ? POINT_WIDE : '') + DIGIT_WIDE.repeat(most - count);
  });
}

const DIGIT_WIDE = '\u2007';
const POINT_WIDE = '\u2008';
