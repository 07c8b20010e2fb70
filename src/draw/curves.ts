import { line, path } from "../svg/marks.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { type Axis, bottomAxis, leftAxis, leftRoom, linearAxis, logAxis } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import { type EndLabel, endLabels, endRoom } from "./line-labels.js";
import { type PictureOptions, picture } from "./picture.js";
import { axisData, type Plotted } from "./plotted.js";
import { area, largest, points, trace } from "./traces.js";

/** Lines over one pair of axes, such as E or F of several outlets, or rivals over the same points. */
export interface Curves {
  readonly title: string;
  /** Quantity and unit: "time, min", "E, 1/min". */
  readonly x: string;
  readonly y: string;
  readonly lines: readonly CurveLine[];
  /** Measured points behind the lines. */
  readonly points?: { readonly x: ArrayLike<number>; readonly y: ArrayLike<number>; readonly label?: string };
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
export function plotCurves(curves: Curves, options: CurvesOptions = {}): Plotted {
  const width = options.width ?? 640;
  const height = options.height ?? 240;
  const top = options.untitled ? 22 : 54;
  const yRange = [top + height, top] as const;
  const values = [
    ...curves.lines.flatMap((l) => [...Array.from(l.y), ...(options.log ? [] : Array.from(l.band?.high ?? []))]),
    ...Array.from(curves.points?.y ?? []),
  ];
  const ay = options.log ? logAxis(values, yRange) : linearAxis([...aboveNoise(values), 0], yRange, 5);
  const left = leftRoom(ay);
  const plot: Box = { x: left, y: top, width: width - left - endRoom(curves.lines.map((l) => l.label)), height };
  const times = [
    ...curves.lines.flatMap((l) => [...Array.from(l.x), ...(l.spikes ?? []).map((s) => s.x)]),
    ...Array.from(curves.points?.x ?? []),
  ];
  const ax = linearAxis(times, [plot.x, plot.x + plot.width], 7, false);
  const floor = options.log ? ay.domain[0] * (1 - 1e-12) : Number.NEGATIVE_INFINITY;
  const measured = curves.points ? points(curves.points.x, curves.points.y, ax, ay, "point", floor).svg : "";
  // the foremost line is drawn last
  const lines = curves.lines.map((l, k) => trace(l.x, l.y, ax, ay, styleOf(l, k), floor)).reverse();
  const parts = [
    options.untitled ? "" : drawCaption(caption([{ words: curves.title, style: "title" }], 0, 0)),
    leftAxis(ay, plot, curves.y),
    ...curves.lines.map((l) => (l.band ? area(l.x, l.band.low, l.band.high, ax, ay) : "")),
    measured,
    ...lines,
    ...curves.lines.map((l) => spikes(l, curves.lines.length > 1, ax, plot)),
    bottomAxis(ax, plot, curves.x),
    endLabels(
      curves.lines.map((l, k) => endOf(l, styleOf(l, k), ax, ay, plot)),
      plot,
    ).svg,
  ];
  const view = { x: -16, y: -12, width: width + 32, height: top + height + 60 };
  const { points: p } = curves;
  const series = [
    ...(p ? [{ label: "measured", x: p.x, y: p.y }] : []),
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
  const axes = { x: axisData(ax, curves.x), y: axisData(ay, curves.y, options.log) };
  return {
    drawing: picture(curves.title, inWords(curves), view, options.theme ?? "auto", parts),
    data: { plots: [{ label: "", box: plot, ...axes, series }] },
  };
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
  return `${curves.y} against ${curves.x}. Lines: ${lines.join("; ")}.${curves.points ? ` Measured points: ${curves.points.label ?? curves.points.x.length}.` : ""}`;
}
