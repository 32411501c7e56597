/**
 * Unit texts: `mA`, `K/W`, `V/µs`, `ppm/K`, `Ω·m`. Prefixes are case-sensitive (SI brochure, 9th edition, table 7); `u`,
 * `µ` (U+00B5) and `μ` (U+03BC) all mean micro, `ohm`, `Ω` (U+03A9) and `Ω` (U+2126) all mean ohm.
 */
import {
  CAPACITANCE,
  CHARGE,
  CONDUCTANCE,
  CURRENT,
  DIMENSIONLESS,
  type Dimension,
  ENERGY,
  FLUX,
  FORCE,
  FREQUENCY,
  ILLUMINANCE,
  INDUCTANCE,
  LENGTH,
  LUMINOUS_INTENSITY,
  MASS,
  multiply,
  POWER,
  power,
  RESISTANCE,
  TEMPERATURE,
  TIME,
  VOLTAGE,
} from './dimensions.ts';

export interface Unit {
  /** As it is shown: `µA`, `Ω`, `K/W`. */
  readonly text: string;
  readonly dimension: Dimension;
  /** SI value = number × factor + offset. */
  readonly factor: number;
  /** Zero but for the Celsius scale on its own. */
  readonly offset: number;
  /** Where the factor is a power of ten: its exponent, so that `100 nF` becomes the number nearest to 1e-7. */
  readonly decimalExponent?: number;
  /** Ratio of amplitudes in decibel: SI value = 10^(number / 20). */
  readonly decibel?: true;
}

/** Exponents of the prefixes, as written. */
export const PREFIXES: ReadonlyMap<string, number> = new Map([
  ['a', -18],
  ['f', -15],
  ['p', -12],
  ['n', -9],
  ['u', -6],
  ['µ', -6],
  ['μ', -6],
  ['m', -3],
  ['k', 3],
  ['M', 6],
  ['G', 9],
  ['T', 12],
]);

interface Symbol {
  readonly shown: string;
  readonly dimension: Dimension;
  readonly factor: number;
  readonly decimalExponent?: number;
  readonly prefixed: boolean;
  readonly offset?: number;
  readonly decibel?: true;
}

function coherent(shown: string, dimension: Dimension): Symbol {
  return { shown, dimension, factor: 1, decimalExponent: 0, prefixed: true };
}

function special(shown: string, dimension: Dimension, factor: number, decimalExponent?: number): Symbol {
  return { shown, dimension, factor, decimalExponent, prefixed: false };
}

const OHM = coherent('Ω', RESISTANCE);
const CELSIUS: Symbol = { ...special('°C', TEMPERATURE, 1, 0), offset: 273.15 };
const DEGREE = special('°', DIMENSIONLESS, Math.PI / 180);

