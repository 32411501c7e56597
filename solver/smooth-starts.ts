/** Which steps of a time response go on smoothly from the one before: no corner of a source and no change of a mode lies between them. */
import type { Solution } from './analysis.ts';
import type { System } from './equations/system.ts';
import { waveCorners } from './wave-evaluation.ts';

/** Corners are met to this fraction of the time axis. */
const MET = 4e-12;

const known = new WeakMap<Solution, readonly boolean[]>();

/** For every step, whether it begins smoothly; the first one does not. `system` is the solution's. */
export function smoothStarts(solution: Solution, system: System): readonly boolean[] {
  let result = known.get(solution);
  if (!result) {
    result = findSmoothStarts(solution, system);
    known.set(solution, result);
  }
  return result;
}

function findSmoothStarts({ grid, modes }: Solution, system: System): boolean[] {
  const steps = grid.length - 1;
  const begin = grid[0]!;
  const end = grid[steps]!;
  const corners = [...system.drives, ...system.driven]
    .flatMap(({ wave }) => waveCorners(wave, begin, end))
    .sort((a, b) => a - b);
  const modal = system.modal.length;
  const tolerance = MET * end;
  let next = 0;
  return Array.from({ length: steps }, (_, k) => {
    const t = grid[k]!;
    while (next < corners.length && corners[next]! < t - tolerance) next++;
    if (k === 0 || (next < corners.length && corners[next]! <= t + tolerance)) return false;
    for (let m = 0; m < modal; m++) if (modes[k * modal + m] !== modes[(k - 1) * modal + m]) return false;
    return true;
  });
}
