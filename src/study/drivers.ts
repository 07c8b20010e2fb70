import type { Settings } from "../compile/plant.js";

/** An uncertain input and how much of a figure's spread goes with it. */
export interface Driver {
  readonly name: string;
  /**
   * Squared rank correlation with the figure over the draws, 0 to 1 (Spearman, Am. J. Psychol. 15 (1904) 72). Inputs that
   * move together share what they hold, so that the shares need not add up to 1.
   */
  readonly share: number;
}

/** Shares below this are what chance gives among some hundred draws. */
const least = 0.03;

/** What a figure's spread goes with, most first; inputs that do not vary, or hardly matter, are left out. */
export function driversOf(inputs: readonly Settings[], values: readonly (number | undefined)[]): Driver[] {
  const kept = values.flatMap((v, i) => (v !== undefined && Number.isFinite(v) ? [i] : []));
  if (kept.length < 20) return [];
  const y = ranks(kept.map((i) => values[i] as number));
  return Object.keys(inputs[kept[0]])
    .flatMap((name): Driver[] => {
      const x = kept.map((i) => inputs[i][name]);
      if (x.every((v) => v === x[0])) return [];
      return [{ name, share: correlation(ranks(x), y) ** 2 }];
    })
    .filter((d) => d.share >= least)
    .sort((a, b) => b.share - a.share);
}

/** Places in ascending order; equal values share the mean of their places. */
function ranks(values: readonly number[]): Float64Array {
  const order = [...values.keys()].sort((i, j) => values[i] - values[j]);
  const out = new Float64Array(values.length);
  for (let k = 0; k < order.length; ) {
    let end = k;
    while (end + 1 < order.length && values[order[end + 1]] === values[order[k]]) end++;
    for (let i = k; i <= end; i++) out[order[i]] = (k + end) / 2;
    k = end + 1;
  }
  return out;
}

function correlation(x: Float64Array, y: Float64Array): number {
  const middle = (x.length - 1) / 2; // the mean of ranks 0 to n - 1
  let [xy, xx, yy] = [0, 0, 0];
  for (let i = 0; i < x.length; i++) {
    xy += (x[i] - middle) * (y[i] - middle);
    xx += (x[i] - middle) ** 2;
    yy += (y[i] - middle) ** 2;
  }
  return xx > 0 && yy > 0 ? xy / Math.sqrt(xx * yy) : 0;
}
