import { factorColumns, solveLeastSquares } from "../numerics/qr.js";
import { type Hidden, hiddenBeside } from "./hidden-tail.js";
import {
  type Bins,
  columnsOf,
  covarianceAt,
  gather,
  joined,
  type Linear,
  linearFit,
  type TailedRecord,
  type Under,
  windowStart,
} from "./late-window.js";

/** What is fitted together, at the end of a record: offset + drift (t - middle) + level exp(-rate (t - end)). SI. */
export interface SlowTail {
  readonly offset: number;
  readonly drift: number;
  readonly middle: number;
  /** Of the slowest exponential, all that is left at the end. */
  readonly level: number;
  readonly rate: number;
  /** When the curve is fitted from, and the last time. */
  readonly from: number;
  readonly end: number;
  readonly points: number;
  /** Of offset, drift, level and rate, row by row; 0 for a drift that was not asked for. */
  readonly covariance: Float64Array;
  /** Rates of all decays, the slowest first. */
  readonly rates: readonly number[];
  /** What may be slower still, where the slowest that is seen is fast beside the record. */
  readonly hidden: Hidden | undefined;
}

/** Windows after the peak that are tried, as shares of the time since it. */
const windows = [0.95, 0.9, 0.85, 0.8, 0.75, 0.7, 0.65, 0.6, 0.55, 0.5, 0.45, 0.4, 0.35, 0.3, 0.25, 0.2];

/**
 * Fits tail and baseline together to a long late window and to the points before the injection. A line drawn through the
 * end of such a record takes the tail for drift; here the two are told apart by the bend of the tail, as far as they can
 * be. Two exponentials are tried before one: what is left of a faster one bends a window, too, and one alone would take
 * that for a faster tail.
 * @param scatter standard deviation of one late point
 * @returns undefined where no exponential stands out, or its rate stays unknown to more than a half
 */
export function slowTailOf(record: TailedRecord, scatter: number): SlowTail | undefined {
  return longest(record, scatter, 2) ?? longest(record, scatter, 1);
}

/**
 * The fit of so many exponentials to a window one step shorter than the longest that they explain to within the scatter:
 * what does not show in the spread of residuals yet may have moved the rates already.
 */
function longest(record: TailedRecord, scatter: number, count: 1 | 2): SlowTail | undefined {
  let first: SlowTail | undefined;
  let explained = false;
  for (const share of windows) {
    const fitted = fitWindow(record, share, scatter, count);
    if (fitted === "bad") continue;
    // One step shorter may be too short to tell: then it is this one.
    if (explained) return fitted ?? first;
    explained = true;
    first = fitted;
  }
  return first;
}

/** Undefined: nothing stands out here; "bad": so many exponentials do not explain this window. */
function fitWindow(record: TailedRecord, share: number, scatter: number, count: 1 | 2): SlowTail | "bad" | undefined {
  const { time, value, peak, mode } = record;
  const end = time[time.length - 1];
  const first = windowStart(record, share);
  if (value[first] - value[time.length - 1] > 0.5 * (value[peak] - value[time.length - 1])) return "bad";
  const bins = gather(record, first);
  const seen = ratesOf(bins, mode, end, end - time[first], count);
  if (!seen) return undefined;
  const { rates, fit } = seen;
  const freedom = bins.count - fit.n - count;
  if (freedom < 4 || time.length - first < 8) return undefined;
  const variance = fit.sum / freedom;
  if (variance > scatter * scatter * (1 + 2 * Math.sqrt(2 / freedom))) return "bad";
  const noise = Math.max(variance, scatter * scatter);
  const without = linearFit(bins, mode, rates.slice(1), end);
  const slow = mode === "drift" ? 2 : 1;
  const level = fit.x[slow];
  if (!without || !(level > 0) || without.sum - fit.sum < 16 * noise) return undefined;
  const covariance = covarianceAt(bins, mode, rates, fit.x, end, noise);
  if (!covariance || !(covariance[15] < (0.5 * rates[0]) ** 2)) return undefined;
  const hidden = hiddenBeside(record, bins, rates, Math.sqrt(noise));
  const drift = mode === "drift" ? fit.x[1] : 0;
  const points = time.length - first;
  return {
    offset: fit.x[0],
    drift,
    middle: bins.middle,
    level,
    rate: rates[0],
    from: time[first],
    end,
    points,
    covariance,
    rates,
    hidden,
  };
}

/** Rates of the best fit, the slowest first: from a grid, then by Gauss-Newton steps on their logarithms. */
function ratesOf(bins: Bins, mode: Under, end: number, span: number, count: 1 | 2) {
  let best: { rates: number[]; fit: Linear } | undefined;
  const look = (rates: number[]): boolean => {
    const fit = linearFit(bins, mode, rates, end);
    if (!fit || (best && fit.sum >= best.fit.sum)) return false;
    best = { rates, fit };
    return true;
  };
  for (let slow = 0.1 / span; slow < 20 / span; slow *= 2) {
    if (count === 1) look([slow]);
    else for (let fast = 2 * slow; fast < 60 / span; fast *= 2) look([slow, fast]);
  }
  for (let k = 0; k < 30 && best; k++) {
    const { rates, fit } = best;
    const columns = columnsOf(bins, mode, rates, end);
    const residual = bins.value.map((y, i) => {
      let off = y * bins.weight[i];
      for (let j = 0; j < columns.length; j++) off -= fit.x[j] * columns[j][i];
      return off;
    });
    const tails = columns.slice(-count);
    for (const [j, tail] of tails.entries()) {
      const by = -fit.x[fit.n - count + j] * rates[j];
      columns.push(tail.map((v, i) => by * (bins.time[i] - end) * v));
    }
    const step = solveLeastSquares(factorColumns(joined(columns), bins.count, columns.length), residual).slice(-count);
    const moved = (f: number): number[] => rates.map((r, j) => r * Math.exp(f * Math.max(-1, Math.min(1, step[j]))));
    if (![1, 0.5, 0.25, 0.1].some((f) => look(moved(f))) || step.every((s) => Math.abs(s) < 1e-6)) break;
  }
  if (best && count === 2 && best.rates[1] < 1.2 * best.rates[0]) return undefined;
  return best;
}
