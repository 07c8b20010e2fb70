import { line, path } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { type Axis, bottomAxis, leftAxis, leftRoom, linearAxis, logAxis } from "./axes.js";
import { caption, drawCaption, lineHeight, type Words } from "./caption.js";
import { Clutter } from "./clutter.js";
import { separated } from "./heights.js";
import { placeAt } from "./line-labels.js";
import { narrow, type PictureOptions, picture } from "./picture.js";
import { axisData, type PlotData, type Plotted } from "./plotted.js";
import { area, largest, points, stems, trace } from "./traces.js";

/** Measured and fitted curve of one or more readings, each above its residuals. All arrays of a reading are of one length. */
export interface FitCurve {
  readonly title: string;
  readonly timeUnit: string;
  /** What is measured and its unit: "tracer, g/L". */
  readonly value: string;
  /** What the line is, where it is not fitted. */
  readonly lineName?: string;
  readonly readings: readonly FitReading[];
}

export interface FitReading {
  /** Trial and place. */
  readonly label: string;
  readonly time: ArrayLike<number>;
  readonly measured: ArrayLike<number>;
  readonly fitted: ArrayLike<number>;
  readonly residual: ArrayLike<number>;
  /** Points that the fit did not use, and why. */
  readonly leftOut?: readonly { readonly time: number; readonly because: string }[];
  /** 95 % of fitted curves lie here. */
  readonly band?: { readonly low: ArrayLike<number>; readonly high: ArrayLike<number> };
  /** Ticks under the time axis: t10, mean, t90. */
  readonly marks?: readonly { readonly name: string; readonly time: number }[];
  /** File that the points came from. */
  readonly source?: string;
}

export interface FitCurveOptions extends PictureOptions {
  /** A logarithmic value axis, for tails. */
  readonly log?: boolean;
  /** Width of a panel in px, 640 by default. */
  readonly width?: number;
}

const tallest = 230;
const lowest = 180; // of a narrow one
const stripHeight = 52;

/** Measured points small and open, the fitted line on top, its band behind; residuals below on the same time axis. */
export const drawFit = (curve: FitCurve, options: FitCurveOptions = {}): Svg => plotFit(curve, options).drawing;

/** The same with the numbers behind it. */
export function plotFit(curve: FitCurve, options: FitCurveOptions = {}): Plotted {
  const width = options.width ?? 640;
  const parts: Svg[] = [];
  const plots: PlotData[] = [];
  let y = 0;
  if (!options.untitled) {
    parts.push(drawCaption(caption([{ words: curve.title, style: "title" }], 0, 0)));
    y += 34;
  }
  for (const reading of curve.readings) {
    const panel = drawPanel(reading, curve, y, width, options.log ?? false);
    parts.push(panel.svg);
    plots.push(panel.data);
    y = panel.bottom + 20;
  }
  const view = { x: -16, y: -12, width: width + 32, height: y + 4 };
  return { drawing: picture(curve.title, inWords(curve), view, options.theme ?? "auto", parts), data: { plots } };
}

