/**
 * Two things that authors of circuit notes write and that plain YAML would read otherwise:
 *
 *     must: >= 2 mA                     a comparison, not a folded text
 *     { is: at(D1.i, 2 ms), in: mA }    a comma within parentheses, not the end of the value
 *
 * Before the structure is read, such characters are replaced, one for one, by characters that mean nothing to YAML;
 * values are then taken from the text as written, so that every position holds.
 */

const STAND_IN = '\ue000';

/** A `>` that does not open a folded text: something follows it on its line. An indentation digit is not read there. */
const COMPARISON = />(?![-+]?[ \t]*(?:#.*)?$)/gm;

/** A call's arguments, without quotes, braces, comments or keys in them, innermost first. */
const PARENTHESES = /\([^()'"{}#\n]*\)/g;
const KEY_WITHIN = /:\s/;

/** The text for the reader of structure: as long as the original, character for character. */
export function maskForYaml(text: string): string {
  return maskCommas(text).replace(COMPARISON, STAND_IN);
}

function maskCommas(text: string): string {
  let masked = text;
  // Each pass resolves one depth of nesting; expressions are shallow, so a bound costs nothing.
  for (let depth = 0; depth < 20; depth++) {
    const next = masked.replace(PARENTHESES, (group) => {
      const inner = KEY_WITHIN.test(group) ? group.slice(1, -1) : group.slice(1, -1).replaceAll(',', STAND_IN);
      return `\ue001${inner}\ue002`;
    });
    if (next === masked) break;
    masked = next;
  }
  return masked.replaceAll('\ue001', '(').replaceAll('\ue002', ')');
}
