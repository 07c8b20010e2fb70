import type { Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { caption, drawCaption } from "./caption.js";
import { panel } from "./panel.js";
import { type PictureOptions, picture } from "./picture.js";
import type { PlotData, Plotted } from "./plotted.js";

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
  /** Where something stands along the bottom, upright across the plot: "now". */
  readonly upright?: { readonly at: number; readonly label: string };
  /** Measured points behind the lines; or marks of another sort, `names` beside each of them, or the label beside the first. */
  readonly points?: {
    readonly x: ArrayLike<number>;
    readonly y: ArrayLike<number>;
    readonly label?: string;
    readonly named?: boolean;
    readonly names?: readonly string[];
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
  /** The name stands beside the line's middle, where its end is no place for it. */
  readonly beside?: boolean;
  /** What was computed, where the line only joins it. */
  readonly dots?: { readonly x: ArrayLike<number>; readonly y: ArrayLike<number> };
}

export interface CurvesOptions extends PictureOptions {
  readonly log?: boolean;
  readonly width?: number;
  readonly height?: number;
}

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

function inWords(curves: Curves): string {
  const lines = curves.lines.map((l) => {
    const at = (l.spikes ?? []).map((s) => `${formatNumber(s.area * 100, 3)} % at ${formatNumber(s.x, 4)}`);
    return at.length > 0 ? `${l.label} (with ${at.join(", ")} at once)` : l.label;
  });
  return `${curves.y} against ${curves.x}. Lines: ${lines.join("; ")}.${curves.points ? ` ${curves.points.named ? "Marked" : "Measured points"}: ${curves.points.label ?? curves.points.x.length}.` : ""}`;
}