/** Symbols by the text an author writes. */
export const SYMBOLS: ReadonlyMap<string, Symbol> = new Map([
  ['V', coherent('V', VOLTAGE)],
  ['A', coherent('A', CURRENT)],
  ['Ω', OHM],
  ['\u2126', OHM],
  ['ohm', OHM],
  ['Ohm', OHM],
  ['S', coherent('S', CONDUCTANCE)],
  ['F', coherent('F', CAPACITANCE)],
  ['H', coherent('H', INDUCTANCE)],
  ['W', coherent('W', POWER)],
  ['VA', coherent('VA', POWER)],
  ['J', coherent('J', ENERGY)],
  ['C', coherent('C', CHARGE)],
  ['Wb', coherent('Wb', FLUX)],
  ['s', coherent('s', TIME)],
  ['Hz', coherent('Hz', FREQUENCY)],
  ['K', coherent('K', TEMPERATURE)],
  ['m', coherent('m', LENGTH)],
  ['N', coherent('N', FORCE)],
  ['cd', coherent('cd', LUMINOUS_INTENSITY)],
  ['lx', coherent('lx', ILLUMINANCE)],
  ['rad', coherent('rad', DIMENSIONLESS)],
  ['g', { ...coherent('g', MASS), factor: 1e-3, decimalExponent: -3 }],
  // The electronvolt is exact since 2019 (SI brochure, 9th edition, table 8).
  ['eV', { shown: 'eV', dimension: ENERGY, factor: 1.602176634e-19, prefixed: true }],
  ['Ah', { shown: 'Ah', dimension: CHARGE, factor: 3600, prefixed: true }],
  ['Wh', { shown: 'Wh', dimension: ENERGY, factor: 3600, prefixed: true }],
  ['cm', special('cm', LENGTH, 1e-2, -2)],
  ['min', special('min', TIME, 60)],
  ['h', special('h', TIME, 3600)],
  ['d', special('d', TIME, 86400)],
  ['°C', CELSIUS],
  ['\u2103', CELSIUS],
  ['°', DEGREE],
  ['deg', DEGREE],
  ['%', special('%', DIMENSIONLESS, 1e-2, -2)],
  ['ppm', special('ppm', DIMENSIONLESS, 1e-6, -6)],
  ['dB', { ...special('dB', DIMENSIONLESS, 1), decibel: true }],
]);

interface UnitRead {
  readonly unit: Unit;
  /** Index after the unit's last character. */
  readonly end: number;
}

/** The unit that is the whole of the text, or nothing. An exponent may be written `²` or `^2`; `1/K` is a unit. */
export function parseUnit(text: string): Unit | undefined {
  const trimmed = text.trim();
  if (trimmed === '1') return { text: '', dimension: DIMENSIONLESS, factor: 1, offset: 0, decimalExponent: 0 };
  const read = readUnit(trimmed, 0, 'alone');
  return read?.end === trimmed.length ? read.unit : undefined;
}

/**
 * The longest unit that begins at `start` in an expression, e.g. `mA` or `K/W`. A unit holds no blanks there, `*` and `^`
 * are operators, and a name is never cut: `V/C1.v` reads as `V`.
 */
export function readUnitAt(text: string, start: number): UnitRead | undefined {
  return readUnit(text, start, 'in expression');
}

/** The SI value of a number in a unit. */
export function toSI(value: number, unit: Unit): number {
  if (unit.decibel) return 10 ** (value / 20);
  const scaled =
    unit.decimalExponent === undefined ? value * unit.factor : shiftDecimal(String(value), unit.decimalExponent);
  return unit.offset === 0 ? scaled : scaled + unit.offset;
}

/** The number that a value in SI has in a unit. */
export function fromSI(value: number, unit: Unit): number {
  if (unit.decibel) return 20 * Math.log10(value);
  const shifted = value - unit.offset;
  return unit.decimalExponent === undefined
    ? shifted / unit.factor
    : shiftDecimal(String(shifted), -unit.decimalExponent);
}

/** A decimal number times a power of ten, rounded once. */
function shiftDecimal(text: string, exponent: number): number {
  if (exponent === 0 || !/^[-+\d.]/.test(text)) return Number(text);
  const [mantissa, written = '0'] = text.split(/e/i);
  return Number(`${mantissa}e${Number(written) + exponent}`);
}

type Context = 'alone' | 'in expression';

const LETTERS = /[A-Za-zµμΩ\u2126°\u2103%]+/y;
/** What may not follow a unit's letters: they would be part of a name. */
const NAME_GOES_ON = /[A-Za-z0-9_.]/;
const SUPERSCRIPT = /⁻?[¹²³⁴]/y;
const CARET = /\^(-?[1-4])/y;

