/** The author's `vega:` (checked when the note was read) merged into a plot's specification. */
import { refuseHidden } from './plot-guard.ts';
import type { Json } from './plot-spec.ts';

/**
 * `encoding` and `mark` go into every layer that draws lines, `layer` is drawn over what is there; mappings are merged,
 * anything else takes the place of what was there. Throws where a property would evaluate code or open an address.
 */
export function mergeAuthorSpecification(specification: Json, author: Json): Json {
  refuseHidden(author);
  const { encoding, mark, layer, ...others } = author;
  const own = (specification.layer as readonly Json[]).map((each) => {
    const type = isObject(each.mark) ? each.mark.type : each.mark;
    if (type !== 'line') return each;
    const changes = {
      ...(isObject(encoding) ? { encoding } : {}),
      ...(mark === undefined ? {} : { mark: isObject(mark) ? mark : { type: mark } }),
    };
    return merge(each, changes);
  });
  const added = layer === undefined ? [] : Array.isArray(layer) ? layer : [layer];
  return { ...merge(specification, others), layer: [...own, ...added] };
}

function merge(base: Json, addition: Json): Json {
  const result: { [key: string]: unknown } = { ...base };
  for (const [key, value] of Object.entries(addition)) {
    if (key === '__proto__') continue;
    const before = result[key];
    const both = isObject(before) && isObject(value);
    result[key] = both ? merge(before, value) : value;
  }
  return result;
}

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
