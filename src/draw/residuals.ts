import { line, path } from "../svg/marks.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { type Axis, bottomAxis, leftAxis, leftRoom, linearAxis } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import { narrow, type PictureOptions, picture } from "./picture.js";
import { axisData, type PlotData, type Plotted } from "./plotted.js";
import { largest, points } from "./traces.js";

/** What a fit leaves of its readings, in standard deviations. */
export interface Residuals {
  readonly title: string;
  readonly timeUnit: string;
  readonly readings: readonly ResidualReading[];
}

export interface ResidualReading {
  readonly label: string;
  readonly time: ArrayLike<number>;
  /** Weighted: in standard deviations of one reading. */
  readonly value: ArrayLike<number>;
  /** Correlation of neighbours 1, 2, 3, … readings apart. */
  readonly autocorrelation: ArrayLike<number>;
}

const plotHeight = 110;
const besideHeight = 78; // of the autocorrelation where it stands below
const below = 62; // px from the residuals to what stands below
const gap = 56; // px between the residuals and their autocorrelation

/**
 * Weighted residuals over time, and beside them how far neighbours hang together. Shaded bands hold 95 % of what independent
 * residuals give: 1.96 standard deviations, and 1.96/sqrt(n) (Box & Jenkins, Time Series Analysis, 1970, chapter 2).
 */
export function plotResiduals(of: Residuals, options: PictureOptions & { readonly width?: number } = {}): Plotted {
  const width = options.width ?? 640;
  const parts: Svg[] = [];
  const plots: PlotData[] = [];
  let y = 0;
  if (!options.untitled) {
    parts.push(drawCaption(caption([{ words: of.title, style: "title" }], 0, 0)));
    y += 34;
  }
  for (const r of of.readings) {
    const row = drawRow(r, of, y, width);
    parts.push(row.svg);
    plots.push(...row.plots);
    y += plotHeight + 88 + (width <= narrow ? besideHeight + below : 0);
  }
  const view = { x: -16, y: -12, width: width + 32, height: y + 4 };
  return { drawing: picture(of.title, inWords(of), view, options.theme ?? "auto", parts), data: { plots } };
}

function drawRow(r: ResidualReading, of: Residuals, top: number, width: number): { svg: Svg; plots: PlotData[] } {
  const y = top + 38;
  const most = Math.max(3, 1.05 * largest(Array.from(r.value, Math.abs), 0));
  const ay = linearAxis([-most, most], [y + plotHeight, y], 4, false);
  const left = leftRoom(ay);
  const stacked = width <= narrow;
  const side = stacked ? width - left : Math.round(width * 0.3);
  const plot: Box = { x: left, y, width: stacked ? side : width - left - side - gap, height: plotHeight };
  const ax = linearAxis(Array.from(r.time), [plot.x, plot.x + plot.width], 6, false);
  const times = `time, ${of.timeUnit}`;
  const own = [
    drawCaption(caption([{ words: r.label, style: "quiet" }], 0, top)),
    bandAcross(ay, 1.96, plot),
    leftAxis(ay, plot, "residual, standard deviations"),
    line(plot.x, ay.at(0), plot.x + plot.width, ay.at(0), "axis"),
    points(r.time, r.value, ax, ay, "point").svg,
    bottomAxis(ax, plot, times),
  ];
  const lags = Array.from(r.autocorrelation, (_, k) => k + 1);
  const beside: Box = stacked
    ? { x: left, y: y + plotHeight + below, width: side, height: besideHeight }
    : { x: plot.x + plot.width + gap, y, width: side, height: plotHeight };
  const low = Math.min(0, ...Array.from(r.autocorrelation)) - 0.05;
  const ac = linearAxis([low, 1], [beside.y + beside.height, beside.y], stacked ? 3 : 4);
  const whole = linearAxis([0, lags.length + 0.5], [beside.x, beside.x + beside.width], 5, false);
  // There is nothing half a reading apart.
  const al = { ...whole, ticks: whole.ticks.filter(Number.isInteger) };
  const half = 1.96 / Math.sqrt(Math.max(1, r.time.length));
  const bars = lags.map((k) => `M${px(al.at(k))} ${px(ac.at(0))}V${px(ac.at(r.autocorrelation[k - 1]))}`).join("");
  const neighbours = [
    bandAcross(ac, half, beside),
    leftAxis(ac, beside, "autocorrelation"),
    line(beside.x, ac.at(0), beside.x + beside.width, ac.at(0), "axis"),
    bars === "" ? "" : path(bars, "bar"),
    bottomAxis(al, beside, "readings apart"),
  ];
  return {
    svg: [...own, ...neighbours].join(""),
    plots: [
      {
        label: r.label,
        box: plot,
        x: axisData(ax, times),
        y: axisData(ay, "residual, standard deviations"),
        series: [{ label: "residual", x: r.time, y: r.value }],
      },
      {
        label: r.label,
        box: beside,
        x: axisData(al, "readings apart"),
        y: axisData(ac, "autocorrelation"),
        series: [{ label: "autocorrelation", x: lags, y: r.autocorrelation }],
      },
    ],
  };
}

/** The strip from -half to half across a plot. */
function bandAcross(ay: Axis, half: number, plot: Box): Svg {
  const high = Math.max(plot.y, ay.at(half));
  const low = Math.min(plot.y + plot.height, ay.at(-half));
  return path(`M${px(plot.x)} ${px(high)}H${px(plot.x + plot.width)}V${px(low)}H${px(plot.x)}Z`, "area");
}

function inWords(of: Residuals): string {
  const rows = of.readings.map((r) => {
    const outside = Array.from(r.value).filter((v) => Math.abs(v) > 1.96).length;
    const first = r.autocorrelation[0];
    const near = first === undefined ? "" : `, neighbours correlate by ${first.toFixed(2)}`;
    return `${r.label}: ${r.value.length} residuals, ${outside} beyond 1.96 standard deviations${near}`;
  });
  return `Weighted residuals against time in ${of.timeUnit}, beside them their autocorrelation. ${rows.join(". ")}.`;
}
