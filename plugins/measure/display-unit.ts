/** Units that numbers are shown in. */
import type { Dimension } from '../language/dimensions.ts';
import { fittingUnit } from '../language/format.ts';
import { parseUnit, type Unit } from '../language/units.ts';

/** The author's unit where there is one (the language stage has checked it), else one with a fitting prefix. */
export function fromUnitText(text: string | undefined, dimension: Dimension, magnitude: number): Unit {
  return (text === undefined ? undefined : parseUnit(text)) ?? fittingUnit(dimension, magnitude);
}
