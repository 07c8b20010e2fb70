import { line } from "../svg/marks.js";
import type { Box, Svg } from "../svg/svg.js";
import { type Axis, bottomAxis, leftAxis, leftRoom, linearAxis } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import { columnsFor, withMargin } from "./cells.js";
import { type PictureOptions, picture } from "./picture.js";
import { axisData, type PlotData, type Plotted } from "./plotted.js";
import { trace } from "./traces.js";

/** How the misfit rises as one parameter is held beside its best value and all others follow. */
export interface Profiles {
  readonly title: string;
  readonly profiles: readonly ProfilePanel[];
}

export interface ProfilePanel {
  /** "corner, L" */
  readonly words: string;
  /** Ascending, in the unit that the words tell. */
  readonly value: ArrayLike<number>;
  /** Signed root of the rise, in standard deviations of one reading. */
  readonly deviation: ArrayLike<number>;
  /** Where the rise reaches the limit; undefined where it does not. */
  readonly interval: readonly [number | undefined, number | undefined];
  /** Does the rise run through the limit at each end? If not it jumps, or a bound comes first. */
  readonly through: readonly [boolean, boolean];
}

const wide = 648; // px, of three columns
const cellHeight = 186;
const plotHeight = 106;

/**
 * One small plot per parameter: the rise of the sum of squares, the limit that closes the 95 % interval, the interval as a bar
 * (with what declared ± bring, so that it may reach further than the curve), and, dashed, the parabola of linear theory. Where both curves differ, the interval of the profile is the one to believe
 * (Bates & Watts, Nonlinear Regression Analysis, 1988, chapter 6).
 */
export function plotProfiles(of: Profiles, options: PictureOptions & { readonly width?: number } = {}): Plotted {
  const { columns, cellWidth } = columnsFor(options.width ?? wide);
  const top = options.untitled ? 0 : 34;
  const plots: PlotData[] = [];
  const cells = of.profiles.map((p, k) => {
    const { svg, data } = panel(p, (k % columns) * cellWidth, cellWidth, top + Math.floor(k / columns) * cellHeight);
    plots.push(data);
    return svg;
  });
  const title = options.untitled ? "" : drawCaption(caption([{ words: of.title, style: "title" }], 0, 0));
  const across = Math.min(columns, Math.max(1, of.profiles.length));
  const height = top + Math.ceil(of.profiles.length / columns) * cellHeight + 12;
  const view = { x: -16, y: -12, width: across * cellWidth + 24, height };
  return { drawing: picture(of.title, inWords(of), view, options.theme ?? "auto", [title, ...cells]), data: { plots } };
}

/** The limit of the rise: where profiles end that run through it; without any, that of a normal variable. */
function limitOf({ deviation, through }: ProfilePanel): number {
  const ends = [deviation[0], deviation[deviation.length - 1]].filter((_, k) => through[k]).map(Math.abs);
  return ends.length > 0 ? Math.min(...ends) : 1.96;
}

function panel(p: ProfilePanel, left: number, wide: number, top: number): { svg: Svg; data: PlotData } {
  const limit = limitOf(p) ** 2;
  const rise = Array.from(p.deviation, (d) => d * d);
  const yRange = [top + 24 + plotHeight, top + 24] as const;
  const ay = linearAxis([0, 1.25 * limit], yRange, 3, false);
  const x = left + leftRoom(ay);
  const plot: Box = { x, y: top + 24, width: left + wide - 22 - x, height: plotHeight };
  const ends = p.interval.filter((v) => v !== undefined);
  const ax = linearAxis(withMargin([...Array.from(p.value), ...ends]), [plot.x, plot.x + plot.width], 3, false);
  const foot = plot.y + plot.height;
  const [low, high] = [p.interval[0] ?? ax.domain[0], p.interval[1] ?? ax.domain[1]];
  const svg = [
    leftAxis(ay, plot, "rise of the misfit"),
    line(plot.x, ay.at(limit), plot.x + plot.width, ay.at(limit), "between"),
    parabola(p, ax, ay),
    trace(
      finely(p.value),
      finely(p.deviation).map((d) => Math.min(d * d, ay.domain[1])),
      ax,
      ay,
      "curve",
    ),
    line(ax.at(low), foot, ax.at(high), foot, "interval narrow"),
    bottomAxis(ax, plot, p.words),
  ].join("");
  const axes = { x: axisData(ax, p.words), y: axisData(ay, "rise of the misfit") };
  return { svg, data: { label: p.words, box: plot, ...axes, series: [{ label: "rise", x: p.value, y: rise }] } };
}

/** Between points the deviation is nearly straight, its square is not. */
const finely = (of: ArrayLike<number>): number[] =>
  Array.from(of).flatMap((v, k) =>
    k + 1 < of.length ? Array.from({ length: 6 }, (_, j) => v + ((of[k + 1] - v) * j) / 6) : [v],
  );

/** What linear theory takes the rise for: a parabola with the curvature at the best value. */
function parabola({ value, deviation }: ProfilePanel, ax: Axis, ay: Axis): Svg {
  let best = 0;
  for (let k = 1; k < value.length; k++) if (Math.abs(deviation[k]) < Math.abs(deviation[best])) best = k;
  const [before, after] = [Math.max(0, best - 1), Math.min(value.length - 1, best + 1)];
  const width = (value[after] - value[before]) / (deviation[after] - deviation[before]);
  if (!(width > 0) || !Number.isFinite(width)) return "";
  const reach = Math.sqrt(ay.domain[1]) * width;
  const x = Array.from({ length: 61 }, (_, k) => value[best] + (reach * (k - 30)) / 30);
  const y = x.map((v) => ((v - value[best]) / width) ** 2);
  return trace(x, y, ax, ay, "curve second");
}

function inWords(of: Profiles): string {
  const words = of.profiles.map(({ words: name, interval: [low, high] }) => {
    const end = (v: number | undefined): string => (v === undefined ? "open" : String(Number(v.toPrecision(4))));
    return `${name}: ${end(low)} to ${end(high)}`;
  });
  return `How the misfit rises as each parameter is held beside its best value. 95 % intervals by profile: ${words.join("; ")}.`;
}
