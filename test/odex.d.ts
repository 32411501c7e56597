/** The part of odex that the tests use: the package's own TypeScript sources do not pass this project's settings. */
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

declare const odex: {
  Solver: new (size: number) => Solver;
  Outcome: { Converged: number; MaxStepsExceeded: number; EarlyReturn: number };
};

export default odex;
