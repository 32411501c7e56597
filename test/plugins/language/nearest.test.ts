import { describe, expect, test } from 'vitest';
import { expectedName, list, nearest } from '../../../plugins/language/nearest.ts';

describe('the nearest name', () => {
  const kinds = ['resistor', 'capacitor', 'inductor', 'source', 'current-source', 'switch', 'diode', 'led'];

  test.each([
    ['resitor', 'resistor'],
    ['ressitor', 'resistor'],
    // Two letters that changed places count once.
    ['didoe', 'diode'],
    ['Resistor', 'resistor'],
    ['soruce', 'source'],
    ['lde', 'led'],
  ])('to %s is %s', (text, name) => {
    expect(nearest(text, kinds)).toBe(name);
  });

  test.each(['transformer', 'x', '', 'lamp', 'opamp'])('to %s is none', (text) => {
    expect(nearest(text, kinds)).toBeUndefined();
  });

  test('of one letter differs by its case alone', () => {
    expect(nearest('A', ['b', 'a'])).toBe('a');
    expect(nearest('c', ['b', 'a'])).toBeUndefined();
  });

  test('what is equal is nearer than what differs by case', () => {
    expect(nearest('Lamp', ['lamp', 'Lamp'])).toBe('Lamp');
  });
});

test('lists', () => {
  expect(list([])).toBe('');
  expect(list(['a'])).toBe('`a`');
  expect(list(['a', 'b', 'c'], 'or')).toBe('`a`, `b` or `c`');
  expect(expectedName('x1', ['R1', 'C1'])).toBe('one of `R1` or `C1`');
});
