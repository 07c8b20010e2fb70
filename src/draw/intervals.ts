import { circle, line } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import type { Box, Svg } from "../svg/svg.js";
import { type Axis, bottomAxis, linearAxis } from "./axes.js";
import { caption, drawCaption, extent, lineHeight, type Words } from "./caption.js";
import { separated } from "./heights.js";
import { type PictureOptions, picture } from "./picture.js";
import type { Plotted } from "./plotted.js";

/** Values of one quantity in one unit, each with its 95 % interval. */
export interface Intervals {
  readonly title: string;
  /** Quantity and unit under the axis: "conversion of A, %". */
  readonly quantity: string;
  readonly rows: readonly IntervalRow[];
  /** A value to compare with, such as today's or the one required: an upright line with its name. */
  readonly reference?: { readonly value: number; readonly label: string };
}

export interface IntervalRow {
  readonly label: string;
  readonly value: number;
  readonly low: number;
  readonly high: number;
  /** What stands at the right: the value in words. */
  readonly text: string;
  /** Under the name: a probability. */
  readonly under?: string;
  /** What the same residence times would give at the two ends of mixing. */
  readonly bounds?: { readonly segregated: number; readonly maximumMixedness: number };
  readonly accent?: boolean;
}

/** From the name of a row to its bar, from the bar to what is below it. */
const room = { above: 12, below: 12, bounds: 14, between: 6, reference: 16 };
/** Faces that stand in for the measured one are up to a fifth wider: no name may reach beyond the drawing in any. */
const widerFace = 1.2;

/** A name broken into lines of at most so many px; a single word is never broken. */
function nameLines(name: string, width: number): string[] {
  const lines: string[] = [];
  for (const word of name.split(" ")) {
    const last = lines[lines.length - 1];
    const longer = last === undefined ? word : `${last} ${word}`;
    if (last !== undefined && widerFace * textWidth(longer, 12, "bold") > width) lines.push(word);
    else lines[Math.max(0, lines.length - 1)] = longer;
  }
  return lines;
}

/** One row per value: its name and number, below them a bar for the interval, a dot for the value, thin ends for the bounds of mixing. */
export function plotIntervals(of: Intervals, options: PictureOptions & { readonly width?: number } = {}): Plotted {
  const width = options.width ?? 640;
  const all = of.rows.flatMap((r) => [
    r.value,
    r.low,
    r.high,
    r.bounds?.segregated ?? r.value,
    r.bounds?.maximumMixedness ?? r.value,
  ]);
  const ax = linearAxis(of.reference ? [...all, of.reference.value] : all, [8, width - 8], 5);
  let y = options.untitled ? 0 : 34;
  const parts: Svg[] = options.untitled ? [] : [drawCaption(caption([{ words: of.title, style: "title" }], 0, 0))];
  const crossed: number[] = [];
  const boxes: Box[] = [];
  for (const r of of.rows) {
    const lines = nameLines(r.label, width - widerFace * textWidth(r.text, 11) - 16);
    const names = [
      ...lines.map(asName),
      ...(r.under === undefined ? [] : [{ words: r.under, style: "quiet" as const }]),
    ];
    const middle = y + names.length * lineHeight + room.above;
    parts.push(row(r, names, ax, y, middle, width));
    crossed.push(middle);
    boxes.push({ x: 0, y, width, height: middle + room.below - y });
    y = middle + room.below + (r.bounds ? room.bounds : 0) + room.between;
  }
  if (of.reference) {
    const x = ax.at(of.reference.value);
    parts.unshift(...crossed.map((at) => line(x, at - 10, x, at + 10, "leader")));
    parts.push(line(x, y - 4, x, y + room.reference, "leader"), referenceName(of.reference.label, x, width, y - 4));
    y += room.reference;
  }
  const left = ax.at(ax.domain[0]);
  const plot = { x: left, y, width: ax.at(ax.domain[1]) - left, height: 0 };
  parts.push(bottomAxis(ax, plot, of.quantity));
  const view = { x: -16, y: -12, width: width + 32, height: y + 56 };
  const rows = of.rows.map((r) => [r.label, r.value, r.low, r.high]);
  return {
    drawing: picture(of.title, inWords(of), view, options.theme ?? "auto", parts),
    data: { table: { head: ["", of.quantity, "low", "high"], rows, boxes } },
  };
}

const asName = (words: string): Words => ({ words, style: "name" });

function row(r: IntervalRow, names: readonly Words[], ax: Axis, top: number, y: number, width: number): Svg {
  const look = r.accent ? " look" : "";
  return [
    drawCaption(caption(names, 0, top)),
    drawCaption(caption([{ words: r.text, style: r.accent ? "look" : "plain" }], width, top, "end")),
    r.bounds ? boundsMarks(r.bounds, ax, y) : "",
    line(ax.at(r.low), y, ax.at(r.high), y, `interval${look}`),
    circle(ax.at(r.value), y, 4.5, `value${look}`),
  ].join("");
}

function boundsMarks(bounds: NonNullable<IntervalRow["bounds"]>, ax: Axis, y: number): Svg {
  const ends = [
    { x: ax.at(bounds.segregated), words: "segregated" },
    { x: ax.at(bounds.maximumMixedness), words: "maximum mixedness" },
  ].sort((a, b) => a.x - b.x);
  const widths = ends.map((e) => extent([{ words: e.words, style: "quiet" }]).width);
  const [first, second] = separated(
    ends.map((e) => e.x),
    [1, 1],
    [(widths[0] + widths[1]) / 2 + 10],
  );
  // both names stay between the ends of the axis
  const [low, high] = ax.domain.map((v) => ax.at(v));
  const shift = Math.max(0, low + widths[0] / 2 - first) - Math.max(0, second + widths[1] / 2 - high);
  return [
    line(ends[0].x, y, ends[1].x, y, "between"),
    ...ends.map((e) => line(e.x, y - 8, e.x, y + 8, "between")),
    ...[first, second].map((x, k) =>
      drawCaption(caption([{ words: ends[k].words, style: "quiet" }], x + shift, y + 9, "middle")),
    ),
    ...[first, second].map((x, k) =>
      Math.abs(x + shift - ends[k].x) > 12 ? line(ends[k].x, y + 8, x + shift, y + 12, "leader") : "",
    ),
  ].join("");
}

/** Beside the line, on the side where there is room. */
function referenceName(words: string, x: number, width: number, y: number): Svg {
  const wide = extent([{ words, style: "quiet" }]).width;
  const right = x + 6 + wide <= width;
  return drawCaption(caption([{ words, style: "quiet" }], right ? x + 5 : x - 5, y, right ? "start" : "end"));
}

function inWords(of: Intervals): string {
  const rows = of.rows.map((r) => `${r.label}: ${r.text}${r.under === undefined ? "" : `, ${r.under}`}`);
  return `${of.quantity}. ${rows.join("; ")}.${of.reference ? ` Compared with ${of.reference.label}.` : ""}`;
}
