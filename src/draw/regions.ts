import { circle, line, path } from "../svg/marks.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { bottomAxis, leftAxis, leftRoom, linearAxis } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import { columnsFor, withMargin } from "./cells.js";
import { type PictureOptions, picture } from "./picture.js";
import { axisData, type PlotData, type Plotted } from "./plotted.js";

/** Pairs of estimates and what a fit leaves possible of both together. */
export interface Regions {
  readonly title: string;
  readonly pairs: readonly RegionPair[];
  /** Degrees of freedom of the fit. */
  readonly freedom: number;
}

/** Values and standard errors in the units that the names tell. */
export interface RegionPair {
  readonly x: RegionAxis;
  readonly y: RegionAxis;
  readonly correlation: number;
}

export interface RegionAxis {
  /** "corner, L" */
  readonly words: string;
  readonly value: number;
  readonly standardError: number;
  /** The interval of this one alone. */
  readonly interval: readonly [number, number];
}

const wide = 648; // px, of three columns
const cellHeight = 190;
const edgePoints = 96;

/**
 * One small plot per pair: the estimate, the ellipse that holds 95 % of what is possible for both together, and the two
 * single intervals as thin lines. A narrow slanting ellipse is a pair of which only a combination is known.
 * Ellipse: (p - p0)' C^-1 (p - p0) = 2 F(0.95; 2, freedom) (Draper & Smith, Applied Regression Analysis, 1998, section 5.4).
 */
export function plotRegions(of: Regions, options: PictureOptions & { readonly width?: number } = {}): Plotted {
  const { columns, cellWidth } = columnsFor(options.width ?? wide);
  const top = options.untitled ? 0 : 34;
  const plots: PlotData[] = [];
  const cells = of.pairs.map((pair, k) => {
    const left = (k % columns) * cellWidth;
    const { svg, data } = drawPair(pair, of.freedom, left, cellWidth, top + Math.floor(k / columns) * cellHeight);
    plots.push(data);
    return svg;
  });
  const title = options.untitled ? "" : drawCaption(caption([{ words: of.title, style: "title" }], 0, 0));
  const across = Math.min(columns, Math.max(1, of.pairs.length));
  const view = {
    x: -16,
    y: -12,
    width: across * cellWidth + 24,
    height: top + Math.ceil(of.pairs.length / columns) * cellHeight + 12,
  };
  return { drawing: picture(of.title, inWords(of), view, options.theme ?? "auto", [title, ...cells]), data: { plots } };
}

/** The edge of the region in the units of its axes; closed, the first point again at the end. */
export function regionEdge({ x, y, correlation }: RegionPair, freedom: number): { x: number[]; y: number[] } {
  const reach = Math.sqrt(2 * fQuantile95(freedom));
  const r = Math.max(-1, Math.min(1, correlation));
  const angles = Array.from({ length: edgePoints + 1 }, (_, k) => (2 * Math.PI * k) / edgePoints);
  return {
    x: angles.map((a) => x.value + reach * x.standardError * Math.cos(a)),
    y: angles.map((a) => y.value + reach * y.standardError * (r * Math.cos(a) + Math.sqrt(1 - r * r) * Math.sin(a))),
  };
}

/** 95 % point of F with 2 and n degrees of freedom: closed for two, since the tail is (1 + 2x/n)^(-n/2). */
const fQuantile95 = (n: number): number => (n / 2) * (0.05 ** (-2 / n) - 1);

function drawPair(
  pair: RegionPair,
  freedom: number,
  left: number,
  wide: number,
  top: number,
): { svg: Svg; data: PlotData } {
  const edge = regionEdge(pair, freedom);
  const yRange = [top + 22 + 110, top + 22] as const;
  const ay = linearAxis(withMargin([...edge.y, ...pair.y.interval]), yRange, 3, false);
  const x = left + leftRoom(ay);
  const plot: Box = { x, y: top + 22, width: left + wide - 22 - x, height: 110 };
  const ax = linearAxis(withMargin([...edge.x, ...pair.x.interval]), [plot.x, plot.x + plot.width], 3, false);
  const outline = edge.x.map((v, k) => `${k === 0 ? "M" : "L"}${px(ax.at(v))} ${px(ay.at(edge.y[k]))}`).join("");
  const [west, east] = pair.x.interval;
  const [south, north] = pair.y.interval;
  const foot = plot.y + plot.height;
  const svg = [
    leftAxis(ay, plot, pair.y.words),
    path(`${outline}Z`, "area"),
    path(`${outline}Z`, "curve thin"),
    line(ax.at(west), foot, ax.at(east), foot, "interval narrow"),
    line(plot.x, ay.at(south), plot.x, ay.at(north), "interval narrow"),
    circle(ax.at(pair.x.value), ay.at(pair.y.value), 3.5, "value"),
    bottomAxis(ax, plot, pair.x.words),
  ].join("");
  const label = `${pair.y.words} against ${pair.x.words}`;
  const axes = { x: axisData(ax, pair.x.words), y: axisData(ay, pair.y.words) };
  return { svg, data: { label, box: plot, ...axes, series: [{ label: "edge of the region", ...edge }] } };
}

function inWords(of: Regions): string {
  const pairs = of.pairs.map((p) => `${p.x.words} and ${p.y.words}, correlation ${p.correlation.toFixed(2)}`);
  return `Regions that hold 95 % of what is possible for pairs of parameters: ${pairs.join("; ")}.`;
}
