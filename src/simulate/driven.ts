import type { Drive } from "./linear-system.js";
import type { Seen } from "./respond.js";

/** Functions of time by their coefficients: the response to an instant unit, and its integrals one after the other. */
export interface ResponseSeries {
  exponential(t: number): Float64Array;
  integral(f: Float64Array, order: number, t: number): Float64Array;
}

/**
 * The response to what a drive puts in, from the response to an instant unit: each break of the rate adds that response
 * integrated once, each break of its slope twice.
 * @param sum     of given coefficients times what they multiply, to a part of the given scale of it
 * @param scale   of the response to an instant unit
 * @returns values and, where asked, integrals at the times
 */
export function driven(
  series: ResponseSeries,
  sum: (c: Float64Array, scale: number) => number,
  scale: number,
  drive: Drive,
  times: Float64Array,
  integral: boolean,
): Seen {
  const value = new Float64Array(times.length);
  const sums = new Float64Array(times.length);
  const breaks = breaksOf(drive);
  times.forEach((t, i) => {
    for (const { time, orders } of breaks) {
      if (t < time) continue;
      let c = series.exponential(t - time);
      const last = orders.findLastIndex((o) => o !== 0) + (integral ? 1 : 0);
      for (let order = 0; order <= last; order++) {
        if (order > 0) c = series.integral(c, order, t - time);
        const now = orders[order] ?? 0;
        const before = integral && order > 0 ? orders[order - 1] : 0;
        if (now === 0 && before === 0) continue;
        const found = sum(c, scale * (t - time) ** order);
        value[i] += now * found;
        sums[i] += before * found;
      }
    }
  });
  return { value, integral: sums };
}

/** How much of the response, of its integral and of that one's integral begins when. */
function breaksOf({ amount, times, level, slope }: Drive): { time: number; orders: number[] }[] {
  const breaks = [{ time: 0, orders: [amount, 0, 0] }];
  let [rate, rise] = [0, 0];
  times.forEach((time, i) => {
    if (i > 0) rate += rise * (time - times[i - 1]);
    breaks.push({ time, orders: [0, level[i] - rate, slope[i] - rise] });
    [rate, rise] = [level[i], slope[i]];
  });
  return breaks.filter(({ orders }) => orders.some((o) => o !== 0));
}
