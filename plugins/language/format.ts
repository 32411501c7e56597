/** Numbers as a reader sees them: significant digits, a fitting prefix, the unit after a space. */
import { type Dimension, siUnitText } from './dimensions.ts';
import { fromSI, parseUnit, type Unit } from './units.ts';

const UP_AND_DOWN: readonly [exponent: number, prefix: string][] = [
  [12, 'T'],
  [9, 'G'],
  [6, 'M'],
  [3, 'k'],
  [0, ''],
  [-3, 'm'],
  [-6, 'µ'],
  [-9, 'n'],
  [-12, 'p'],
  [-15, 'f'],
  [-18, 'a'],
];

/** Units that custom does not enlarge with a prefix. */
const NEVER_ENLARGED = ['s', 'K', 'C'];

/**
 * The unit in which a value of this magnitude (SI) reads best: the SI unit with the prefix that leaves 1 to 1000 before
 * the point, after rounding to `digits`. Products, powers and plain numbers take no prefix.
 */
export function fittingUnit(dimension: Dimension, magnitude: number, digits = 3): Unit {
  const text = siUnitText(dimension);
  const plain = parseUnit(text === '' ? '1' : text) ?? { text, dimension, factor: 1, offset: 0, decimalExponent: 0 };
  const leading = /^[A-ZΩa-z]+/.exec(text)?.[0];
  const takesPrefix = leading !== undefined && !/^[²³⁻^]/.test(text.slice(leading.length)) && text !== 'kg';
  if (!takesPrefix || !Number.isFinite(magnitude) || magnitude === 0) return plain;
  const rounded = Math.abs(Number(magnitude.toPrecision(Math.max(1, Math.min(21, digits)))));
  const largest = NEVER_ENLARGED.includes(leading) ? 0 : 12;
  const fitting = UP_AND_DOWN.find(([exponent]) => exponent <= largest && rounded >= Number(`1e${exponent}`));
  const [, prefix] = fitting ?? UP_AND_DOWN.at(-1)!;
  return parseUnit(prefix + text) ?? plain;
}

/** A number to so many significant digits, trailing zeros kept: 2 to three digits is `2.00`, 1234 to three is `1230`. */
export function formatNumber(value: number, digits: number): string {
  if (Number.isNaN(value)) return '–';
  if (!Number.isFinite(value)) return value > 0 ? '∞' : '-∞';
  const kept = Math.max(1, Math.min(17, Math.round(digits)));
  if (value === 0) return '0';
  const [mantissa, exponentText] = value.toExponential(kept - 1).split('e');
  const exponent = Number(exponentText);
  if (exponent < -5 || exponent > 8) return `${mantissa}·10${raised(exponent)}`;
  return Number(`${mantissa}e${exponent}`).toFixed(Math.max(0, Math.min(20, kept - 1 - exponent)));
}

/** A value in SI with its unit: `2.50 mA`. Without a unit, the fitting one is chosen. */
export function formatQuantity(value: number, dimension: Dimension, digits = 3, unit?: Unit): string {
  const shown = unit ?? fittingUnit(dimension, value, digits);
  const number = formatNumber(fromSI(value, shown), digits);
  if (shown.text === '') return number;
  return shown.text === '°' ? `${number}°` : `${number} ${shown.text}`;
}

function raised(exponent: number): string {
  return String(exponent).replace(/[-0-9]/g, (character) => '⁻⁰¹²³⁴⁵⁶⁷⁸⁹'['-0123456789'.indexOf(character)]!);
}
