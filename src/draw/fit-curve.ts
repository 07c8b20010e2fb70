import { line } from "../svg/marks.js";
import type { Box, Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { bottomAxis, leftAxis, leftRoom, linearAxis, logAxis } from "./axes.js";
import { caption, drawCaption, lineHeight, type Words } from "./caption.js";
import { besideLine, clutterOf, type FitReading, inLines, lineOf, rug, timeMarks } from "./fit-marks.js";
import { placeAt } from "./line-labels.js";
import { narrow, type PictureOptions, picture } from "./picture.js";
import { axisData, type PlotData, type Plotted } from "./plotted.js";
import { area, largest, points, stems, trace } from "./traces.js";

export type { FitReading } from "./fit-marks.js";

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
  const values = [...Array.from(r.measured), ...Array.from(r.fitted), ...Array.from(r.fine?.value ?? [])];
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
  const drawn = lineOf(r);
  const name = (words: Words, time: ArrayLike<number>, of: ArrayLike<number>): Svg | undefined =>
    placeAt(words, besideLine(time, of, ax, ay), clutter, plot);
  const names = [
    name({ words: lineName, style: "name" }, drawn.time, drawn.value),
    name(
      { words: width <= narrow ? "measured" : `measured, ${r.time.length} points`, style: "quiet" },
      r.time,
      r.measured,
    ),
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
    trace(drawn.time, drawn.value, ax, ay, "curve", floor),
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
      ...(r.fine ? [{ label: `${lineName}, between`, x: r.fine.time, y: r.fine.value, hidden: true }] : []),
    ],
  };
  return { svg, bottom: strip.y + strip.height + (r.marks?.length ? 46 : 36), data };
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

function inWords(curve: FitCurve): string {
  const parts = curve.readings.map((r) => {
    const marks = (r.marks ?? []).map((m) => `${m.name} ${formatNumber(m.time, 3)} ${curve.timeUnit}`).join(", ");
    return `${r.label}: ${r.time.length} measured points and the ${curve.lineName ?? "fitted"} line${marks ? `; ${marks}` : ""}`;
  });
  return `${curve.value} against time in ${curve.timeUnit}, residuals below. ${parts.join(". ")}.`;
}
