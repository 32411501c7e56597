/** Keeps the accepted steps: the grid, the unknowns at the four nodes of each step, the modes. Grows by doubling. */
export interface Recorder {
  readonly size: number;
  readonly modal: number;
  steps: number;
  grid: Float64Array;
  unknowns: Float64Array;
  modes: Int8Array;
}

export function createRecorder(size: number, modal: number, capacity = 256): Recorder {
  return {
    size,
    modal,
    steps: 0,
    grid: new Float64Array(capacity + 1),
    unknowns: new Float64Array(4 * capacity * size),
    modes: new Int8Array(capacity * modal),
  };
}

/** Adds the step from t to `end`: y at its start, and y + z at the three stages. */
export function recordStep(
  recorder: Recorder,
  t: number,
  end: number,
  y: Float64Array,
  z: readonly [Float64Array, Float64Array, Float64Array],
  modes: Int8Array,
): void {
  const { size } = recorder;
  const step = recorder.steps;
  if (4 * (step + 1) * size > recorder.unknowns.length || step + 2 > recorder.grid.length) grow(recorder);
  if (step === 0) recorder.grid[0] = t;
  recorder.grid[step + 1] = end;
  const { unknowns } = recorder;
  let at = 4 * step * size;
  for (let i = 0; i < size; i++) unknowns[at++] = y[i]!;
  for (const increment of z) for (let i = 0; i < size; i++) unknowns[at++] = y[i]! + increment[i]!;
  recorder.modes.set(modes, step * recorder.modal);
  recorder.steps++;
}

function grow(recorder: Recorder): void {
  const enlarge = (old: Float64Array, length: number): Float64Array => {
    const larger = new Float64Array(length);
    larger.set(old);
    return larger;
  };
  const capacity = 2 * (recorder.grid.length - 1);
  recorder.grid = enlarge(recorder.grid, capacity + 1);
  recorder.unknowns = enlarge(recorder.unknowns, 4 * capacity * recorder.size);
  const modes = new Int8Array(capacity * recorder.modal);
  modes.set(recorder.modes);
  recorder.modes = modes;
}
