import type { Settings } from "../compile/plant.js";
import type { ReadSpecies } from "../model/trial.js";
import type { Code } from "../problems/report.js";
import type { Unit } from "../units/unit.js";
import type { ProfileEnd } from "./profile.js";

/** What a fit found out. All numbers SI unless said; `unit` is what people see. */
export interface Fit {
  readonly parameters: readonly FittedParameter[];
  /** The fitted values by name, ready for `compile`, SI. */
  readonly values: Settings;
  /** Linear terms of each reading, by `trial title/at`. */
  readonly nuisance: Readonly<Record<string, Nuisance>>;
  /** In `residualUnit` squared; in squared standard deviations where `noise:` or several units weigh the readings. */
  readonly residualSumOfSquares: number;
  readonly residualUnit: Unit | undefined;
  readonly observations: number;
  /** Free parameters and linear terms. */
  readonly freeParameters: number;
  readonly aicc: number;
  /** Of the same values with errors that hang together, where the residuals do. */
  readonly aiccCorrelated?: number;
  /** With the effective number of readings where residuals hang together. */
  readonly bic: number;
  /** Of the free parameters, linear theory; NaN where not estimable. */
  readonly correlation: Matrix;
  /** Of the free parameters, SI, as wide as the intervals: with declared `±` and autocorrelation. NaN where not estimable. */
  readonly covariance: Matrix;
  /** Degrees of freedom of the t-intervals. */
  readonly freedom: number;
  readonly converged: boolean;
  readonly stopped: "cancelled" | undefined;
  readonly evaluations: number;
  /** Where descents from different starts ended, best first. */
  readonly optima: readonly FoundOptimum[];
  readonly readings: readonly FittedReading[];
  /** Where the fit moved the declared facts, in their standard deviations. */
  readonly held: readonly { readonly says: string; readonly deviations: number }[];
  /** Of every parameter, where they were asked for. */
  readonly profiles?: readonly FittedProfile[];
  /** Against readings of one moment; undefined where there are none. */
  readonly lackOfFit?: LackOfFit;
  /** Titles of tests under the same conditions whose mean times or areas differ by more than noise: no repeats of one another. */
  readonly unlike?: readonly string[];
  readonly findings: readonly FitFinding[];
}

/** What readings that should be the same say of a fit. Sums are in squares of weighted residuals. */
export interface LackOfFit {
  /** Readings that have others beside them, and the moments that they are of. */
  readonly readings: number;
  readonly moments: number;
  /** What readings of one moment differ by, the level of each log apart, and what the fit misses beyond it. */
  readonly pure: { readonly sum: number; readonly freedom: number };
  readonly lack: { readonly sum: number; readonly freedom: number };
  /** Ratio of the two mean squares, and the chance of as much were the network right. */
  readonly f: number;
  readonly p: number;
  /** Correlation of neighbours among what readings of one moment differ by; 0 where it is not told. */
  readonly correlation: number;
}

/** The sum of squares along one parameter, the others at their best. */
export interface FittedProfile {
  readonly name: string;
  readonly unit: Unit;
  /** SI, ascending. */
  readonly value: readonly number[];
  /** Signed root of the rise of the sum of squares over the residual variance at each value: a straight line where linear theory holds. */
  readonly deviation: readonly number[];
  /** SI; a side that has no end is undefined. */
  readonly interval95: readonly [number | undefined, number | undefined];
  /** `step`: the sum of squares jumps there, as where a front crosses a sample; `bound`: of the parameter, or of what makes a vessel. */
  readonly ends: readonly [ProfileEnd, ProfileEnd];
}

export interface FittedParameter {
  readonly name: string;
  /** Of a parameter with a value in each trial: its name, and the title of the trial. */
  readonly ofTrial?: { readonly name: string; readonly trial: string };
  readonly value: number;
  readonly unit: Unit;
  /** Linear theory, independent residuals; undefined where the data cannot tell. */
  readonly standardError: number | undefined;
  /** The same with the effective sample size, where residuals hang together. */
  readonly standardErrorCorrelated?: number;
  /** t-interval, widened by declared `±` and by autocorrelation, cut at the bounds; undefined where neither ends it. */
  readonly interval95: readonly [number, number] | undefined;
  readonly atBound: "lower" | "upper" | undefined;
}

export interface Estimate {
  readonly value: number;
  readonly unit: Unit;
  readonly standardError: number | undefined;
}

/** Offset and drift count from the first injection of the trial. */
export interface Nuisance {
  readonly offset?: Estimate;
  readonly drift?: Estimate;
  readonly scale?: Estimate;
  /** How long errors hang together, where the reading asks for a fitted time. */
  readonly correlation?: Estimate;
}

export interface Matrix {
  readonly names: readonly string[];
  readonly rows: readonly (readonly number[])[];
}

export interface FoundOptimum {
  readonly values: Settings;
  readonly residualSumOfSquares: number;
  /** Rough descents that ended here. */
  readonly starts: number;
}

export interface FittedReading {
  readonly trial: string;
  readonly at: string;
  /** The species, in a trial of a reaction. */
  readonly of?: ReadSpecies;
  readonly key: string;
  readonly unit: Unit;
  readonly time: Float64Array;
  readonly measured: Float64Array;
  readonly fitted: Float64Array;
  /** measured - fitted. */
  readonly residual: Float64Array;
  /** What each residual was multiplied by in the sum of squares, 1 / SI. */
  readonly weight: Float64Array;
}

/** Something a reader of the fit must know: words, and the numbers behind them. */
export interface FitFinding {
  readonly code: Code;
  readonly message: string;
  readonly fix: string;
  readonly evidence: Readonly<Record<string, number | string>>;
  /** Names of parameters and linear terms that it is about. */
  readonly about: readonly string[];
}
