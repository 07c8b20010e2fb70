import { extent } from "d3-array";
import { scaleLinear, scaleLog } from "d3-scale";
import { line, text } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import type { Box, Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { raised, typeset } from "./scale.js";

/** From numbers to px along one side of a plot. */
export interface Axis {
  readonly at: (value: number) => number;
  readonly domain: readonly [number, number];
  readonly ticks: readonly number[];
  /** Decades, told as powers of ten where the numbers would be long. */
  readonly log?: boolean;
}

/** What stands at the ticks. */
function tickWords({ ticks, log }: Axis): readonly string[] {
  const long = log && ticks.some((t) => t < 0.000_99 || t > 9_999);
  return ticks.map((t) => (long ? `10${raised(String(Math.round(Math.log10(t))))}` : typeset(formatNumber(t))));
}

/** A linear axis over all values, its ends at round numbers. Values that are no numbers are passed over. */
export function linearAxis(values: Iterable<number>, range: readonly [number, number], count = 6, nice = true): Axis {
  const scale = scaleLinear(spread(values), range);
  if (nice) scale.nice(count);
  const [low, high] = scale.domain();
  return { at: (v) => scale(v), domain: [low, high], ticks: scale.ticks(count) };
}

/** Decades from the largest value down, at most `decades`; smaller values lie on the lower end. */
export function logAxis(values: Iterable<number>, range: readonly [number, number], decades = 4): Axis {
  const positive = [...values].filter((v) => v > 0 && Number.isFinite(v));
  const most = positive.reduce((a, b) => Math.max(a, b), 1e-300);
  const high = 10 ** Math.ceil(Math.log10(most));
  const least = positive.reduce((a, b) => Math.min(a, b), high);
  const low = Math.max(10 ** Math.floor(Math.log10(least)), high / 10 ** decades);
  const scale = scaleLog([low === high ? high / 10 : low, high], range);
  const [from, to] = scale.domain();
  const steps = Math.round(Math.log10(to / from));
  const ticks = Array.from({ length: steps + 1 }, (_, k) => from * 10 ** k);
  return { at: (v) => scale(Math.min(to, Math.max(from, v))), domain: [from, to], ticks, log: true };
}

/** A logarithmic axis from the least to the largest positive value, with ticks at 1, 2 and 5 of each decade. */
export function logSpan(values: Iterable<number>, range: readonly [number, number]): Axis {
  const positive = [...values].filter((v) => v > 0 && Number.isFinite(v));
  const [low, high] = extent(positive);
  const [from, to] =
    low === undefined || high === undefined ? [1, 10] : low === high ? [low / 2, low * 2] : [low, high];
  const scale = scaleLog([from, to], range);
  const decades: number[] = [];
  for (let e = Math.floor(Math.log10(from)); e <= Math.ceil(Math.log10(to)); e++) decades.push(10 ** e);
  const steps = Math.log10(to / from) > 3 ? [1] : [1, 2, 5];
  const ticks = decades.flatMap((d) => steps.map((s) => Number((d * s).toPrecision(1))));
  return {
    at: (v) => scale(Math.max(v, 1e-300)),
    domain: [from, to],
    ticks: ticks.filter((t) => t >= from * (1 - 1e-9) && t <= to * (1 + 1e-9)),
  };
}

/** The horizontal axis below a plot with its words, such as "time, min". `bare` leaves numbers and words out. */
export function bottomAxis(axis: Axis, plot: Box, words: string, bare = false): Svg {
  const y = plot.y + plot.height;
  const parts = [line(plot.x, y, plot.x + plot.width, y, "axis")];
  let free = Number.NEGATIVE_INFINITY;
  const labels = tickWords(axis);
  for (const [k, tick] of axis.ticks.entries()) {
    const x = axis.at(tick);
    parts.push(line(x, y, x, y + 4, "axis"));
    const label = labels[k];
    const half = textWidth(label, 11) / 2;
    if (bare || x - half < free + 4) continue;
    parts.push(text(x, y + 16, label, "quiet", "middle"));
    free = x + half;
  }
  if (!bare && words !== "") parts.push(text(plot.x + plot.width, y + 32, withUnitSet(words), "quiet", "end"));
  return parts.join("");
}

/** The vertical axis left of a plot: faint lines across, numbers, and its words on top. */
export function leftAxis(axis: Axis, plot: Box, words: string): Svg {
  const labels = tickWords(axis);
  const parts = axis.ticks.flatMap((tick, k) => [
    line(plot.x, axis.at(tick), plot.x + plot.width, axis.at(tick), "grid"),
    text(plot.x - 6, axis.at(tick) + 3.5, labels[k], "quiet", "end"),
  ]);
  const wide = leftRoom(axis) - 6;
  return [...parts, words === "" ? "" : text(plot.x - wide, plot.y - 9, withUnitSet(words), "quiet")].join("");
}

/** "volume, m3" with its unit set properly. */
function withUnitSet(words: string): string {
  const cut = words.lastIndexOf(", ") + 2;
  return cut < 2 ? words : words.slice(0, cut) + typeset(words.slice(cut));
}

/** Room that the numbers left of a plot need, px. */
export const leftRoom = (axis: Axis): number =>
  Math.max(0, ...tickWords(axis).map((words) => textWidth(words, 11))) + 8;

function spread(values: Iterable<number>): [number, number] {
  const [low, high] = extent([...values].filter(Number.isFinite));
  if (low === undefined || high === undefined) return [0, 1];
  const some = Math.abs(low) * 0.1 || 1;
  return low === high ? [low - some, high + some] : [low, high];
}
