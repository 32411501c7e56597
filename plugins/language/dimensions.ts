/** Physical dimension as exponents of the SI base units that occur here. Angles are plain numbers, in radian. */
export interface Dimension {
  readonly metre: number;
  readonly kilogram: number;
  readonly second: number;
  readonly ampere: number;
  readonly kelvin: number;
  readonly candela: number;
}

const BASE_UNITS = [
  ['kilogram', 'kg'],
  ['metre', 'm'],
  ['second', 's'],
  ['ampere', 'A'],
  ['kelvin', 'K'],
  ['candela', 'cd'],
] as const;

function dimension(exponents: Partial<Dimension>): Dimension {
  return { metre: 0, kilogram: 0, second: 0, ampere: 0, kelvin: 0, candela: 0, ...exponents };
}

export const DIMENSIONLESS = dimension({});
export const LENGTH = dimension({ metre: 1 });
export const MASS = dimension({ kilogram: 1 });
export const TIME = dimension({ second: 1 });
export const CURRENT = dimension({ ampere: 1 });
export const TEMPERATURE = dimension({ kelvin: 1 });
export const LUMINOUS_INTENSITY = dimension({ candela: 1 });
export const FREQUENCY = power(TIME, -1);
export const FORCE = dimension({ kilogram: 1, metre: 1, second: -2 });
export const ENERGY = multiply(FORCE, LENGTH);
export const POWER = divide(ENERGY, TIME);
export const VOLTAGE = divide(POWER, CURRENT);
export const RESISTANCE = divide(VOLTAGE, CURRENT);
export const CONDUCTANCE = power(RESISTANCE, -1);
export const CHARGE = multiply(CURRENT, TIME);
export const CAPACITANCE = divide(CHARGE, VOLTAGE);
export const FLUX = multiply(VOLTAGE, TIME);
export const INDUCTANCE = divide(FLUX, CURRENT);
export const ILLUMINANCE = divide(LUMINOUS_INTENSITY, power(LENGTH, 2));

/** Dimension of a product. */
export function multiply(left: Dimension, right: Dimension): Dimension {
  return combine(left, right, 1);
}

/** Dimension of a quotient. */
export function divide(left: Dimension, right: Dimension): Dimension {
  return combine(left, right, -1);
}

function combine(left: Dimension, right: Dimension, sign: 1 | -1): Dimension {
  return {
    metre: left.metre + sign * right.metre,
    kilogram: left.kilogram + sign * right.kilogram,
    second: left.second + sign * right.second,
    ampere: left.ampere + sign * right.ampere,
    kelvin: left.kelvin + sign * right.kelvin,
    candela: left.candela + sign * right.candela,
  };
}

/** Dimension of a power; the exponent may be a fraction (a root). */
export function power(base: Dimension, exponent: number): Dimension {
  // Adding zero turns -0 into 0, so that equal dimensions are also deeply equal.
  const times = (value: number) => value * exponent + 0;
  return {
    metre: times(base.metre),
    kilogram: times(base.kilogram),
    second: times(base.second),
    ampere: times(base.ampere),
    kelvin: times(base.kelvin),
    candela: times(base.candela),
  };
}

/** Whether two dimensions are the same. */
export function equal(left: Dimension, right: Dimension): boolean {
  return BASE_UNITS.every(([base]) => Math.abs(left[base] - right[base]) < 1e-9);
}

export function isDimensionless(value: Dimension): boolean {
  return equal(value, DIMENSIONLESS);
}

interface NamedDimension {
  readonly dimension: Dimension;
  /** With its article, as a sentence needs it. */
  readonly name: string;
  readonly unit: string;
}

