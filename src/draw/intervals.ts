import { circle, line } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import type { Svg } from "../svg/svg.js";
import { type Axis, bottomAxis, linearAxis } from "./axes.js";
import { caption, drawCaption, extent } from "./caption.js";
import { separated } from "./heights.js";
import { type PictureOptions, picture } from "./picture.js";
import type { TableData } from "./plotted.js";

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
  /** What stands at the right: the value in words, a probability. */
  readonly text: string;
  /** What the same residence times would give at the two ends of mixing. */
  readonly bounds?: { readonly segregated: number; readonly maximumMixedness: number };
  readonly accent?: boolean;
}

const rowHeight = 30;

/** Names are broken at about so many characters. */
const nameLength = 26;
/** Faces that stand in for the measured one are up to a fifth wider: no name may reach beyond the drawing in any. */
const widerFace = 1.2;

function nameLines(name: string): string[] {
  const lines: string[] = [];
  for (const word of name.split(" ")) {
    const last = lines[lines.length - 1];
    if (last !== undefined && last.length + 1 + word.length <= nameLength) lines[lines.length - 1] = `${last} ${word}`;
    else lines.push(word);
  }
  return lines;
}

/** One row per value: a bar for the interval, a dot for the value, thin ends for the bounds of mixing. */
export function drawIntervals(of: Intervals, options: PictureOptions & { readonly width?: number } = {}): Svg {
  const width = options.width ?? 640;
  const top = (options.untitled ? 8 : 36) + (of.reference ? 16 : 0);
  const left =
    widerFace * Math.max(0, ...of.rows.flatMap((r) => nameLines(r.label).map((l) => textWidth(l, 12, "bold")))) + 16;
  const right = widerFace * Math.max(0, ...of.rows.map((r) => textWidth(r.text, 11))) + 16;
  const all = of.rows.flatMap((r) => [
    r.value,
    r.low,
    r.high,
    r.bounds?.segregated ?? r.value,
    r.bounds?.maximumMixedness ?? r.value,
  ]);
  const ax = linearAxis(
    of.reference ? [...all, of.reference.value] : all,
    [left, Math.max(left + 120, width - right)],
    5,
  );
  const far = ax.at(ax.domain[1]);
  let y = top;
  const parts: Svg[] = [];
  for (const r of of.rows) {
    const more = 7 * (nameLines(r.label).length - 1);
    const middle = y + 12 + more;
    parts.push(row(r, ax, middle, far));
    y += Math.max(r.bounds ? rowHeight + 18 + more : 0, rowHeight + 2 * more);
  }
  const plot = { x: left, y: top, width: far - left, height: y - top };
  if (of.reference) {
    const x = ax.at(of.reference.value);
    parts.unshift(
      line(x, top - 2, x, y, "leader"),
      drawCaption(referenceName(of.reference.label, x, left, far, top - 18)),
    );
  }
  if (!options.untitled) parts.unshift(drawCaption(caption([{ words: of.title, style: "title" }], 0, 0)));
  parts.push(bottomAxis(ax, plot, of.quantity));
  const view = { x: -16, y: -12, width: Math.max(width, far + right) + 32, height: y + 60 };
  return picture(of.title, inWords(of), view, options.theme ?? "auto", parts);
}

/** The rows as a table. */
export const intervalsTable = (of: Intervals): TableData => ({
  head: ["", of.quantity, "low", "high"],
  rows: of.rows.map((r) => [r.label, r.value, r.low, r.high]),
});

/** Changes compared with today: the same rows, today's value as the reference, the probability of being better at the right. */
export const drawChanges = (of: Intervals, options: PictureOptions & { readonly width?: number } = {}): Svg =>
  drawIntervals(of, options);

function row(r: IntervalRow, ax: Axis, y: number, far: number): Svg {
  const look = r.accent ? " look" : "";
  return [
    drawCaption(
      caption(
        nameLines(r.label).map((words) => ({ words, style: "name" as const })),
        ax.at(ax.domain[0]) - 12,
        y - 7 * nameLines(r.label).length,
        "end",
      ),
    ),
    r.bounds ? boundsMarks(r.bounds, ax, y, far) : "",
    line(ax.at(r.low), y, ax.at(r.high), y, `interval${look}`),
    circle(ax.at(r.value), y, 4.5, `value${look}`),
    drawCaption(caption([{ words: r.text, style: r.accent ? "look" : "plain" }], far + 14, y - 7)),
  ].join("");
}

function boundsMarks(bounds: NonNullable<IntervalRow["bounds"]>, ax: Axis, y: number, far: number): Svg {
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
  const shift = Math.max(0, ax.at(ax.domain[0]) + widths[0] / 2 - first) - Math.max(0, second + widths[1] / 2 - far);
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

function referenceName(words: string, x: number, left: number, far: number, y: number): ReturnType<typeof caption> {
  const { width } = extent([{ words, style: "quiet" }]);
  return caption([{ words, style: "quiet" }], Math.min(Math.max(x - width / 2, left), far - width), y);
}

function inWords(of: Intervals): string {
  const rows = of.rows.map((r) => `${r.label}: ${r.text}`);
  return `${of.quantity}. ${rows.join("; ")}.${of.reference ? ` Compared with ${of.reference.label}.` : ""}`;
}
