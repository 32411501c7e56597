/**
 * What an author's `vega:` may not hold in places where the key alone does not tell. Keys that load or evaluate are refused when
 * the note is read; here it is texts that Vega-Lite would put into an expression as they stand, or into the drawing as an address.
 */
import type { Json } from './plot-spec.ts';

const CONDITIONS = new Set(['test', 'filter']);
const COMBINED = ['and', 'or', 'not'] as const;
const FORMAT_TYPES: readonly unknown[] = ['number', 'time'];

/** Parts of a date, and widths of steps: spliced into expressions without quotes. */
const SPLICED = new Set([
  'year',
  'quarter',
  'month',
  'date',
  'day',
  'hours',
  'minutes',
  'seconds',
  'milliseconds',
  'step',
]);

/** Throws an Error that names the first property which would evaluate code or open an address. */
export function refuseHidden(author: Json): void {
  for (const [key, value] of Object.entries(author)) refuseIn(key, value);
}

function refuseIn(key: string, value: unknown): void {
  if (CONDITIONS.has(key)) refuseCode(key, value);
  if (key === 'formatType' && !FORMAT_TYPES.includes(value)) refuse(key, 'evaluates code');
  if (key === 'customFormatTypes' || key === 'parse') refuse(key, 'evaluates code');
  if (SPLICED.has(key) && typeof value === 'string' && !/^\w*$/.test(value)) refuse(key, 'evaluates code');
  if (typeof value === 'string' && opensAddress(value)) refuse(key, 'opens an address');
  if (Array.isArray(value)) for (const item of value) refuseIn('', item);
  // rows of data are only data
  else if (isMapping(value)) refuseHidden(key === 'data' ? { ...value, values: undefined } : value);
}

/** A condition is a mapping with a field, or conditions combined; a text in its place would be evaluated. */
function refuseCode(key: string, condition: unknown): void {
  if (Array.isArray(condition)) for (const each of condition) refuseCode(key, each);
  else if (!isMapping(condition)) refuse(key, 'evaluates code');
  else {
    for (const combination of COMBINED) {
      if (Object.hasOwn(condition, combination)) refuseCode(combination, condition[combination]);
    }
  }
}

/** Whether a colour refers to what is outside of the drawing. */
export function opensAddress(text: string): boolean {
  return /url\s*\(\s*(?!["']?#)/i.test(text);
}

function refuse(key: string, deed: string): never {
  throw new Error(`\`${key}\` is refused here, as it ${deed}`);
}

function isMapping(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
