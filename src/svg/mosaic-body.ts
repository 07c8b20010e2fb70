import { element, group, line, rectangle } from "./marks.js";
import type { Box, Svg } from "./svg.js";

/** A tile of a mosaic: its share of the body's volume, and its tone, 0 to 1. */
export interface Tile {
  readonly share: number;
  readonly tone: number;
}

/**
 * A body of many cells, each tile toned by itself. Columns from left to right, tiles of a column from the top; every tile's area
 * is its share of the box.
 * @param strength opacity of a tone
 */
export function mosaicBody(box: Box, columns: readonly (readonly Tile[])[], strength: (tone: number) => number): Svg {
  const total = columns.flat().reduce((sum, t) => sum + t.share, 0);
  const parts = [rectangle(box, "paper")];
  const walls: Svg[] = [];
  let x = box.x;
  for (const [k, column] of columns.entries()) {
    const own = column.reduce((sum, t) => sum + t.share, 0);
    const width = (box.width * own) / total;
    let y = box.y;
    for (const { share, tone } of column) {
      const height = (box.height * share) / own;
      parts.push(element("rect", { class: "tone", "fill-opacity": strength(tone), x, y, width, height }));
      if (y > box.y) walls.push(line(x, y, x + width, y, "wall thin"));
      y += height;
    }
    if (k > 0) walls.push(line(x, box.y, x, box.y + box.height, "wall thin"));
    x += width;
  }
  return group("body mosaic", [...parts, ...walls, rectangle(box, "rim")]);
}
