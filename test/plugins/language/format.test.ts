import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { CURRENT, POWER, power, RESISTANCE, TEMPERATURE, TIME, VOLTAGE } from '../../../plugins/language/dimensions.ts';
import { fittingUnit, formatNumber, formatQuantity } from '../../../plugins/language/format.ts';
import { parseScalar } from '../../../plugins/language/scalar.ts';
import { parseUnit } from '../../../plugins/language/units.ts';

describe('numbers', () => {
  // Rounding to significant digits, by hand.
  test.each([
    [2, 3, '2.00'],
    [1234, 3, '1230'],
    [0.0123456, 3, '0.0123'],
    [999.6, 3, '1000'],
    [-0.5, 2, '-0.50'],
    [0, 3, '0'],
    [1.5e12, 2, '1.5·10¹²'],
    [2e-9, 2, '2.0·10⁻⁹'],
    [Number.NaN, 3, '–'],
    [Number.POSITIVE_INFINITY, 3, '∞'],
  ])('%d to %d digits', (value, digits, text) => {
    expect(formatNumber(value, digits)).toBe(text);
  });
});

describe('quantities', () => {
  test.each([
    [0.0025, CURRENT, '2.50 mA'],
    [12.3e-6, CURRENT, '12.3 µA'],
    [0.99996, CURRENT, '1.00 A'],
    [4700, RESISTANCE, '4.70 kΩ'],
    [-0.002, VOLTAGE, '-2.00 mV'],
    [1234, TIME, '1230 s'],
    [0.02, TIME, '20.0 ms'],
    [4, power(VOLTAGE, 2), '4.00 V²'],
    [0, POWER, '0 W'],
  ])('%d', (value, dimension, text) => {
    expect(formatQuantity(value, dimension)).toBe(text);
  });

  test('a stated unit is kept', () => {
    expect(formatQuantity(298.15, TEMPERATURE, 4, parseUnit('°C'))).toBe('25.00 °C');
    expect(formatQuantity(22, RESISTANCE, 2, parseUnit('kΩ'))).toBe('0.022 kΩ');
  });

  test('what is shown to 17 digits is read back as the same number', () => {
    const values = fc.double({ min: 1e-14, max: 1e13, noNaN: true });
    fc.assert(
      fc.property(values, fc.constantFrom(CURRENT, VOLTAGE, RESISTANCE), (value, dimension) => {
        const text = formatQuantity(value, dimension, 17);
        const read = parseScalar(text, { dimension, example: '1 V' });
        expect(read.ok, text).toBe(true);
        if (read.ok) expect(Math.abs(read.scalar.value / value - 1)).toBeLessThan(1e-15);
      }),
    );
  });

  test('the fitting prefix leaves one to a thousand before the point', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-14, max: 1e14, noNaN: true }), (value) => {
        const shown = Number(value.toPrecision(3)) / fittingUnit(CURRENT, value).factor;
        expect(shown).toBeGreaterThanOrEqual(1 - 1e-12);
        expect(shown).toBeLessThan(1000);
      }),
    );
  });
});
