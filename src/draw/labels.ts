import { type Point, type Spine, samples } from "../svg/spine.js";
import type { Box } from "../svg/svg.js";
import { type Caption, caption, extent, type Words } from "./caption.js";
import type { Clutter } from "./clutter.js";

/** A label that wants to stand at the start of a ribbon. */
export interface LabelWish {
  readonly words: Words;
  readonly spine: Spine;
  /** Width of the ribbon, px. */
  readonly width: number;
  /** Is the level piece of a lane its place (rather than the first px of the ribbon)? */
  readonly onLane: boolean;
}

export interface PlacedLabel {
  readonly caption: Caption;
  /** A thin line to the ribbon where the label could not stand next to it. */
  readonly leader?: { readonly from: Point; readonly to: Point };
}

/** Marks a ribbon as taken. */
export function occupyRibbon(clutter: Clutter, spine: Spine, width: number): void {
  const half = width / 2 + 1;
  for (const p of samples(spine, 4)) clutter.add({ x: p.x - half, y: p.y - half, width: 2 * half, height: 2 * half });
}

/**
 * Finds a free place for each label in turn and marks it as taken: along the ribbon from its start, above it or below,
 * beside it where it runs upright; then anywhere near, with a leader that crosses no words; at last below everything (`floor`).
 * @param words where words stand already
 */
export function placeLabels(
  wishes: readonly LabelWish[],
  clutter: Clutter,
  words: Clutter,
  inside: Box,
): readonly PlacedLabel[] {
  let floor = inside.y + inside.height + 6;
  return wishes.map((wish) => {
    const found = alongRibbon(wish, clutter, inside) ?? nearby(wish, clutter, words, inside);
    if (found) {
      clutter.add(found.caption.box);
      words.add(found.caption.box);
      return found;
    }
    const from = wish.spine.start;
    const last = caption([wish.words], from.x, floor);
    floor += 16;
    clutter.add(last.box);
    words.add(last.box);
    return { caption: last, leader: { from, to: { x: last.box.x, y: last.box.y } } };
  });
}

function alongRibbon(
  { words, spine, width, onLane }: LabelWish,
  clutter: Clutter,
  inside: Box,
): PlacedLabel | undefined {
  const away = width / 2 + 2;
  const all = samples(spine, 5);
  const from = onLane ? levelStretch(all) : 0;
  for (const p of [...all.slice(from), ...all.slice(0, from)]) {
    for (const spot of spots(words, p, away, p.dx < 0)) {
      if (free(spot.box, clutter, inside)) return { caption: spot };
    }
  }
  return undefined;
}

/** Index where the longest level stretch begins: the lane. */
function levelStretch(all: ReturnType<typeof samples>): number {
  let best = { at: 0, length: 0 };
  for (let k = 0; k < all.length; k++) {
    let end = k;
    while (end < all.length && Math.abs(all[end].dy) < 0.02) end++;
    if (end - k > best.length) best = { at: Math.min(k + 1, all.length - 1), length: end - k };
    k = end;
  }
  return best.at;
}

function spots(
  words: Words,
  p: Point & { readonly dx: number; readonly dy: number },
  away: number,
  leftward: boolean,
): readonly Caption[] {
  const { width, height } = extent([words]);
  if (Math.abs(p.dy) > 0.6) {
    return [
      caption([words], p.x + away + 2, p.y - height / 2),
      caption([words], p.x - away - 2 - width, p.y - height / 2),
    ];
  }
  const x = leftward ? p.x - width - 2 : p.x + 2;
  return [caption([words], x, p.y - away - height), caption([words], x, p.y + away)];
}

function nearby(
  { words, spine, width }: LabelWish,
  clutter: Clutter,
  others: Clutter,
  inside: Box,
): PlacedLabel | undefined {
  const all = samples(spine, 8);
  const target = all[Math.min(3, all.length - 1)];
  const size = extent([words]);
  for (let radius = width / 2 + 10; radius < 400; radius += 7) {
    for (let turn = 0; turn < 24; turn++) {
      const angle = (turn / 24) * 2 * Math.PI - Math.PI / 3;
      const middle = { x: target.x + radius * 1.3 * Math.cos(angle), y: target.y + radius * Math.sin(angle) };
      const spot = caption([words], middle.x - size.width / 2, middle.y - size.height / 2);
      if (!free(spot.box, clutter, inside)) continue;
      const to = {
        x: Math.min(Math.max(target.x, spot.box.x), spot.box.x + spot.box.width),
        y: Math.min(Math.max(target.y, spot.box.y), spot.box.y + spot.box.height),
      };
      if (!crossed(target, to, others)) return { caption: spot, leader: { from: target, to } };
    }
  }
  return undefined;
}

/** Does a line run through words? */
function crossed(from: Point, to: Point, words: Clutter): boolean {
  const steps = Math.ceil(Math.hypot(to.x - from.x, to.y - from.y) / 3);
  return Array.from({ length: steps + 1 }, (_, k) => k / Math.max(1, steps)).some((t) =>
    words.hits({ x: from.x + t * (to.x - from.x) - 1, y: from.y + t * (to.y - from.y) - 1, width: 2, height: 2 }),
  );
}

function free(box: Box, clutter: Clutter, inside: Box): boolean {
  return (
    box.x >= inside.x &&
    box.y >= inside.y &&
    box.x + box.width <= inside.x + inside.width &&
    box.y + box.height <= inside.y + inside.height &&
    !clutter.hits(box)
  );
}
