import { factorColumns, inverseOfNormal, solveLeastSquares } from "../numerics/qr.js";

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
}

/** What may be fitted to: points before the injection (baseline alone) and after the peak. */
export interface TailedRecord {
  readonly time: Float64Array;
  readonly value: Float64Array;
  /** Points before the injection. */
  readonly before: number;
  /** Index of the highest point. */
  readonly peak: number;
  readonly mode: "constant" | "drift";
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
 * What may lie under a baseline that has taken the end of a record for its own: the least-squares level, at the end, of an
 * exponential as slow as the record is long, and its standard error.
 */
export function hiddenLevel(record: TailedRecord, scatter: number): { level: number; error: number } {
  const end = record.time[record.time.length - 1];
  const bins = gather(record, windowStart(record, 0.5));
  const fit = linearFit(bins, record.mode, [1 / (end - record.time[record.before])], end);
  if (!fit) return { level: 0, error: scatter };
  const last = fit.n - 1;
  return { level: fit.x[last], error: scatter * Math.sqrt(fit.inverse[last * fit.n + last]) };
}

function windowStart({ time, peak }: TailedRecord, share: number): number {
  const from = time[time.length - 1] - share * (time[time.length - 1] - time[peak]);
  let i = peak;
  while (time[i] < from) i++;
  return i;
}

/**
 * The fit of so many exponentials to a window one step shorter than the longest that they explain to within the scatter:
 * what does not show in the spread of residuals yet may have moved the rates already.
 */
function longest(record: TailedRecord, scatter: number, count: 1 | 2): SlowTail | undefined {
  let explained = false;
  for (const share of windows) {
    const fitted = fitWindow(record, share, scatter, count);
    if (fitted === "bad") continue;
    if (explained) return fitted;
    explained = true;
  }
  return undefined;
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
  };
}

/** Rates of the best fit, the slowest first: from a grid, then by Gauss-Newton steps on their logarithms. */
function ratesOf(bins: Bins, mode: Mode, end: number, span: number, count: 1 | 2) {
  let best: { rates: number[]; fit: Linear } | undefined;
  const look = (rates: number[]): boolean => {
    const fit = linearFit(bins, mode, rates, end);
    if (!fit || (best && fit.sum >= best.fit.sum)) return false;
    best = { rates, fit };
    return true;
  };
  for (let slow = 0.1 / span; slow < 20 / span; slow *= 1.5) {
    if (count === 1) look([slow]);
    else for (let fast = 1.7 * slow; fast < 60 / span; fast *= 1.7) look([slow, fast]);
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

type Mode = TailedRecord["mode"];

/** Points in bins, so that long logs cost no more: means of neighbours, weighing as many as they are. */
interface Bins {
  readonly count: number;
  readonly time: Float64Array;
  readonly value: Float64Array;
  /** Square root of the number of points. */
  readonly weight: Float64Array;
  /** Bins before the injection: no tail there. */
  readonly before: number;
  readonly middle: number;
}

const mostBins = 240;

function gather({ time, value, before }: TailedRecord, first: number): Bins {
  const size = Math.max(1, Math.ceil((time.length - first) / mostBins));
  const bins: [number, number, number][] = [];
  const add = (from: number, to: number): void => {
    for (let i = from; i < to; i += size) {
      const n = Math.min(size, to - i);
      let [t, y] = [0, 0];
      for (let k = i; k < i + n; k++) {
        t += time[k] / n;
        y += value[k] / n;
      }
      bins.push([t, y, Math.sqrt(n)]);
    }
  };
  add(0, before);
  const early = bins.length;
  add(first, time.length);
  const [t, y, weight] = [0, 1, 2].map((k) => Float64Array.from(bins, (bin) => bin[k]));
  const middle = t.reduce((sum, s) => sum + s, 0) / t.length;
  return { count: bins.length, time: t, value: y, weight, before: early, middle };
}

/** A linear least-squares solution. */
interface Linear {
  readonly n: number;
  readonly x: Float64Array;
  readonly sum: number;
  /** Of the normal matrix, n x n. */
  readonly inverse: Float64Array;
}

/** Least squares of offset, drift (if asked) and levels at rates given. */
function linearFit(bins: Bins, mode: Mode, rates: readonly number[], end: number): Linear | undefined {
  const columns = columnsOf(bins, mode, rates, end);
  const [m, n] = [bins.count, columns.length];
  const qr = factorColumns(joined(columns), m, n);
  const inverse = inverseOfNormal(qr);
  if (inverse === "singular") return undefined;
  const x = solveLeastSquares(
    qr,
    bins.value.map((y, i) => y * bins.weight[i]),
  );
  let sum = 0;
  for (let i = 0; i < m; i++) {
    let off = bins.value[i] * bins.weight[i];
    for (let j = 0; j < n; j++) off -= x[j] * columns[j][i];
    sum += off * off;
  }
  return { n, x, sum, inverse };
}

function columnsOf(bins: Bins, mode: Mode, rates: readonly number[], end: number): Float64Array[] {
  const { time, weight, before, middle } = bins;
  const columns = [weight.slice()];
  if (mode === "drift") columns.push(time.map((t, i) => weight[i] * (t - middle)));
  // The fast ones count from the first late point: at the end they are next to nothing.
  for (const [j, rate] of rates.entries()) {
    const zero = j === 0 ? end : time[before];
    columns.push(time.map((t, i) => (i < before ? 0 : weight[i] * Math.exp(-rate * (t - zero)))));
  }
  return columns;
}

/** 4 x 4 covariance of offset, drift, level and rate of the slowest at the best fit. */
function covarianceAt(
  bins: Bins,
  mode: Mode,
  rates: readonly number[],
  x: Float64Array,
  end: number,
  variance: number,
): Float64Array | undefined {
  const columns = columnsOf(bins, mode, rates, end);
  const linear = columns.length;
  // Per level, so that the unit of the values does not matter to the rank.
  for (let j = 0; j < rates.length; j++) {
    columns.push(columns[linear - rates.length + j].map((v, i) => -(bins.time[i] - end) * v));
  }
  const n = columns.length;
  const inverse = inverseOfNormal(factorColumns(joined(columns), bins.count, n));
  if (inverse === "singular") return undefined;
  const slow = linear - rates.length;
  const from = mode === "drift" ? [0, 1, slow, linear] : [0, -1, slow, linear];
  const per = (i: number): number => (i === linear ? 1 / x[slow] : 1);
  const covariance = new Float64Array(16);
  for (const [a, i] of from.entries()) {
    for (const [b, j] of from.entries()) {
      if (i >= 0 && j >= 0) covariance[4 * a + b] = variance * inverse[i * n + j] * per(i) * per(j);
    }
  }
  return covariance;
}

function joined(columns: readonly Float64Array[]): Float64Array {
  const all = new Float64Array(columns.length * columns[0].length);
  for (const [j, column] of columns.entries()) all.set(column, j * column.length);
  return all;
}
