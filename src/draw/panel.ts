import { line, path } from "../svg/marks.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { type Axis, bottomAxis, leftAxis, leftRoom, linearAxis, logAxis, logSpan } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import type { CurveLine, Curves, CurvesOptions } from "./curves-input.js";
import { type EndLabel, endLabels, endRoom } from "./line-labels.js";
import { namesWithin } from "./names-within.js";
import { narrow } from "./picture.js";
import { axisData, type PlotData } from "./plotted.js";
import { area, largest, points, trace } from "./traces.js";

/** Line styles from the foremost on: tone and dashes, so that grey print tells them apart. */
const styles = ["curve", "curve second", "curve third", "curve rest"];

/** One plot that begins at so many px from above. */
export function panel(
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
  const named = curves.lines.filter((l) => !l.unnamed && !l.beside);
  const plot: Box = { x: left, y: top, width: width - left - endRoom(named.map((l) => l.label)), height };
  const times = [
    ...curves.lines.flatMap((l) => [...Array.from(l.x), ...(l.spikes ?? []).map((s) => s.x)]),
    ...Array.from(curves.points?.x ?? []),
    ...(curves.upright ? [curves.upright.at] : []),
  ];
  const xRange = [plot.x, plot.x + plot.width] as const;
  const ax = curves.xLog ? logSpan(times, xRange) : linearAxis(times, xRange, width <= narrow ? 5 : 7, false);
  const floor = options.log ? ay.domain[0] * (1 - 1e-12) : Number.NEGATIVE_INFINITY;
  const measured = curves.points ? points(curves.points.x, curves.points.y, ax, ay, "point", floor).svg : "";
  // the foremost line is drawn last
  const lines = curves.lines.map((l, k) => trace(l.x, l.y, ax, ay, styleOf(l, k), floor)).reverse();
  const parts = [
    leftAxis(ay, plot, curves.y),
    ...curves.lines.map((l) => (l.band ? area(l.x, l.band.low, l.band.high, ax, ay) : "")),
    curves.level ? levelLine(curves.level, ay, plot) : "",
    curves.upright ? uprightLine(curves.upright.at, ax, plot) : "",
    measured,
    ...lines,
    ...curves.lines.map((l) => (l.dots ? points(l.dots.x, l.dots.y, ax, ay, "dots", floor).svg : "")),
    ...namesWithin(curves, ax, ay, plot),
    ...curves.lines.map((l) => spikes(l, curves.lines.length > 1, ax, plot)),
    bottomAxis(ax, plot, curves.x),
    endLabels(
      curves.lines.flatMap((l, k) => (l.unnamed || l.beside ? [] : [endOf(l, styleOf(l, k), ax, ay, plot)])),
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

const uprightLine = (at: number, ax: Axis, plot: Box): Svg =>
  line(ax.at(at), plot.y, ax.at(at), plot.y + plot.height, "leader");

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
      const words = `${named ? `${l.label}: ` : ""}${s.words ?? `${formatNumber(s.area * 100, 3)}\u2009%`} at ${formatNumber(s.x, 4)}`;
      const right = x > plot.x + plot.width * 0.7;
      return (
        line(x, base, x, tip + 6, "spike") +
        path(`M${px(x)} ${px(tip)}l-4 8h8Z`, "spike-tip") +
        drawCaption(caption([{ words, style: "look" }], right ? x - 7 : x + 7, tip - 4, right ? "end" : "start"))
      );
    })
    .join("");
}
