/** The part of `odex` 2.0.4 that the adapter uses; the package itself ships raw TypeScript that strict mode refuses. */
export declare class Solver {
  constructor(n: number);
  maxSteps: number;
  initialStepSize: number;
  relativeTolerance: number | number[];
  absoluteTolerance: number | number[];
  denseOutput: boolean;
  /** How many substeps of a trial step are watched for instability; 0: none. */
  stabilityCheckCount: number;
  solve(
    rhs: (x: number, y: number[]) => ArrayLike<number>,
    from: number,
    start: number[],
    to: number,
    /** Called at the start and after each accepted step; `dense(i, x)` interpolates component i in [xOld, x]. */
    seen?: (
      step: number,
      xOld: number,
      x: number,
      y: number[],
      dense?: (component: number, x: number) => number,
    ) => boolean | undefined,
  ): { y: number[]; nReject: number; nAccept: number; nEval: number };
}
