/**
 * The functions of expressions: the one table that the checker, the evaluator and the documentation read. A waveform is
 * a quantity over the axis of its analysis: time, or the swept value of a characteristic.
 */
import { map } from '../../solver/waveform/arithmetic.ts';
import { derivative, slope } from '../../solver/waveform/derivative.ts';
import { greatest, least, peak, span } from '../../solver/waveform/extremes.ts';
import { distortion, harmonic } from '../../solver/waveform/harmonics.ts';
import { integral, mean, rms } from '../../solver/waveform/integrals.ts';
import { first, type IntervalSet, last, share, when } from '../../solver/waveform/interval-set.ts';
import { absolute, negativePart, positivePart } from '../../solver/waveform/parts.ts';
import { overshoot, riseTime, settlingTime } from '../../solver/waveform/transients.ts';
import { valueAt } from '../../solver/waveform/value-at.ts';
import type { NoValue, Waveform } from '../../solver/waveform/waveform.ts';
import { DIMENSIONLESS, type Dimension, divide, multiply, power } from '../language/dimensions.ts';
import { formatQuantity } from '../language/format.ts';

export type Value = number | Waveform | IntervalSet | boolean;

export interface Parameter {
  readonly name: string;
  /** `either`: a number or a waveform; the function is taken of every value. */
  readonly kind: 'waveform' | 'condition' | 'number' | 'either';
  /** `axis`: that of the first argument's axis. Default: any. */
  readonly dimension?: 'axis' | 'plain';
  readonly optional?: true;
}

export interface FunctionEntry {
  readonly name: string;
  readonly parameters: readonly Parameter[];
  /** Two or more plain numbers of one dimension are taken instead of a waveform. */
  readonly ofNumbers?: (values: readonly number[]) => number;
  /** The axis must be time. */
  readonly ofTime?: true;
  /** `like x`: as the first argument. */
  readonly result: 'number' | 'like x';
  /** Dimension of the result, from those of the first argument and its axis. */
  readonly dimension: (x: Dimension, axis: Dimension) => Dimension;
  /** A waveform with undefined stretches is taken as it is. */
  readonly takesGaps?: true;
  readonly doc: string;
  readonly example: string;
  /** Values in the order of the parameters; `axis` is the dimension of the first argument's axis, for messages. */
  readonly evaluate: (values: readonly Value[], axis: Dimension) => Value | NoValue;
}

const same = (x: Dimension): Dimension => x;
const plain = (): Dimension => DIMENSIONLESS;
const ofAxis = (_: Dimension, axis: Dimension): Dimension => axis;

const X: Parameter = { name: 'x', kind: 'waveform' };
const CONDITION: Parameter = { name: 'condition', kind: 'condition' };
const EITHER: Parameter = { name: 'x', kind: 'either' };
const PERIOD: Parameter = { name: 'period', kind: 'number', dimension: 'axis', optional: true };

/** A functional: one number from a waveform. */
function functional(
  name: string,
  doc: string,
  example: string,
  of: (x: Waveform) => number | NoValue,
  dimension: FunctionEntry['dimension'] = same,
): FunctionEntry {
  return { name, parameters: [X], result: 'number', dimension, doc, example, evaluate: ([x]) => of(x as Waveform) };
}

function ofCondition(
  name: string,
  doc: string,
  example: string,
  of: (set: IntervalSet) => number | NoValue,
  dimension: FunctionEntry['dimension'] = ofAxis,
): FunctionEntry {
  const evaluate: FunctionEntry['evaluate'] = ([set]) => of(set as IntervalSet);
  return { name, parameters: [CONDITION], result: 'number', dimension, doc, example, evaluate };
}

/** Of every value: a number gives a number, a waveform a waveform. */
function ofEither(
  name: string,
  doc: string,
  example: string,
  ofNumber: (x: number) => number | NoValue,
  ofWaveform: (x: Waveform) => Waveform,
  dimension: FunctionEntry['dimension'] = same,
  due?: 'plain',
): FunctionEntry {
  return {
    name,
    parameters: [due ? { ...EITHER, dimension: due } : EITHER],
    result: 'like x',
    dimension,
    takesGaps: true,
    doc,
    example,
    evaluate: ([x]) => (typeof x === 'number' ? ofNumber(x) : ofWaveform(x as Waveform)),
  };
}

