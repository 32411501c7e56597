/** The keys of a diode's model, by its law. */
import * as dues from '../dues.ts';
import type { Field } from '../fields.ts';
import type { Due } from '../scalar.ts';

type More = Partial<Pick<Field, 'required' | 'default'>>;
const quantity = (key: string, doc: string, due: Due, range?: 'positive' | 'zero or more', more: More = {}): Field => ({
  key,
  doc,
  takes: { form: 'quantity', due, ...(range ? { range } : {}) },
  ...more,
});
export const LAW: Field = {
  key: 'law',
  doc: 'the form of the law',
  takes: { form: 'choice', choices: ['exponential', 'threshold'] },
  required: true,
};
const AT = quantity('at', 'the temperature at which the law holds', dues.TEMPERATURE, 'positive', { default: '25 °C' });
const TEMPERATURE: Field = {
  key: 'temperature',
  doc: 'how it moves with temperature',
  takes: { form: 'structure', words: '`{ forward_voltage: -2 mV/K }`' },
};

export const EXPONENTIAL_FIELDS: readonly Field[] = [
  LAW,
  quantity(
    'saturation_current',
    'the reverse current of the ideal law',
    { ...dues.CURRENT, example: '1 fA' },
    'positive',
    {
      required: true,
    },
  ),
  quantity('ideality', 'multiple of kT/q in the exponent; default 1', dues.NUMBER, 'positive'),
  quantity(
    'slope_voltage',
    'ideality times kT/q, fixed; in place of `ideality`',
    { ...dues.VOLTAGE, example: '45 mV' },
    'positive',
  ),
  quantity('series_resistance', 'in series with the junction', dues.RESISTANCE, 'zero or more', { default: '0 Ω' }),
  AT,
  quantity('energy_gap', 'of the semiconductor; default 1.12 eV', dues.ENERGY, 'positive'),
  TEMPERATURE,
  quantity('breakdown_voltage', 'the reverse voltage at `breakdown_current`', dues.VOLTAGE, 'positive'),
  quantity('breakdown_current', 'default 5 mA for a Zener diode, 100 µA for others', dues.CURRENT, 'positive'),
  quantity('breakdown_resistance', 'added to the slope of the reverse law', dues.RESISTANCE, 'zero or more', {
    default: '0 Ω',
  }),
  quantity(
    'breakdown_slope_voltage',
    'the exponential slope of the reverse law',
    { ...dues.VOLTAGE, example: '25.7 mV' },
    'positive',
    {
      default: '25.7 mV',
    },
  ),
  {
    key: 'points',
    doc: 'points of the data sheet',
    takes: { form: 'structure', words: 'pairs of current and voltage' },
  },
];

export const THRESHOLD_FIELDS: readonly Field[] = [
  LAW,
  quantity(
    'forward_voltage',
    'the voltage above which it conducts',
    { ...dues.VOLTAGE, example: '2.1 V' },
    'zero or more',
    {
      required: true,
    },
  ),
  quantity('on_resistance', 'the slope above the threshold; 0 Ω is exact', dues.RESISTANCE, 'zero or more', {
    default: '0 Ω',
  }),
  AT,
  TEMPERATURE,
  quantity('breakdown_voltage', 'the reverse voltage beyond which it conducts', dues.VOLTAGE, 'positive'),
  quantity('breakdown_resistance', 'the slope beyond breakdown', dues.RESISTANCE, 'zero or more', { default: '0 Ω' }),
];

export const TEMPERATURE_FIELDS: readonly Field[] = [
  quantity('forward_voltage', 'change of the forward voltage per kelvin', dues.VOLTAGE_PER_KELVIN),
  quantity('breakdown_voltage', 'change of the breakdown voltage per kelvin', dues.VOLTAGE_PER_KELVIN),
];
