/** The computed values in a note's prose: `:val[expression]{in=mA digits=3}`. */
import type { InlineDirective } from './fences.ts';
import type { InlineValue } from './model.ts';
import { nearestAnalysis } from './scope.ts';
import { type NoteScope, readExpression, readUnitFor, type Written, writtenPassage } from './written-expression.ts';

/** Reads those that are right; the others are reported, and their `index` is missing from the list. */
export function readInlineValues(directives: readonly InlineDirective[], scope: NoteScope): InlineValue[] {
  const values: InlineValue[] = [];
  for (const { index, directive, expression: passage, place } of directives) {
    const from = nearestAnalysis(scope, place.line);
    const expression = readExpression(writtenPassage(passage), scope, from, { due: 'number' });
    const unit = directive.unit && readUnitFor(unitText(directive.unit, passage, place), expression?.dimension);
    if (!expression || directive.faults.length > 0 || (directive.unit && unit === undefined)) continue;
    values.push({
      expression,
      ...(unit === undefined ? {} : { unit }),
      ...(directive.digits === undefined ? {} : { digits: directive.digits }),
      index,
      place,
    });
  }
  return values;
}

/** The unit of the attributes; where it wraps to another line than the directive's first, that line is pointed at. */
function unitText(
  unit: { readonly text: string },
  passage: InlineDirective['expression'],
  place: InlineDirective['place'],
): Written {
  return {
    text: unit.text,
    passage,
    place: () => {
      const lines = passage.file.lines.slice(place.line - 1, place.line + 20);
      for (const [below, line] of lines.entries()) {
        const from = below === 0 ? place.column - 1 : 0;
        const brace = line.indexOf('{', from);
        const at = line.indexOf(unit.text, brace === -1 ? from : brace);
        if (at !== -1) return { line: place.line + below, column: at + 1, length: unit.text.length };
      }
      return place;
    },
  };
}
