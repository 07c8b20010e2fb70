import { line, path } from "../svg/marks.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { type Axis, bottomAxis, leftAxis, leftRoom, linearAxis, logAxis, logSpan } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import { type EndLabel, endLabels, endRoom } from "./line-labels.js";
import { type PictureOptions, picture } from "./picture.js";
import { axisData, type PlotData, type Plotted } from "./plotted.js";
import { area, largest, points, trace } from "./traces.js";

/** Lines over one pair of axes, such as E or F of several outlets, or rivals over the same points. */
export interface Curves {
  readonly title: string;
  /** Quantity and unit: "time, min", "E, 1/min". */
  readonly x: string;
  readonly y: string;
  readonly lines: readonly CurveLine[];
  /** Decades along the bottom. */
  readonly xLog?: boolean;
  /** The axis need not reach down to nothing: what matters are differences. */
  readonly free?: boolean;
  /** A limit or a target. */
  readonly level?: { readonly at: number; readonly label: string };
  /** Measured points behind the lines; or marks of another sort, `named` beside the first of them. */
  readonly points?: {
    readonly x: ArrayLike<number>;
    readonly y: ArrayLike<number>;
    readonly label?: string;
    readonly named?: boolean;
  };
}

export interface CurveLine {
  readonly label: string;
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  /** Parts of a distribution that all come at one time: plug flow. `area` is the share of the whole. */
  readonly spikes?: readonly { readonly x: number; readonly area: number }[];
  /** 95 % of what is possible lies here. */
  readonly band?: { readonly low: ArrayLike<number>; readonly high: ArrayLike<number> };
  readonly accent?: boolean;
  /** Leave the name at its end out: the axis says it. */
  readonly unnamed?: boolean;
}

export interface CurvesOptions extends PictureOptions {
  readonly log?: boolean;
  readonly width?: number;
  readonly height?: number;
}

/** Line styles from the foremost on: tone and dashes, so that grey print tells them apart. */
const styles = ["curve", "curve second", "curve third", "curve rest"];

/** Draws the lines with their names at their right ends, and spikes as arrows with their share. */
export const drawCurves = (curves: Curves, options: CurvesOptions = {}): Svg => plotCurves(curves, options).drawing;

/** The same with the numbers behind it. */
export const plotCurves = (curves: Curves, options: CurvesOptions = {}): Plotted =>
  plotStacked(curves.title, [curves], options);

/** Several plots under one another in one drawing, such as the figures of a duty over the same input. */
export function plotStacked(title: string, all: readonly Curves[], options: CurvesOptions = {}): Plotted {
  const width = options.width ?? 640;
  const height = options.height ?? 240;
  const parts = options.untitled ? [] : [drawCaption(caption([{ words: title, style: "title" }], 0, 0))];
  const plots: PlotData[] = [];
  let top = options.untitled ? 22 : 54;
  // One left edge for all.
  const sized = { ...options, width, height };
  const left = all.length > 1 ? Math.max(...all.map((curves) => panel(curves, sized, 0).data.box.x)) : 0;
  for (const curves of all) {
    const made = panel(curves, { ...sized, left }, top);
    parts.push(...made.parts);
    plots.push({ ...made.data, label: all.length > 1 ? curves.title : "" });
    top += height + panelRoom;
  }
  const view = { x: -16, y: -12, width: width + 32, height: top - panelRoom + 60 };
  const says = all.map(inWords).join(" ");
  return { drawing: picture(title, says, view, options.theme ?? "auto", parts), data: { plots } };
}

/** Between two plots: the axis of the upper one, the name of the lower. */
const panelRoom = 66;

