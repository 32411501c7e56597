/** Scalars: `47 Ω`, `4.7kΩ`, `-20 °C`, `100 nF ±10 %`, `100 µF +50 -20 %`, and letter codes where the unit is fixed. */
import { type Dimension, equal, isDimensionless, nameOf, siUnitText } from './dimensions.ts';
import { type CodedUnit, parseLetterCode } from './letter-codes.ts';
import { suggestUnits } from './unit-hints.ts';
import { parseUnit, readUnitAt, toSI, type Unit } from './units.ts';

/** Relative deviations, `minus` zero or below: +0.05 and -0.05 for ±5 %. */
export interface Tolerance {
  readonly plus: number;
  readonly minus: number;
}

export interface Scalar {
  /** SI. */
  readonly value: number;
  /** As the author wrote it, blanks at the ends removed. */
  readonly text: string;
  /** Missing for a plain number and a letter code. */
  readonly unit?: Unit;
  readonly tolerance?: Tolerance;
}

/** What is due where a scalar stands. */
export interface Due {
  readonly dimension: Dimension;
  /** In words, where the dimension alone says too little: `an angle`. */
  readonly name?: string;
  /** One scalar that is right: `47 Ω`. */
  readonly example: string;
  /** A unit must be written though the dimension is that of a plain number (an angle). */
  readonly unitRequired?: boolean;
  /** Where a letter code may stand: the unit that it leaves out. */
  readonly coded?: CodedUnit;
  readonly tolerance?: boolean;
  /** A difference of temperatures, to be written in K. */
  readonly difference?: boolean;
}

/** What is wrong, in words; the range of characters within the text that was read. */
export interface ScalarFault {
  readonly message: string;
  readonly expected: string;
  readonly start: number;
  readonly end: number;
}

export type ScalarReading =
  | { readonly ok: true; readonly scalar: Scalar }
  | { readonly ok: false; readonly fault: ScalarFault };

/** No scalar is longer, in characters; patterns with several numbers would take long over more. */
const LONGEST_TEXT = 200;

const NUMBER = /[-+−]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][-+−]?\d+)?/y;

/** Reads the whole text as a scalar of what is due. */
export function parseScalar(text: string, due: Due): ScalarReading {
  const start = text.length - text.trimStart().length;
  const end = text.trimEnd().length;
  const fail = (message: string, expected: string, from = start, to = end): ScalarReading => ({
    ok: false,
    fault: { message, expected, start: from, end: Math.max(to, from + 1) },
  });
  const written = text.slice(start, end);
  if (written === '') return fail(`nothing is written where ${dueInWords(due)} is due`, expectation(due));

  if (written.length > LONGEST_TEXT) return fail('this text is too long for one value', expectation(due));

  const toleranceStart = findTolerance(text, start, end);
  const valueEnd = text.slice(0, toleranceStart).trimEnd().length;
  const valueText = text.slice(start, valueEnd);

  const value = readValue(text, start, valueEnd, due);
  if (!value.ok) return value;
  if (toleranceStart === end) return { ok: true, scalar: { ...value.scalar, text: written } };

  if (!due.tolerance)
    return fail(`\`${written}\` states a tolerance, and none is due here`, `\`${valueText}\` alone`, toleranceStart);
  if (value.scalar.tolerance) {
    return fail(`\`${written}\` states its tolerance twice`, `\`${valueText}\` alone`, toleranceStart);
  }
  const tolerance = parseTolerance(text.slice(toleranceStart, end), value.scalar.value, due.dimension);
  if (typeof tolerance === 'string') {
    return fail(tolerance, 'a tolerance such as `±10 %`, `+50 -20 %` or `±0.1 V`', toleranceStart);
  }
  return { ok: true, scalar: { ...value.scalar, text: written, tolerance } };
}

/**
 * The number at `start`, and where it ends; nothing if there is none. A typographic minus is read as a minus.
 */
export function readNumberAt(
  text: string,
  start: number,
): { readonly value: number; readonly end: number } | undefined {
  NUMBER.lastIndex = start;
  const found = NUMBER.exec(text);
  if (!found) return undefined;
  const value = Number(found[0].replaceAll('−', '-'));
  return Number.isFinite(value) ? { value, end: start + found[0].length } : undefined;
}

export interface QuantityRead {
  /** SI. */
  readonly value: number;
  readonly dimension: Dimension;
  /** Missing for a plain number. */
  readonly unit?: Unit;
  readonly end: number;
}

/**
 * The number at `start` in an expression with the unit that follows it, blanks between them allowed: `2.5 mA`. Without a
 * unit it is a plain number.
 */
