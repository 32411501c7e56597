/** What is due where a quantity stands, by the name of the quantity. */
import * as dimensions from './dimensions.ts';
import type { Due } from './scalar.ts';

export const VOLTAGE: Due = { dimension: dimensions.VOLTAGE, example: '5 V' };
export const CURRENT: Due = { dimension: dimensions.CURRENT, example: '10 mA' };
export const RESISTANCE: Due = { dimension: dimensions.RESISTANCE, example: '2 Ω', coded: 'Ω' };
export const CAPACITANCE: Due = { dimension: dimensions.CAPACITANCE, example: '100 nF', coded: 'F' };
export const INDUCTANCE: Due = { dimension: dimensions.INDUCTANCE, example: '10 µH', coded: 'H' };
export const TIME: Due = { dimension: dimensions.TIME, example: '20 ms' };
export const FREQUENCY: Due = { dimension: dimensions.FREQUENCY, example: '50 Hz' };
export const TEMPERATURE: Due = { dimension: dimensions.TEMPERATURE, example: '25 °C' };
export const ENERGY: Due = { dimension: dimensions.ENERGY, example: '1.12 eV' };
export const ANGLE: Due = {
  dimension: dimensions.DIMENSIONLESS,
  name: 'an angle',
  example: '90°',
  unitRequired: true,
};
export const NUMBER: Due = { dimension: dimensions.DIMENSIONLESS, example: '1.8' };
export const FRACTION: Due = { dimension: dimensions.DIMENSIONLESS, name: 'a fraction', example: '1 %' };
export const ACCURACY: Due = { dimension: dimensions.DIMENSIONLESS, name: 'a relative accuracy', example: '1e-4' };
export const VOLTAGE_PER_KELVIN: Due = {
  dimension: dimensions.divide(dimensions.VOLTAGE, dimensions.TEMPERATURE),
  example: '-2 mV/K',
};
export const PER_KELVIN: Due = { dimension: dimensions.power(dimensions.TEMPERATURE, -1), example: '100 ppm/K' };
