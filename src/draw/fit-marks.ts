import { path } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import type { Axis } from "./axes.js";
import { caption, drawCaption, type Words } from "./caption.js";
import { Clutter } from "./clutter.js";
import { separated } from "./heights.js";
import { placeAt } from "./line-labels.js";

/** One reading of a drawing of measured and fitted curves. */
export interface FitReading {
  /** Trial and place. */
  readonly label: string;
  readonly time: ArrayLike<number>;
  readonly measured: ArrayLike<number>;
  readonly fitted: ArrayLike<number>;
  readonly residual: ArrayLike<number>;
  /** The fitted line between the points, where it is known there. */
  readonly fine?: { readonly time: ArrayLike<number>; readonly value: ArrayLike<number> };
  /** Points that the fit did not use, and why. */
  readonly leftOut?: readonly { readonly time: number; readonly because: string }[];
  /** 95 % of fitted curves lie here. */
  readonly band?: { readonly low: ArrayLike<number>; readonly high: ArrayLike<number> };
  /** Ticks under the time axis: t10, mean, t90. */
  readonly marks?: readonly { readonly name: string; readonly time: number }[];
  /** File that the points came from. */
  readonly source?: string;
}

/** The fitted line: between the points where it is known there. */
export const lineOf = (r: FitReading): NonNullable<FitReading["fine"]> => r.fine ?? { time: r.time, value: r.fitted };

/** Remarks one after the other, on as many lines as their width needs. */
export function inLines(says: readonly string[], width: number): Words[] {
  const lines: string[] = [];
  for (const s of says) {
    const last = lines[lines.length - 1];
    const longer = last === undefined ? s : `${last}; ${s}`;
    if (last !== undefined && textWidth(longer, 11) > width) lines.push(s);
    else lines[Math.max(0, lines.length - 1)] = longer;
  }
  return lines.map((words) => ({ words, style: "quiet" }));
}

/** Places beside a line, from its highest point rightwards, then leftwards. */
export function* besideLine(
  time: ArrayLike<number>,
  value: ArrayLike<number>,
  ax: Axis,
  ay: Axis,
): Generator<{ x: number; y: number }> {
  let peak = 0;
  for (let k = 1; k < value.length; k++) if (value[k] > value[peak] || !Number.isFinite(value[peak])) peak = k;
  for (const away of [6, 14, 26, 42, 64, 90, 130]) {
    const step = Math.max(1, Math.round(value.length / 60));
    for (let k = peak; k < time.length; k += step) {
      if (!Number.isFinite(value[k])) continue;
      yield { x: ax.at(time[k]) + away, y: ay.at(value[k]) - 7 };
      yield { x: ax.at(time[k]) + away * 0.7, y: ay.at(value[k]) - 12 - away * 0.7 };
    }
  }
}

/** Boxes of all that the points and the line cover. */
export function clutterOf(r: FitReading, ax: Axis, ay: Axis): Clutter {
  const clutter = new Clutter();
  const drawn = lineOf(r);
  for (const { time, value } of [{ time: r.time, value: r.measured }, drawn]) {
    let before: { x: number; y: number } | undefined;
    for (let k = 0; k < time.length; k++) {
      if (!Number.isFinite(value[k])) continue;
      const here = { x: ax.at(time[k]), y: ay.at(value[k]) };
      if (before && Math.abs(here.x - before.x) + Math.abs(here.y - before.y) < 1) continue;
      const joined = value === drawn.value && before ? before : here;
      const [x, y] = [Math.min(here.x, joined.x), Math.min(here.y, joined.y)];
      clutter.add({
        x: x - 2,
        y: y - 2,
        width: Math.abs(here.x - joined.x) + 4,
        height: Math.abs(here.y - joined.y) + 4,
      });
      before = here;
    }
  }
  return clutter;
}

/** What was left out, as ticks along the top, with the reasons. */
export function rug(r: FitReading, ax: Axis, plot: Box, clutter: Clutter): Svg {
  const out = r.leftOut ?? [];
  if (out.length === 0) return "";
  const reasons = [...new Set(out.map((o) => o.because))].join("; ");
  const d = out
    .filter((o) => o.time >= ax.domain[0] && o.time <= ax.domain[1])
    .map((o) => `M${px(ax.at(o.time))} ${px(plot.y)}v8`)
    .join("");
  const words = `left out: ${reasons}`;
  const first = ax.at(out[0].time);
  const spots = [first, plot.x + plot.width - textWidth(words, 11), plot.x + 4].map((x) => ({ x, y: plot.y + 10 }));
  return path(d, "point out") + (placeAt({ words, style: "quiet" }, spots, clutter, plot) ?? "");
}

/** Small marks under the time axis, their names apart from one another. */
export function timeMarks(r: FitReading, ax: Axis, plot: Box): Svg {
  const marks = [...(r.marks ?? [])]
    .filter((m) => m.time >= ax.domain[0] && m.time <= ax.domain[1])
    .sort((a, b) => a.time - b.time);
  const words = marks.map((m) => `${m.name} ${formatNumber(m.time, 3)}`);
  const widths = words.map((w) => textWidth(w, 11, "bold"));
  const gaps = marks.slice(1).map((_, k) => (widths[k] + widths[k + 1]) / 2 + 8);
  const at = separated(
    marks.map((m) => ax.at(m.time)),
    marks.map(() => 1),
    gaps,
  );
  const y = plot.y + plot.height;
  return marks
    .map((m, k) => {
      const x = ax.at(m.time);
      const tip = path(`M${px(x)} ${px(y)}l-4 7h8Z`, "terminal");
      return tip + drawCaption(caption([{ words: words[k], style: "plain" }], at[k], y + 30, "middle"));
    })
    .join("");
}