const NAMED: readonly NamedDimension[] = [
  { dimension: DIMENSIONLESS, name: 'a plain number', unit: '' },
  { dimension: VOLTAGE, name: 'a voltage', unit: 'V' },
  { dimension: CURRENT, name: 'a current', unit: 'A' },
  { dimension: RESISTANCE, name: 'a resistance', unit: 'Ω' },
  { dimension: CONDUCTANCE, name: 'a conductance', unit: 'S' },
  { dimension: CAPACITANCE, name: 'a capacitance', unit: 'F' },
  { dimension: INDUCTANCE, name: 'an inductance', unit: 'H' },
  { dimension: POWER, name: 'a power', unit: 'W' },
  { dimension: ENERGY, name: 'an energy', unit: 'J' },
  { dimension: CHARGE, name: 'a charge', unit: 'C' },
  { dimension: FLUX, name: 'a magnetic flux', unit: 'Wb' },
  { dimension: TIME, name: 'a time', unit: 's' },
  { dimension: FREQUENCY, name: 'a frequency', unit: 'Hz' },
  { dimension: TEMPERATURE, name: 'a temperature', unit: 'K' },
  { dimension: LUMINOUS_INTENSITY, name: 'a luminous intensity', unit: 'cd' },
  { dimension: ILLUMINANCE, name: 'an illuminance', unit: 'lx' },
  { dimension: FORCE, name: 'a force', unit: 'N' },
  { dimension: LENGTH, name: 'a length', unit: 'm' },
  { dimension: MASS, name: 'a mass', unit: 'kg' },
  { dimension: divide(TEMPERATURE, POWER), name: 'a thermal resistance', unit: 'K/W' },
  { dimension: divide(VOLTAGE, TIME), name: 'a rate of change of voltage', unit: 'V/s' },
  { dimension: divide(CURRENT, TIME), name: 'a rate of change of current', unit: 'A/s' },
  { dimension: divide(VOLTAGE, TEMPERATURE), name: 'a voltage per temperature', unit: 'V/K' },
  { dimension: power(TEMPERATURE, -1), name: 'a relative change per temperature', unit: '1/K' },
];

/** Units that a derived unit's text is composed from, in the order of preference of electrical work. */
const BUILDING_UNITS = ['V', 'A', 'Ω', 'W', 's', 'K', 'Hz', 'C', 'F', 'H', 'J', 'm', 'cd', 'N'];

/** The dimension in words, with its article: `a voltage`; by its unit where it has no name. */
export function nameOf(value: Dimension): string {
  const named = NAMED.find((entry) => equal(entry.dimension, value));
  return named?.name ?? `a quantity in ${siUnitText(value)}`;
}

/** The coherent SI unit of a dimension, e.g. `V`, `K/W`, `V²`; empty for a plain number. */
export function siUnitText(value: Dimension): string {
  const named = NAMED.find((entry) => equal(entry.dimension, value));
  return named?.unit ?? compose(value) ?? inBaseUnits(value);
}

/** As a product or quotient of two units of everyday use, or a power of one. */
function compose(value: Dimension): string | undefined {
  const units = BUILDING_UNITS.map((unit) => NAMED.find((entry) => entry.unit === unit)!);
  for (const exponent of [2, 0.5, 3, -2]) {
    const found = units.find((unit) => equal(power(unit.dimension, exponent), value));
    if (found) return exponent < 0 ? `1/${found.unit}${superscript(-exponent)}` : found.unit + superscript(exponent);
  }
  for (const first of units) {
    for (const second of units) {
      if (first === second) continue;
      if (equal(divide(first.dimension, second.dimension), value)) return `${first.unit}/${second.unit}`;
      if (equal(multiply(first.dimension, second.dimension), value)) return `${first.unit}·${second.unit}`;
    }
  }
  for (const first of units) {
    for (const second of units) {
      if (first === second) continue;
      const rest = divide(value, first.dimension);
      if (equal(power(second.dimension, 2), rest)) return `${first.unit}·${second.unit}²`;
      if (equal(power(second.dimension, -2), rest)) return `${first.unit}/${second.unit}²`;
    }
  }
  return undefined;
}

function inBaseUnits(value: Dimension): string {
  const factors = BASE_UNITS.filter(([base]) => Math.abs(value[base]) > 1e-9).map(
    ([base, symbol]) => symbol + superscript(value[base]),
  );
  return factors.join('·');
}

/** An exponent as superscript digits; nothing for 1. Fractions are written `^0.5`. */
function superscript(exponent: number): string {
  if (exponent === 1) return '';
  if (!Number.isInteger(exponent)) return `^${exponent}`;
  return String(exponent).replace(/[-0-9]/g, (character) => '⁻⁰¹²³⁴⁵⁶⁷⁸⁹'['-0123456789'.indexOf(character)]!);
}
