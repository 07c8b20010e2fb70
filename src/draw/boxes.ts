import type { Box } from "../svg/svg.js";

/** The smallest box around all. */
export function union(boxes: readonly Box[]): Box {
  if (boxes.length === 0) return { x: 0, y: 0, width: 0, height: 0 };
  const x = Math.min(...boxes.map((b) => b.x));
  const y = Math.min(...boxes.map((b) => b.y));
  const right = Math.max(...boxes.map((b) => b.x + b.width));
  const bottom = Math.max(...boxes.map((b) => b.y + b.height));
  return { x, y, width: right - x, height: bottom - y };
}

/** The part of a box right of `left`. */
export const clipTo = (box: Box, left: number | undefined): Box =>
  left === undefined || box.x >= left ? box : { ...box, x: left, width: Math.max(0, box.x + box.width - left) };

/** Do two boxes have more than an edge in common? */
export const overlaps = (a: Box, b: Box): boolean =>
  a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;