export function readQuantityAt(text: string, start: number): QuantityRead | undefined {
  const number = readNumberAt(text, start);
  if (!number) return undefined;
  let at = number.end;
  while (text[at] === ' ' || text[at] === '\u00a0' || text[at] === '\t') at++;
  const read = readUnitAt(text, at);
  if (!read) return { value: number.value, dimension: parseUnit('1')!.dimension, end: number.end };
  return { value: toSI(number.value, read.unit), dimension: read.unit.dimension, unit: read.unit, end: read.end };
}

function readValue(text: string, start: number, end: number, due: Due): ScalarReading {
  const written = text.slice(start, end);
  const fail = (message: string, expected = expectation(due), from = start, to = end): ScalarReading => ({
    ok: false,
    fault: { message, expected, start: from, end: Math.max(to, from + 1) },
  });

  const coded = due.coded && readCode(written, due.coded);
  if (coded === 'ambiguous') {
    const plain = written.slice(0, -1);
    return fail(
      `\`${written}\` can be read in two ways: its last letter is a unit and a tolerance of IEC 60062`,
      `\`${plain}\` without the letter, and a tolerance in percent where one is meant`,
    );
  }
  if (coded) return { ok: true, scalar: { ...coded, text: written } };

  const number = readNumberAt(text.slice(0, end), start);
  if (!number) return fail(`\`${written}\` does not begin with a number`);
  const rest = text.slice(number.end, end);
  const unitText = rest.trim();
  const unitStart = end - rest.trimStart().length;

  if (/^\s*,\s*\d/.test(rest)) {
    const corrected = written.replace(',', '.');
    return fail(`\`${written}\` has a decimal comma`, `a decimal point: \`${corrected}\``);
  }
  if (unitText === '') {
    if (isDimensionless(due.dimension) && !due.unitRequired) {
      return { ok: true, scalar: { value: number.value, text: written } };
    }
    return fail(`\`${written}\` has no unit: ${dueInWords(due)} is due`);
  }
  const unit = parseUnit(unitText);
  if (!unit) return fail(...unknownUnit(unitText, number.value, written, due), unitStart, end);
  if (!equal(unit.dimension, due.dimension)) {
    const found = unit.decibel ? 'a ratio in decibel' : nameOf(unit.dimension);
    const hint = hintsForCase(unitText, written, unitStart - start, due);
    return fail(`${dueInWords(due)} is due, \`${written}\` is ${found}`, hint ?? expectation(due));
  }
  if (due.difference && unit.offset !== 0) {
    return fail(
      `\`${written}\` is a temperature, a difference of temperatures is due`,
      `kelvin, e.g. \`${due.example}\``,
    );
  }
  const value = toSI(number.value, unit);
  if (!Number.isFinite(value)) return fail(`\`${written}\` is too large a number`);
  return { ok: true, scalar: { value, text: written, unit } };
}

function readCode(written: string, unit: CodedUnit): Omit<Scalar, 'text'> | 'ambiguous' | undefined {
  // The unit may follow a code, `4k7 Ω`, unless the whole is a number with a prefixed unit, `4.7 kΩ`.
  const withoutUnit = unit === 'Ω' ? written.replace(/\s*(?:Ω|\u2126|[Oo]hm)$/, '') : written.replace(/\s+[FH]$/, '');
  const code = parseLetterCode(withoutUnit, unit);
  if (!code) return undefined;
  if (code.reading === 'ambiguous') {
    // `4n7F` may mean 1 %; `100nF` and `100 nF` are a number and a unit.
    return /^\d+[A-Za-zµμ][A-Z]$/.test(withoutUnit) ? undefined : 'ambiguous';
  }
  return code.tolerance ? { value: code.value, tolerance: code.tolerance } : { value: code.value };
}

function unknownUnit(unitText: string, value: number, written: string, due: Due): [message: string, expected: string] {
  const suggested = suggestUnits(unitText, due.dimension);
  const number = written.slice(0, written.length - unitText.length).trim();
  if (suggested.length > 0) {
    const choices = suggested.map((unit) => `\`${number} ${unit}\``).join(' or ');
    return [`\`${unitText}\` is not a unit: prefixes and symbols are case-sensitive`, choices];
  }
  if (unitText === 'k' || unitText === 'K') {
    const unit = siUnitText(due.dimension);
    return [`\`${unitText}\` alone is not a unit here`, unit ? `\`${number} k${unit}\`` : `\`${value * 1000}\``];
  }
  if (/^\d/.test(unitText)) return [`\`${written}\` is two numbers with a blank between them`, expectation(due)];
  return [`\`${unitText}\` is not a unit that is known here: ${dueInWords(due)} is due`, expectation(due)];
}

