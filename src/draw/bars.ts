import { line, rectangle } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import type { Svg } from "../svg/svg.js";
import { bottomAxis, linearAxis } from "./axes.js";
import { caption, drawCaption } from "./caption.js";
import { type PictureOptions, picture } from "./picture.js";
import type { Plotted } from "./plotted.js";

/** Shares of a whole in percent, the largest first. */
export interface Bars {
  readonly title: string;
  /** Under the axis: "share of the spread, %". */
  readonly quantity: string;
  readonly rows: readonly { readonly label: string; readonly percent: number }[];
}

const rowHeight = 24;

/** One bar per row from nothing to its share, the axis from 0 to 100 %. */
export function plotBars(of: Bars, options: PictureOptions & { readonly width?: number } = {}): Plotted {
  const width = options.width ?? 640;
  const top = options.untitled ? 4 : 34;
  const left = Math.max(0, ...of.rows.map((r) => textWidth(r.label, 12, "bold"))) + 14;
  const plot = { x: left, y: top, width: Math.max(160, width - left - 48), height: of.rows.length * rowHeight };
  const ax = linearAxis([0, 100], [plot.x, plot.x + plot.width], 5, false);
  const rows = of.rows.map((r, k) => {
    const y = top + k * rowHeight;
    const end = ax.at(Math.min(100, r.percent));
    return [
      drawCaption(caption([{ words: r.label, style: "name" }], left - 10, y + 5, "end")),
      rectangle({ x: left, y: y + 5, width: Math.max(1, end - left), height: rowHeight - 10 }, "liquid"),
      drawCaption(caption([{ words: `${Math.round(r.percent)}\u2009%`, style: "plain" }], end + 6, y + 5)),
    ].join("");
  });
  const parts: Svg[] = [
    options.untitled ? "" : drawCaption(caption([{ words: of.title, style: "title" }], 0, 0)),
    line(left, top, left, top + plot.height, "axis"),
    ...rows,
    bottomAxis(ax, plot, of.quantity),
  ];
  const view = { x: -16, y: -12, width: plot.x + plot.width + 64, height: top + plot.height + 56 };
  const says = `${of.quantity}: ${of.rows.map((r) => `${r.label} ${Math.round(r.percent)} %`).join(", ")}.`;
  return {
    drawing: picture(of.title, says, view, options.theme ?? "auto", parts),
    data: {
      table: {
        head: ["", of.quantity],
        rows: of.rows.map((r) => [r.label, r.percent]),
        boxes: of.rows.map((_, k) => ({ x: 0, y: top + k * rowHeight, width, height: rowHeight })),
      },
    },
  };
}