function readUnit(text: string, start: number, context: Context): UnitRead | undefined {
  let unit: Unit | undefined;
  let end = start;
  let at = start;
  let sign: 1 | -1 = 1;
  if (text.startsWith('1/', at)) {
    at += 2;
    sign = -1;
  }
  for (;;) {
    const factor = readFactor(text, at, context);
    if (!factor) break;
    unit = unit === undefined && sign === 1 ? factor.unit : product(unit, factor.unit, sign);
    end = factor.end;
    const operator = text[end];
    const isProduct = operator === '·' || operator === '⋅' || (operator === '*' && context === 'alone');
    if (!isProduct && operator !== '/') break;
    sign = isProduct ? 1 : -1;
    at = end + 1;
  }
  return unit && { unit, end };
}

function readFactor(text: string, start: number, context: Context): UnitRead | undefined {
  LETTERS.lastIndex = start;
  const letters = LETTERS.exec(text)?.[0];
  if (letters === undefined) return undefined;
  const single = prefixedSymbol(letters);
  let end = start + letters.length;
  if (!single) return undefined;
  const following = text[end];
  if (following !== undefined && NAME_GOES_ON.test(following)) {
    // A full stop that ends a sentence is no part of a name.
    if (following !== '.' || /[A-Za-z0-9_]/.test(text[end + 1] ?? '')) return undefined;
  }
  SUPERSCRIPT.lastIndex = end;
  CARET.lastIndex = end;
  const raised = SUPERSCRIPT.exec(text) ?? (context === 'alone' ? CARET.exec(text) : null);
  if (!raised) return { unit: single, end };
  end += raised[0].length;
  const digits = raised[1] ?? raised[0].replace(/[⁻¹²³⁴]/g, (c) => '-1234'['⁻¹²³⁴'.indexOf(c)]!);
  return { unit: raise(single, Number(digits), raised[0]), end };
}

function prefixedSymbol(letters: string): Unit | undefined {
  const plain = SYMBOLS.get(letters);
  if (plain) return unitOf(plain, '', 0);
  const exponent = PREFIXES.get(letters[0]!);
  const symbol = SYMBOLS.get(letters.slice(1));
  if (exponent === undefined || !symbol?.prefixed) return undefined;
  return unitOf(symbol, exponent === -6 ? 'µ' : letters[0]!, exponent);
}

function unitOf(symbol: Symbol, prefix: string, exponent: number): Unit {
  const unit: Unit = {
    text: prefix + symbol.shown,
    dimension: symbol.dimension,
    factor: exponent === 0 ? symbol.factor : symbol.factor * Number(`1e${exponent}`),
    offset: symbol.offset ?? 0,
  };
  if (symbol.decibel) return { ...unit, decibel: true };
  if (symbol.decimalExponent === undefined) return unit;
  const decimalExponent = symbol.decimalExponent + exponent;
  return { ...unit, factor: Number(`1e${decimalExponent}`), decimalExponent };
}

function raise(unit: Unit, exponent: number, shown: string): Unit {
  const text = unit.text + shown;
  return {
    text,
    dimension: power(unit.dimension, exponent),
    factor: unit.factor ** exponent,
    offset: 0,
    ...(unit.decimalExponent === undefined ? {} : decimal(unit.decimalExponent * exponent)),
  };
}

/** In a product or quotient a degree Celsius is a difference of temperatures. */
function product(left: Unit | undefined, right: Unit, sign: 1 | -1): Unit {
  const first = left ?? { text: '1', dimension: DIMENSIONLESS, factor: 1, offset: 0, decimalExponent: 0 };
  const both = first.decimalExponent !== undefined && right.decimalExponent !== undefined;
  return {
    text: `${first.text}${sign === 1 ? '·' : '/'}${right.text}`,
    dimension: multiply(first.dimension, power(right.dimension, sign)),
    factor: first.factor * right.factor ** sign,
    offset: 0,
    ...(both ? decimal(first.decimalExponent! + sign * right.decimalExponent!) : {}),
  };
}

function decimal(exponent: number): { factor: number; decimalExponent: number } {
  return { factor: Number(`1e${exponent}`), decimalExponent: exponent };
}