/** `5 K` where a resistance is due means 5 kΩ; `1 mf` is a unit of nothing, but `2 S` may mean seconds. */
function hintsForCase(unitText: string, written: string, offset: number, due: Due): string | undefined {
  const number = written.slice(0, offset).trim();
  if (unitText === 'K' && due.coded === 'Ω') return `\`${number} kΩ\``;
  if (unitText === 'm' && due.coded) return `\`${number} m${due.coded}\``;
  const suggested = suggestUnits(unitText, due.dimension);
  return suggested.length > 0 ? suggested.map((unit) => `\`${number} ${unit}\``).join(' or ') : undefined;
}

/** Where a tolerance begins; the end of the text if there is none. */
function findTolerance(text: string, start: number, end: number): number {
  for (let at = start + 1; at < end; at++) {
    const character = text[at]!;
    if (character === '±') return at;
    const isSign = character === '+' || character === '-' || character === '−';
    // A sign right after `e` belongs to an exponent.
    if (isSign && !/[eE]/.test(text[at - 1]!)) return at;
    if (isSign && /[A-Za-z]/.test(text[at - 2] ?? '')) return at;
  }
  return end;
}

const SYMMETRIC = /^(?:±|\+\/[-−]|\+[-−])\s*(\d+(?:\.\d*)?|\.\d+)\s*(\S.*)?$/;
const TWO_SIDED = /^([-+−])\s*(\d+(?:\.\d*)?|\.\d+)\s*([^-+−/\s]*)\s*\/?\s*([-+−])\s*(\d+(?:\.\d*)?|\.\d+)\s*(\S.*)?$/;

/** Relative deviations, or what is wrong in words. */
function parseTolerance(text: string, value: number, dimension: Dimension): Tolerance | string {
  const symmetric = SYMMETRIC.exec(text);
  if (symmetric) {
    const deviation = relative(Number(symmetric[1]), symmetric[2], value, dimension, text);
    return typeof deviation === 'string' ? deviation : { plus: deviation, minus: -deviation };
  }
  const sided = TWO_SIDED.exec(text);
  if (!sided) return `\`${text}\` is not a tolerance`;
  const [, firstSign, firstNumber, firstUnit, secondSign, secondNumber, secondUnit] = sided;
  const bothSides = (firstSign === '+') !== (secondSign === '+');
  if (!bothSides) return `\`${text}\` states one side twice`;
  const first = relative(Number(firstNumber), firstUnit || secondUnit, value, dimension, text);
  const second = relative(Number(secondNumber), secondUnit, value, dimension, text);
  if (typeof first === 'string') return first;
  if (typeof second === 'string') return second;
  return firstSign === '+' ? { plus: first, minus: 0 - second } : { plus: second, minus: 0 - first };
}

function relative(
  deviation: number,
  unitText: string | undefined,
  value: number,
  dimension: Dimension,
  whole: string,
): number | string {
  if (unitText === undefined || unitText === '') return `\`${whole}\` has no unit`;
  const unit = parseUnit(unitText);
  if (!unit || unit.decibel) return `\`${unitText}\` is not a unit that a tolerance can have`;
  if (isDimensionless(unit.dimension)) return toSI(deviation, unit);
  if (!equal(unit.dimension, dimension))
    return `\`${whole}\` is ${nameOf(unit.dimension)}, the value is ${nameOf(dimension)}`;
  if (value === 0) return `a tolerance of zero can only be absolute, and \`${whole}\` has nothing to be relative to`;
  return Math.abs((deviation * unit.factor) / value);
}

function dueInWords(due: Due): string {
  const name = due.name ?? nameOf(due.dimension);
  const unit = siUnitText(due.dimension);
  return unit === '' || due.name !== undefined ? name : `${name} (${unit})`;
}

function expectation(due: Due): string {
  return `${dueInWords(due)}, e.g. \`${due.example}\``;
}

/** A number and a unit of whatever dimension, as in the ratings of a part. */
export function parseAnyScalar(text: string): { value: number; dimension: Dimension; text: string } | undefined {
  const written = text.trim();
  const number = readNumberAt(written, 0);
  if (!number) return undefined;
  const rest = written.slice(number.end).trim();
  const unit = parseUnit(rest === '' ? '1' : rest);
  return unit && { value: toSI(number.value, unit), dimension: unit.dimension, text: written };
}
