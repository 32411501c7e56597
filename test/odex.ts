/**
 * odex (extrapolation methods after E. Hairer and G. Wanner), as far as it is used here. It is required, not imported: the compiler would otherwise
 * check the package's own TypeScript sources, which do not pass this project's settings.
 */
import { createRequire } from 'node:module';

interface Solver {
  maxSteps: number;
  initialStepSize: number;
  maxStepSize: number;
  denseOutput: boolean;
  relativeTolerance: number | number[];
  absoluteTolerance: number | number[];
  solve(
    derivative: (x: number, y: number[]) => number[],
    from: number,
    start: number[],
    to: number,
    output?: (
      step: number,
      previous: number,
      x: number,
      y: number[],
      dense?: (component: number, x: number) => number,
    ) => boolean | undefined,
  ): { y: number[]; outcome: number; nStep: number; xEnd: number; nAccept: number; nReject: number; nEval: number };
}

interface Odex {
  readonly Solver: new (size: number) => Solver;
  readonly Outcome: { readonly Converged: number; readonly MaxStepsExceeded: number; readonly EarlyReturn: number };
}

const odex = createRequire(import.meta.url)('odex') as Odex;

export default odex;