const below = (x: number, what: string): NoValue | undefined =>
  x < 0 ? { none: `the ${what} of a negative number` } : undefined;
const logarithm = (name: string, doc: string, of: (x: number) => number): FunctionEntry =>
  ofEither(
    name,
    doc,
    `${name}(R1.value / 1 kΩ)`,
    (x) => (x > 0 ? of(x) : { none: 'the logarithm of a number that is not above zero' }),
    (x) => map(x, (value) => (value > 0 ? of(value) : Number.NaN)),
    plain,
    'plain',
  );

export const FUNCTIONS: readonly FunctionEntry[] = [
  functional('mean', 'Average over the axis.', 'mean(D1.i)', mean),
  functional('rms', 'Root of the mean square over the axis.', 'rms(C1.i)', rms),
  {
    ...functional('max', 'Greatest value; or the greatest of several numbers.', 'max(D1.v)', greatest),
    ofNumbers: (values) => Math.max(...values),
  },
  {
    ...functional('min', 'Least value; or the least of several numbers.', 'min(D1.v)', least),
    ofNumbers: (values) => Math.min(...values),
  },
  functional('peak', 'Greatest magnitude.', 'peak(C1.i)', peak),
  functional('span', 'Greatest less least value.', 'span(C1.v)', span),
  functional('integral', 'Integral over the axis.', 'integral(positive(D1.i))', integral, multiply),
  {
    name: 'at',
    parameters: [X, { name: 't', kind: 'number', dimension: 'axis' }],
    result: 'number',
    dimension: same,
    takesGaps: true,
    doc: 'The value at one time, or at one swept value; at a jump, the value after it.',
    example: 'at(C1.v, 5 ms)',
    evaluate: ([x, t], axis) => valueWithin(x as Waveform, t as number, axis, valueAt),
  },
  ofCondition('when', 'Total time for which the condition holds.', 'when(D1.i > 1 mA)', when),
  ofCondition('share', 'The fraction of the axis on which the condition holds.', 'share(D1.i > 1 mA)', share, plain),
  ofCondition('first', 'The first instant at which the condition holds.', 'first(C1.v > 5 V)', first),
  ofCondition('last', 'The last instant at which the condition holds.', 'last(D1.i > 1 mA)', last),
  ofEither(
    'positive',
    'The positive part: the value where it is above zero, else zero.',
    'integral(positive(D1.i))',
    (x) => Math.max(x, 0),
    positivePart,
  ),
  ofEither(
    'negative',
    'The negative part, a value of zero or below: the value where it is below zero, else zero.',
    'mean(negative(G1.p))',
    (x) => Math.min(x, 0),
    negativePart,
  ),
  ofEither('abs', 'The magnitude.', 'mean(abs(C1.i))', Math.abs, absolute),
  {
    name: 'derivative',
    parameters: [X],
    result: 'like x',
    dimension: divide,
    takesGaps: true,
    doc: 'The rate of change along the axis, as a curve; jumps are left out.',
    example: 'max(derivative(C1.v))',
    evaluate: ([x]) => derivative(x as Waveform),
  },
  {
    name: 'slope',
    parameters: [X, { name: 't', kind: 'number', dimension: 'axis', optional: true }],
    result: 'number',
    dimension: divide,
    doc: 'The rate of change of greatest magnitude, with its sign; or the rate at one time.',
    example: 'slope(C1.v)',
    evaluate: ([x, t], axis) =>
      t === undefined ? slope(x as Waveform) : valueWithin(x as Waveform, t as number, axis, (of, at) => slope(of, at)),
  },
  {
    name: 'harmonic',
    parameters: [X, { name: 'n', kind: 'number', dimension: 'plain' }, PERIOD],
    ofTime: true,
    result: 'number',
    dimension: same,
    doc: 'Amplitude (peak value) of the n-th harmonic; the period is all that is kept, or the last one of a stated length.',
    example: 'harmonic(C1.i, 3, 20 ms)',
    evaluate: ([x, n, period]) =>
      Number.isInteger(n) && (n as number) >= 0
        ? harmonic(x as Waveform, n as number, period as number | undefined)
        : { none: 'the number of a harmonic is a whole number from 0' },
  },
  {
    name: 'distortion',
    parameters: [X, PERIOD],
    ofTime: true,
    result: 'number',
    dimension: plain,
    doc: 'Total harmonic distortion: the RMS of all harmonics above the first, relative to the first.',
    example: 'distortion(G1.i, 20 ms)',
    evaluate: ([x, period]) => distortion(x as Waveform, period as number | undefined),
  },
  {
    ...functional(
      'rise_time',
      'Time from 10 % to 90 % of the step from first to last value.',
      'rise_time(C1.v)',
      riseTime,
      ofAxis,
    ),
    ofTime: true,
  },
  {
    name: 'settling_time',
    parameters: [X, { name: 'band', kind: 'number', dimension: 'plain', optional: true }],
    ofTime: true,
    result: 'number',
    dimension: ofAxis,
    doc: 'Time after which the value stays within a band about the last one: 2 % of the step from first to last, or as stated.',
    example: 'settling_time(C1.v, 5 %)',
    evaluate: ([x, band]) => settlingTime(x as Waveform, band as number | undefined),
  },
  {
    ...functional(
      'overshoot',
      'How far the value goes beyond the last one, relative to the step.',
      'overshoot(C1.v)',
      overshoot,
      plain,
    ),
    ofTime: true,
  },
  ofEither(
    'sqrt',
    'Square root.',
    'sqrt(L1.value / C1.value)',
    (x) => below(x, 'square root') ?? Math.sqrt(x),
    (x) => map(x, Math.sqrt),
    (x) => power(x, 0.5),
  ),
  logarithm('log10', 'Logarithm to base 10 of a plain number.', Math.log10),
  logarithm('ln', 'Natural logarithm of a plain number.', Math.log),
  ofEither(
    'exp',
    'Exponential of a plain number.',
    'exp(-time / 1 ms)',
    Math.exp,
    (x) => map(x, Math.exp),
    plain,
    'plain',
  ),
];