function drawPanel(
  r: FitReading,
  curve: FitCurve,
  top: number,
  width: number,
  log: boolean,
): { svg: Svg; bottom: number; data: PlotData } {
  const lineName = curve.lineName ?? "fitted";
  const plotHeight = width <= narrow ? lowest : tallest;
  const values = [...Array.from(r.measured), ...Array.from(r.fitted)];
  const head = 42 + (width <= narrow ? lineHeight : 0);
  const yRange = [top + head + plotHeight, top + head] as const;
  const ay = log ? logAxis(values, yRange) : linearAxis([...values, 0, 1.06 * largest(values, 0)], yRange, 5, false);
  const worst = largest(Array.from(r.residual, Math.abs), 0) || 1;
  const stripTop = top + head + plotHeight + 20;
  const ar = linearAxis([-worst, worst], [stripTop + stripHeight, stripTop], 2, false);
  const residualAxis = { ...ar, ticks: [-1, 0, 1].map((side) => (side === 0 ? 0 : side * roundBelow(worst))) };
  const left = Math.max(leftRoom(ay), leftRoom(residualAxis));
  const plot: Box = { x: left, y: top + head, width: width - left, height: plotHeight };
  const strip: Box = { ...plot, y: stripTop, height: stripHeight };
  const ax = linearAxis(Array.from(r.time), [plot.x, plot.x + plot.width], width <= narrow ? 5 : 8, false);
  const floor = log ? ay.domain[0] * (1 - 1e-12) : Number.NEGATIVE_INFINITY;
  const measured = points(r.time, r.measured, ax, ay, "point", floor);
  const clutter = clutterOf(r, ax, ay);
  const leftOut = rug(r, ax, plot, clutter);
  const name = (words: Words, of: ArrayLike<number>): Svg | undefined =>
    placeAt(words, besideLine(r.time, of, ax, ay), clutter, plot);
  const names = [
    name({ words: lineName, style: "name" }, r.fitted),
    name({ words: width <= narrow ? "measured" : `measured, ${r.time.length} points`, style: "quiet" }, r.measured),
  ];
  const says = [
    r.source ? `${r.label}, from ${r.source}` : r.label,
    ...(width <= narrow ? [`${r.time.length} points`] : []),
    // where the plot has no room for names, they stand above it
    ...(names.includes(undefined) ? [`circles measured, line ${lineName}`] : []),
    ...(log && measured.hidden > 0 ? [`${measured.hidden} points at or below the axis not shown`] : []),
  ];
  const svg = [
    drawCaption(caption(inLines(says, width), 0, top)),
    leftAxis(ay, plot, curve.value),
    r.band ? area(r.time, r.band.low, r.band.high, ax, ay) : "",
    measured.svg,
    trace(r.time, r.fitted, ax, ay, "curve", floor),
    leftOut,
    ...names.map((n) => n ?? ""),
    bottomAxis(ax, plot, "", true),
    leftAxis({ ...residualAxis, ticks: residualAxis.ticks.filter((t) => t !== 0) }, strip, ""),
    line(strip.x, ar.at(0), strip.x + strip.width, ar.at(0), "axis"),
    stems(r.time, r.residual, ax, ar),
    drawCaption(
      caption([{ words: residualName(curve.value), style: "quiet" }], strip.x + strip.width, strip.y - 16, "end"),
    ),
    bottomAxis(ax, strip, `time, ${curve.timeUnit}`),
    timeMarks(r, ax, strip),
  ].join("");
  const data = {
    label: r.label,
    box: plot,
    x: axisData(ax, `time, ${curve.timeUnit}`),
    y: axisData(ay, curve.value, log),
    series: [
      { label: "measured", x: r.time, y: r.measured },
      { label: lineName, x: r.time, y: r.fitted },
      { label: "residual", x: r.time, y: r.residual, hidden: true },
    ],
  };
  return { svg, bottom: strip.y + strip.height + (r.marks?.length ? 46 : 36), data };
}

/** Remarks one after the other, on as many lines as their width needs. */
function inLines(says: readonly string[], width: number): Words[] {
  const lines: string[] = [];
  for (const s of says) {
    const last = lines[lines.length - 1];
    const longer = last === undefined ? s : `${last}; ${s}`;
    if (last !== undefined && textWidth(longer, 11) > width) lines.push(s);
    else lines[Math.max(0, lines.length - 1)] = longer;
  }
  return lines.map((words) => ({ words, style: "quiet" }));
}

/** 1, 2 or 5 times a power of ten, no more than a number. */
function roundBelow(x: number): number {
  const decade = Math.floor(Math.log10(x));
  const leading = [5, 2, 1].find((d) => d <= x / 10 ** decade) ?? 1;
  return Number(`${leading}e${decade}`);
}

/** "residual, g/L", in the unit of what is measured. */
const residualName = (value: string): string => {
  const at = value.lastIndexOf(", ");
  return at < 0 || value.length < at + 3 ? "residual" : `residual${value.slice(at)}`;
};

/** Places beside a line, from its highest point rightwards, then leftwards. */
function* besideLine(
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

function clutterOf(r: FitReading, ax: Axis, ay: Axis): Clutter {
  const clutter = new Clutter();
  for (const line of [r.measured, r.fitted]) {
    let before: { x: number; y: number } | undefined;
    for (let k = 0; k < r.time.length; k++) {
      if (!Number.isFinite(line[k])) continue;
      const here = { x: ax.at(r.time[k]), y: ay.at(line[k]) };
      if (before && Math.abs(here.x - before.x) + Math.abs(here.y - before.y) < 1) continue;
      const joined = line === r.fitted && before ? before : here;
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
function rug(r: FitReading, ax: Axis, plot: Box, clutter: Clutter): Svg {
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
function timeMarks(r: FitReading, ax: Axis, plot: Box): Svg {
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

function inWords(curve: FitCurve): string {
  const parts = curve.readings.map((r) => {
    const marks = (r.marks ?? []).map((m) => `${m.name} ${formatNumber(m.time, 3)} ${curve.timeUnit}`).join(", ");
    return `${r.label}: ${r.time.length} measured points and the ${curve.lineName ?? "fitted"} line${marks ? `; ${marks}` : ""}`;
  });
  return `${curve.value} against time in ${curve.timeUnit}, residuals below. ${parts.join(". ")}.`;
}