/** One plot that begins at so many px from above. */
function panel(
  curves: Curves,
  options: CurvesOptions & { readonly width: number; readonly height: number; readonly left?: number },
  top: number,
): { readonly parts: readonly Svg[]; readonly data: PlotData } {
  const { width, height } = options;
  const yRange = [top + height, top] as const;
  const values = [
    ...curves.lines.flatMap((l) => [
      ...Array.from(l.y),
      ...(options.log
        ? []
        : [...Array.from(l.band?.high ?? []), ...(curves.free ? Array.from(l.band?.low ?? []) : [])]),
    ]),
    ...Array.from(curves.points?.y ?? []),
    ...(curves.level ? [curves.level.at] : []),
  ];
  const ay = options.log
    ? logAxis(values, yRange)
    : linearAxis(curves.free ? values : [...aboveNoise(values), 0], yRange, 5);
  const left = Math.max(options.left ?? 0, leftRoom(ay));
  const named = curves.lines.filter((l) => !l.unnamed);
  const plot: Box = { x: left, y: top, width: width - left - endRoom(named.map((l) => l.label)), height };
  const times = [
    ...curves.lines.flatMap((l) => [...Array.from(l.x), ...(l.spikes ?? []).map((s) => s.x)]),
    ...Array.from(curves.points?.x ?? []),
  ];
  const xRange = [plot.x, plot.x + plot.width] as const;
  const ax = curves.xLog ? logSpan(times, xRange) : linearAxis(times, xRange, 7, false);
  const floor = options.log ? ay.domain[0] * (1 - 1e-12) : Number.NEGATIVE_INFINITY;
  const measured = curves.points ? points(curves.points.x, curves.points.y, ax, ay, "point", floor).svg : "";
  // the foremost line is drawn last
  const lines = curves.lines.map((l, k) => trace(l.x, l.y, ax, ay, styleOf(l, k), floor)).reverse();
  const parts = [
    leftAxis(ay, plot, curves.y),
    ...curves.lines.map((l) => (l.band ? area(l.x, l.band.low, l.band.high, ax, ay) : "")),
    curves.level ? levelLine(curves.level, ay, plot) : "",
    measured,
    ...lines,
    curves.points ? pointName(curves.points, ax, ay, plot) : "",
    ...curves.lines.map((l) => spikes(l, curves.lines.length > 1, ax, plot)),
    bottomAxis(ax, plot, curves.x),
    endLabels(
      curves.lines.flatMap((l, k) => (l.unnamed ? [] : [endOf(l, styleOf(l, k), ax, ay, plot)])),
      plot,
    ).svg,
  ];
  const { points: p } = curves;
  const series = [
    ...(p ? [{ label: p.named ? (p.label ?? "") : "measured", x: p.x, y: p.y }] : []),
    ...curves.lines.flatMap((l) => [
      { label: l.label, x: l.x, y: l.y },
      ...(l.band
        ? [
            { label: `${l.label}, 2.5 %`, x: l.x, y: l.band.low, hidden: true },
            { label: `${l.label}, 97.5 %`, x: l.x, y: l.band.high, hidden: true },
          ]
        : []),
    ]),
  ];
  const axes = { x: axisData(ax, curves.x, curves.xLog), y: axisData(ay, curves.y, options.log) };
  return { parts, data: { label: "", box: plot, ...axes, series } };
}

/** A limit or target across a plot, with its name above its right end. */
function levelLine({ at, label }: NonNullable<Curves["level"]>, ay: Axis, plot: Box): Svg {
  const y = ay.at(at);
  return (
    line(plot.x, y, plot.x + plot.width, y, "leader") +
    drawCaption(caption([{ words: label, style: "look" }], plot.x + plot.width - 4, y - 14, "end"))
  );
}

/** Without what lies a little below zero: noise about nothing should not double the axis. */
function aboveNoise(values: readonly number[]): readonly number[] {
  const least = -0.06 * largest(values, 0);
  return values.filter((v) => v >= 0 || v < least);
}

const styleOf = (l: CurveLine, k: number): string =>
  l.accent ? "curve accent" : styles[Math.min(k, styles.length - 1)];

function endOf(l: CurveLine, className: string, ax: Axis, ay: Axis, plot: Box): EndLabel {
  let k = l.x.length - 1;
  while (k > 0 && !Number.isFinite(l.y[k])) k--;
  const y = k >= 0 && Number.isFinite(l.y[k]) ? ay.at(l.y[k]) : plot.y + plot.height;
  const x = k >= 0 ? ax.at(l.x[k]) : plot.x + plot.width;
  return {
    words: l.label,
    style: l.accent ? "look" : "plain",
    className,
    x,
    y: Math.min(plot.y + plot.height, Math.max(plot.y, y)),
  };
}

/** The name of a mark, on the side of it where there is room. */
function pointName({ x, y, label, named }: NonNullable<Curves["points"]>, ax: Axis, ay: Axis, plot: Box): Svg {
  if (!named || label === undefined || x.length === 0 || !Number.isFinite(y[0])) return "";
  const at = ax.at(x[0]);
  const right = at > plot.x + plot.width * 0.7;
  const beside = caption(
    [{ words: label, style: "name" }],
    right ? at - 9 : at + 9,
    ay.at(y[0]) - 8,
    right ? "end" : "start",
  );
  return drawCaption(beside);
}

function spikes(l: CurveLine, named: boolean, ax: Axis, plot: Box): Svg {
  const base = plot.y + plot.height;
  return (l.spikes ?? [])
    .map((s) => {
      const x = ax.at(s.x);
      const tip = plot.y + 18;
      const words = `${named ? `${l.label}: ` : ""}${formatNumber(s.area * 100, 3)}\u2009% at ${formatNumber(s.x, 4)}`;
      const right = x > plot.x + plot.width * 0.7;
      return (
        line(x, base, x, tip + 6, "spike") +
        path(`M${px(x)} ${px(tip)}l-4 8h8Z`, "spike-tip") +
        drawCaption(caption([{ words, style: "look" }], right ? x - 7 : x + 7, tip - 4, right ? "end" : "start"))
      );
    })
    .join("");
}

function inWords(curves: Curves): string {
  const lines = curves.lines.map((l) => {
    const at = (l.spikes ?? []).map((s) => `${formatNumber(s.area * 100, 3)} % at ${formatNumber(s.x, 4)}`);
    return at.length > 0 ? `${l.label} (with ${at.join(", ")} at once)` : l.label;
  });
  return `${curves.y} against ${curves.x}. Lines: ${lines.join("; ")}.${curves.points ? ` ${curves.points.named ? "Marked" : "Measured points"}: ${curves.points.label ?? curves.points.x.length}.` : ""}`;
}