/** Names that authors use for a function of the table. */
export const ALIASES: { readonly [name: string]: string } = {
  avg: 'mean',
  average: 'mean',
  maximum: 'max',
  minimum: 'min',
  pp: 'span',
  peak_to_peak: 'span',
  p2p: 'span',
  integrate: 'integral',
  magnitude: 'abs',
  duration: 'when',
  duty: 'share',
  duty_cycle: 'share',
  log: 'ln',
  thd: 'distortion',
  ddt: 'derivative',
  dt: 'derivative',
  risetime: 'rise_time',
  root: 'sqrt',
};

/** Functions of a frequency response, which is not solved yet. */
export const RESPONSE_FUNCTIONS = ['gain', 'gain_db', 'phase', 'corner', 'peak_frequency'];

export function functionNamed(name: string): FunctionEntry | undefined {
  return FUNCTIONS.find((entry) => entry.name === name);
}

/** How it is called: `settling_time(x, [band])`. */
export function signature({ name, parameters }: FunctionEntry): string {
  return `${name}(${parameters.map((parameter) => (parameter.optional ? `[${parameter.name}]` : parameter.name)).join(', ')})`;
}

function valueWithin(
  x: Waveform,
  t: number,
  axis: Dimension,
  of: (x: Waveform, t: number) => number | NoValue,
): number | NoValue {
  const from = x.grid[0]!;
  const to = x.grid.at(-1)!;
  // A time that rounding has moved past the end is the end.
  const hair = 1e-12 * Math.max(Math.abs(from), Math.abs(to));
  if (t >= from - hair && t <= to + hair) return of(x, Math.min(to, Math.max(from, t)));
  const show = (value: number): string => formatQuantity(value, axis, 4);
  return { none: `${show(t)} lies outside what is kept, ${show(from)} to ${show(to)}` };
}
