/** The valid name that an author probably meant. */

/**
 * The nearest candidate, where it is close: no more than a third of the letters differ (of `R1` and `C1`, none may). Two
 * neighbouring letters that changed places count once (F. J. Damerau, 1964; the restricted form of the distance). Case
 * counts for little.
 */
export function nearest(text: string, candidates: Iterable<string>): string | undefined {
  let best: string | undefined;
  let bestDistance = Number.POSITIVE_INFINITY;
  for (const candidate of candidates) {
    const allowed = Math.floor(Math.max(text.length, candidate.length) / 3);
    if (Math.abs(text.length - candidate.length) > allowed) continue;
    const cased = distance(text.toLowerCase(), candidate.toLowerCase());
    const total = cased + (text === candidate ? 0 : 0.1);
    if (cased <= allowed && total < bestDistance) {
      best = candidate;
      bestDistance = total;
    }
  }
  return best;
}

/** `` `a`, `b` and `c` `` */
export function list(names: readonly string[], conjunction: 'and' | 'or' = 'and'): string {
  const quoted = names.map((name) => `\`${name}\``);
  if (quoted.length < 2) return quoted.join('');
  return `${quoted.slice(0, -1).join(', ')} ${conjunction} ${quoted.at(-1)}`;
}

/** "did you mean" in the form that `expected` takes, with all the valid names where they are few. */
export function expectedName(text: string, candidates: readonly string[]): string {
  const close = nearest(text, candidates);
  if (close !== undefined) return `\`${close}\` is the nearest name`;
  if (candidates.length === 0) return 'there is none';
  if (candidates.length > 24) return `one of ${list(candidates.slice(0, 24), 'or')} and others`;
  return candidates.length === 1 ? list(candidates) : `one of ${list(candidates, 'or')}`;
}

function distance(left: string, right: string): number {
  const width = right.length + 1;
  const table = new Uint16Array((left.length + 1) * width);
  for (let row = 0; row <= left.length; row++) table[row * width] = row;
  for (let column = 0; column < width; column++) table[column] = column;
  for (let row = 1; row <= left.length; row++) {
    for (let column = 1; column < width; column++) {
      const at = row * width + column;
      const same = left[row - 1] === right[column - 1];
      let least = Math.min(table[at - width]! + 1, table[at - 1]! + 1, table[at - width - 1]! + (same ? 0 : 1));
      const swapped =
        row > 1 && column > 1 && left[row - 1] === right[column - 2] && left[row - 2] === right[column - 1];
      if (swapped) least = Math.min(least, table[at - 2 * width - 2]! + 1);
      table[at] = least;
    }
  }
  return table[table.length - 1]!;
}
