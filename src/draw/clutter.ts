import type { Box } from "../svg/svg.js";

/** Boxes that are taken, in a grid for quick questions. Coordinates may be negative. */
export class Clutter {
  readonly #cells = new Map<number, Box[]>();

  add(box: Box): void {
    for (const key of cells(box)) {
      const list = this.#cells.get(key);
      if (list) list.push(box);
      else this.#cells.set(key, [box]);
    }
  }

  hits(box: Box): boolean {
    for (const key of cells(box)) if (this.#cells.get(key)?.some((other) => overlaps(box, other))) return true;
    return false;
  }
}

export const overlaps = (a: Box, b: Box): boolean =>
  a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;

const size = 48;

function* cells(box: Box): Generator<number> {
  for (let i = Math.floor(box.x / size); i <= Math.floor((box.x + box.width) / size); i++) {
    for (let j = Math.floor(box.y / size); j <= Math.floor((box.y + box.height) / size); j++) yield i * 65536 + j;
  }
}
