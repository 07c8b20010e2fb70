import type { Svg } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { caption, drawCaption, extent, titleLines } from "./caption.js";
import type { Curves, CurvesOptions } from "./curves-input.js";
import { panel } from "./panel.js";
import { picture } from "./picture.js";
import type { PlotData, Plotted } from "./plotted.js";

export type { CurveLine, Curves, CurvesOptions } from "./curves-input.js";

/** Draws the lines with their names at their right ends, and spikes as arrows with their share. */
export const drawCurves = (curves: Curves, options: CurvesOptions = {}): Svg => plotCurves(curves, options).drawing;

/** The same with the numbers behind it. */
export const plotCurves = (curves: Curves, options: CurvesOptions = {}): Plotted =>
  plotStacked(curves.title, [curves], options);

/** Several plots under one another in one drawing, such as the figures of a duty over the same input. */
export function plotStacked(title: string, all: readonly Curves[], options: CurvesOptions = {}): Plotted {
  const width = options.width ?? 640;
  const height = options.height ?? 240;
  const lines = titleLines(title, width);
  const parts = options.untitled ? [] : [drawCaption(caption(lines, 0, 0))];
  const plots: PlotData[] = [];
  let top = options.untitled ? 22 : 34 + extent(lines).height;
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
    const at = (l.spikes ?? []).map(
      (s) => `${s.words ?? `${formatNumber(s.area * 100, 3)} %`} at ${formatNumber(s.x, 4)}`,
    );
    return at.length > 0 ? `${l.label} (with ${at.join(", ")} at once)` : l.label;
  });
  return `${curves.y} against ${curves.x}. Lines: ${lines.join("; ")}.${curves.points ? ` ${curves.points.named ? "Marked" : "Measured points"}: ${curves.points.label ?? curves.points.x.length}.` : ""}`;
}
