export interface LeastSquaresOptions {
  /** Residuals at p, always the same number of them. Non-finite ones mean that p is no good: the step is rejected. */
  readonly residuals: (p: Float64Array) => ArrayLike<number>;
  /** d residual i / d parameter j: flat row-major m x n, or one row per residual. Without it differences are taken. */
  readonly jacobian?: (p: Float64Array) => ArrayLike<number> | ArrayLike<ArrayLike<number>>;
  readonly start: ArrayLike<number>;
  /** Bounds, infinite where left out. A start outside is moved onto them. */
  readonly lower?: ArrayLike<number>;
  readonly upper?: ArrayLike<number>;
  /** Typical size of each parameter: sets the difference steps near 0. Default: |start| (1 where that is 0),
   * then sizes seen at the end of the search. */
  readonly scale?: ArrayLike<number>;
  /** False where the parameters make no sense together: a step that leads there is cut back. */
  readonly allowed?: (p: Float64Array) => boolean;
  /** Relative fall of the sum of squares, and relative step, under which the search ends. Default 1e-10. */
  readonly tolerance?: number;
  /** Trust radius, relative to the parameters, under which the search gives up: where the sum of squares jumps. Default 1e-15. */
  readonly smallest?: number;
  /** Calls of `residuals`, those for differences included. Default 2000 (n + 1). */
  readonly maxEvaluations?: number;
  /**
   * False leaves out the central differences, the last steps on them and the covariance (NaN): enough for one of many rough starts.
   */
  readonly polish?: boolean;
  readonly cancelled?: () => boolean;
  readonly progress?: (at: {
    readonly evaluations: number;
    readonly residualSumOfSquares: number;
    readonly parameters: Float64Array;
  }) => void;
}
