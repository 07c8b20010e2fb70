import { line } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import type { Box, Svg } from "../svg/svg.js";
import { caption, drawCaption, extent, type Words } from "./caption.js";
import type { Clutter } from "./clutter.js";
import { separated } from "./heights.js";

/** A line's name at its right end. */
export interface EndLabel {
  readonly words: string;
  readonly style: Words["style"];
  /** Class of the line: a stub of it stands before the name. */
  readonly className: string;
  /** Where the line ends, px. */
  readonly x: number;
  readonly y: number;
}

/** Room that end labels need right of a plot, px. */
export const endRoom = (names: readonly string[]): number =>
  names.length === 0 ? 0 : Math.max(...names.map((name) => textWidth(name, 11))) + 44;

/** Names at the right of a plot, apart from one another, each tied to its line's end by a thin leader. */
export function endLabels(
  labels: readonly EndLabel[],
  plot: Box,
): { readonly svg: Svg; readonly boxes: readonly Box[] } {
  const sorted = [...labels].sort((a, b) => a.y - b.y);
  const gaps = sorted.slice(1).map(() => 14);
  const free = separated(
    sorted.map((l) => l.y),
    sorted.map(() => 1),
    gaps,
  );
  // the block as a whole stays beside the plot
  const over = Math.max(0, (free.at(-1) ?? 0) - (plot.y + plot.height - 4));
  const spots = sorted.map((l, k) => ({ l, y: free[k] - over }));
  const x = plot.x + plot.width + 38;
  const made = spots.map(({ l, y }) => ({ l, y, c: caption([{ words: l.words, style: l.style }], x, y - 7) }));
  const svg = made
    .map(
      ({ l, y, c }) =>
        line(l.x + 2, l.y, x - 23, y, "leader") + line(x - 22, y, x - 4, y, l.className) + drawCaption(c),
    )
    .join("");
  return { svg, boxes: made.map((m) => m.c.box) };
}

/** The first free place for words among `spots` (left top corners); undefined where all are taken. Marks it as taken. */
export function placeAt(
  words: Words,
  spots: Iterable<{ readonly x: number; readonly y: number }>,
  clutter: Clutter,
  inside: Box,
): Svg | undefined {
  const size = extent([words]);
  for (const { x, y } of spots) {
    const box = { x, y, ...size };
    const fits =
      x >= inside.x &&
      y >= inside.y &&
      x + size.width <= inside.x + inside.width &&
      y + size.height <= inside.y + inside.height;
    if (!fits || clutter.hits(box)) continue;
    clutter.add(box);
    return drawCaption(caption([words], x, y));
  }
  return undefined;
}
