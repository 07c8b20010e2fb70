import { gaussLegendre } from "../numerics/gauss-legendre.js";
import { sameTime } from "./pieces.js";
import type { Signal, Weight } from "./signal.js";

/** Both are straight lines, or one is and the other bends little. */
const { point, weight: gaussWeight } = gaussLegendre(8);

/** What a feed brings over time: straight between knots, its first value before and its last after. Two knots at a time are a jump. */
export class FeedSignal implements Signal {
  /**
   * @param times  ascending, s, at least one
   * @param levels mixture at each knot
   * @param kinks when flows kink or jump, s
   */
  constructor(
    readonly times: Float64Array,
    private readonly levels: readonly Float64Array[],
    private readonly kinks: Float64Array,
  ) {}

  read(t: number, side: number, out: Float64Array, to: number): void {
    const { times, levels } = this;
    const soft = t + side * sameTime * Math.abs(t);
    let k = -1;
    while (k + 1 < times.length && (side > 0 ? times[k + 1] <= soft : times[k + 1] < soft)) k++;
    const here = levels[Math.max(0, k)];
    const next = levels[Math.min(k + 1, times.length - 1)];
    const between = k >= 0 && k + 1 < times.length;
    const part = between ? Math.max(0, Math.min(1, (t - times[k]) / (times[k + 1] - times[k]))) : 0;
    for (let i = 0; i < here.length; i++) out[to + i] = here[i] + part * (next[i] - here[i]);
  }

  integral(t: number, out: Float64Array, weight?: Weight): void {
    const { times, levels, kinks } = this;
    const width = levels[0].length;
    out.fill(0, 0, width);
    if (!(t > 0)) return;
    const inside = [...times, ...(weight ? kinks : [])].filter((x) => x > 0 && x < t);
    const stops = [0, ...inside.sort((a, b) => a - b), t];
    const [first, last] = [new Float64Array(width), new Float64Array(width)];
    for (let s = 1; s < stops.length; s++) {
      const h = stops[s] - stops[s - 1];
      if (!(h > 0)) continue;
      this.read(stops[s - 1], 1, first, 0);
      this.read(stops[s], -1, last, 0);
      if (!weight) for (let i = 0; i < width; i++) out[i] += (h * (first[i] + last[i])) / 2;
      else {
        for (let g = 0; g < point.length; g++) {
          const part = (1 + point[g]) / 2;
          const w = (h / 2) * gaussWeight[g] * weight(stops[s - 1] + part * h, 1);
          for (let i = 0; i < width; i++) out[i] += w * (first[i] + part * (last[i] - first[i]));
        }
      }
    }
  }

  pace(t: number, count: number): number {
    let k = 0;
    while (k < this.times.length && this.times[k] <= t) k++;
    return this.times[k + count - 1] ?? Number.POSITIVE_INFINITY;
  }
}
