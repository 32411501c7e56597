/** A value that is the name of a part. */

import { PART_NAME, type PartFile } from '../parts.ts';
import { report } from '../passage.ts';
import { type Due, parseScalar } from '../scalar.ts';
import type { ComponentInput } from './context.ts';

const BARE_NUMBER = /^[\d.eE-]+$/;

/**
 * The part that the component's value names; nothing if the value is not a name; `unknown` once that is reported. A text
 * that can be read as the quantity `due` is one (`R47`, `100n`); otherwise a name begins with a letter, or, as a type
 * number may, with a digit where no quantity is due or a hyphen follows.
 */
export function partFor(input: ComponentInput, due?: Due): PartFile | 'unknown' | undefined {
  const { value } = input.entry;
  if (value.type !== 'scalar') return undefined;
  const text = value.text.trim();
  if (!PART_NAME.test(text) || BARE_NUMBER.test(text)) return undefined;
  if (due && (parseScalar(text, due).ok || /^\d[^-_]*$/.test(text))) return undefined;
  const part = input.surroundings.part(value, text);
  if (!part) return 'unknown';
  if (part.kind === input.kind) return part;
  report(value.passage, value.place, {
    message: `the part \`${part.name}\` is of the kind \`${part.kind}\`, and \`${input.designator}\` is a \`${input.kind}\``,
    expected: `\`${part.kind}: ${part.name}\`, or a part of the kind \`${input.kind}\``,
  });
  return 'unknown';
}
