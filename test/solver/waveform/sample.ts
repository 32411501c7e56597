/** Waveforms from functions: the values at the nodes of every step, as an integrator would leave them. */
import { COLLOCATION_NODES, type Waveform } from '../../../solver/waveform/waveform.ts';

export function uniformGrid(from: number, to: number, steps: number): Float64Array {
  return Float64Array.from({ length: steps + 1 }, (_, k) => (k === steps ? to : from + ((to - from) * k) / steps));
}

export function sample(grid: Float64Array, of: (t: number) => number): Waveform {
  const values = new Float64Array(4 * (grid.length - 1));
  for (let k = 0; k + 1 < grid.length; k++) {
    const width = grid[k + 1]! - grid[k]!;
    // A hair inside the step, so that a function with a jump at a grid point takes the value of the step's own side.
    for (let s = 0; s < 4; s++)
      values[4 * k + s] = of(grid[k]! + (1e-14 + COLLOCATION_NODES[s]! * (1 - 2e-14)) * width);
  }
  return { grid, values };
}

/** The same without that hair. */
export function sampleSmooth(grid: Float64Array, of: (t: number) => number): Waveform {
  const values = new Float64Array(4 * (grid.length - 1));
  for (let k = 0; k + 1 < grid.length; k++) {
    const width = grid[k + 1]! - grid[k]!;
    for (let s = 0; s < 4; s++)
      values[4 * k + s] = of(s === 3 ? grid[k + 1]! : grid[k]! + COLLOCATION_NODES[s]! * width);
  }
  return { grid, values };
}
