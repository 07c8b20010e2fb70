import { factorColumns, inverseOfNormal, solveLeastSquares } from "../numerics/qr.js";

/** What lies under a tail: nothing, a constant, or a straight line. */
export type Under = "nothing" | "constant" | "drift";

/** What may be fitted to: points before the injection (baseline alone) and after the peak. */
export interface TailedRecord {
  readonly time: Float64Array;
  readonly value: Float64Array;
  /** Points before the injection. */
  readonly before: number;
  /** Index of the highest point. */
  readonly peak: number;
  readonly mode: Under;
}

/** Index at which the last part of the time since the peak begins. */
export function windowStart({ time, peak }: TailedRecord, share: number): number {
  const from = time[time.length - 1] - share * (time[time.length - 1] - time[peak]);
  let i = peak;
  while (time[i] < from) i++;
  return i;
}

/** Points in bins, so that long logs cost no more: means of neighbours, weighing as many as they are. */
export interface Bins {
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

/** The points before the injection and those from index `first` on. */
export function gather({ time, value, before }: TailedRecord, first: number): Bins {
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
export interface Linear {
  readonly n: number;
  readonly x: Float64Array;
  readonly sum: number;
  /** Of the normal matrix, n x n. */
  readonly inverse: Float64Array;
}

/**
 * Least squares of offset, drift (if asked) and levels at rates given.
 * @param yielding  lets all rates but the first give way, to first order: one more unknown each, after the levels
 */
export function linearFit(
  bins: Bins,
  mode: Under,
  rates: readonly number[],
  end: number,
  yielding = false,
): Linear | undefined {
  const columns = columnsOf(bins, mode, rates, end);
  if (yielding) {
    const tails = columns.slice(columns.length - rates.length + 1);
    const zero = bins.time[bins.before];
    for (const tail of tails) columns.push(tail.map((v, i) => (bins.time[i] - zero) * v));
  }
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

/** Columns of offset, drift and decays, weighed; of the decays the first counts from the end, the others from the injection. */
export function columnsOf(bins: Bins, mode: Under, rates: readonly number[], end: number): Float64Array[] {
  const { time, weight, before, middle } = bins;
  const columns = mode === "nothing" ? [] : [weight.slice()];
  if (mode === "drift") columns.push(time.map((t, i) => weight[i] * (t - middle)));
  // The fast ones count from the first late point: at the end they are next to nothing.
  for (const [j, rate] of rates.entries()) {
    const zero = j === 0 ? end : time[before];
    columns.push(time.map((t, i) => (i < before ? 0 : weight[i] * Math.exp(-rate * (t - zero)))));
  }
  return columns;
}

/** 4 x 4 covariance of offset, drift, level and rate of the slowest at the best fit. */
export function covarianceAt(
  bins: Bins,
  mode: Under,
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

/** Columns one after the other, as `factorColumns` takes them. */
export function joined(columns: readonly Float64Array[]): Float64Array {
  const all = new Float64Array(columns.length * columns[0].length);
  for (const [j, column] of columns.entries()) all.set(column, j * column.length);
  return all;
}
