import type { Span } from "./beyond.js";

/** When to turn what leaves away, so that hardly anything beyond the limit goes on: s on the clock of the duty. */
export interface Diversion {
  readonly from: number;
  readonly to: number;
  /** Share of the draws in which anything is beyond the limit. */
  readonly touched: number;
  /** m3 that leave between. */
  readonly volume: number;
  /** Share of the touched draws in which it is still beyond where the run ends: what comes then no window holds. */
  readonly stillAtEnd: number;
}

/**
 * A window that holds what is beyond a limit in nearly all draws: from the early percentile of when it begins to the late one
 * of when it ends.
 * @param draws stretches beyond the limit, one list per draw
 * @param tail  share of the draws, of those that are touched, that may begin sooner, and that may end later; common practice is 5 %
 * @param delay s, above 0: how much later than it happens an analyser tells; what it tells is acted on that late, so that a window
 *   that is opened by it must begin earlier by as much, and is closed later
 * @param flow  m3/s
 * @param open  in how many draws the last stretch ends only because the run does
 * @returns undefined where no draw is beyond
 */
export function diversionOf(
  draws: readonly (readonly Span[])[],
  {
    tail = 0.05,
    delay = 0,
    flow,
    open = 0,
  }: { readonly tail?: number; readonly delay?: number; readonly flow: number; readonly open?: number },
): Diversion | undefined {
  const touched = draws.filter((spans) => spans.length > 0);
  if (touched.length === 0) return undefined;
  const starts = touched.map((spans) => spans[0].from).sort((a, b) => a - b);
  const ends = touched.map((spans) => spans[spans.length - 1].to).sort((a, b) => a - b);
  const from = Math.max(0, quantile(starts, tail) - delay);
  const to = quantile(ends, 1 - tail) + delay;
  const stillAtEnd = open / touched.length;
  return { from, to, touched: touched.length / draws.length, volume: flow * (to - from), stillAtEnd };
}

/** Between the two nearest of sorted values. */
function quantile(sorted: readonly number[], share: number): number {
  const at = share * (sorted.length - 1);
  const k = Math.floor(at);
  const next = sorted[Math.min(k + 1, sorted.length - 1)];
  return sorted[k] + (at - k) * (next - sorted[k]);
}
