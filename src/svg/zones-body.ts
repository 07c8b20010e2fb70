import { group, line, rectangle } from "./marks.js";
import type { Box, Svg } from "./svg.js";

/** Cells of a zoned body as they are drawn, px: a lattice that says "many", not how many. */
const cell = 12;

/** Many stirred cells: an even tint under a lattice of thin walls. The box's area stands for the volume. */
export function zonesBody(box: Box): Svg {
  const parts = [rectangle(box, "liquid", Math.min(4, Math.min(box.width, box.height) / 5))];
  const count = (length: number): number => Math.max(2, Math.min(12, Math.round(length / cell)));
  const [columns, rows] = [count(box.width), count(box.height)];
  for (let k = 1; k < columns; k++) {
    const x = box.x + (k * box.width) / columns;
    parts.push(line(x, box.y, x, box.y + box.height, "wall thin"));
  }
  for (let k = 1; k < rows; k++) {
    const y = box.y + (k * box.height) / rows;
    parts.push(line(box.x, y, box.x + box.width, y, "wall thin"));
  }
  return group("body zones", parts);
}
