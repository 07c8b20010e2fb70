import { circle, group, line, path, rectangle, text } from "./marks.js";
import { type Box, px, type Svg } from "./svg.js";

/**
 * Bodies of liquid. Each function fills the box that it is given, whose area stands for the volume; classes are those
 * of `theme.ts`. Tone and texture carry the meaning, so that a grey print says the same: an even tint is well mixed,
 * a tint that deepens along the flow grows older on its way, hatching is water that the flow does not reach.
 */

/** Width / height of each picture's box. Long rows stay on the page: beyond six tanks the tanks become slices. */
export const aspects = {
  stirred: (repeat = 1): number => Math.min(Math.max(repeat, 1), 6),
  tubular: 4,
  dispersed: 4,
  laminar: 4,
  cascade: 4,
  dead: 1.6,
  junction: 1,
} as const;

/** A stirred tank, or a row of `repeat` equal ones that share walls; `backflow` cuts a return notch into each wall. */
export function stirredBody(box: Box, repeat = 1, backflow = false): Svg {
  const parts = [rectangle(box, "liquid", corner(box))];
  const step = box.width / repeat;
  for (let k = 1; k < repeat; k++) {
    const x = box.x + k * step;
    parts.push(line(x, box.y, x, box.y + box.height, "wall"));
    if (backflow) parts.push(returnNotch(x, box, Math.min(step, box.height) * 0.11));
  }
  return group("body stirred", parts);
}

/** A tube in plug flow: a capsule whose tint deepens from inlet to outlet as the liquid ages. */
export function tubularBody(box: Box): Svg {
  return group("body tubular", [rectangle(box, "ageing", capsule(box))]);
}

/** A tube with axial dispersion: soft overlapping bands, fewer and wider as the Péclet number falls. */
export function dispersedBody(box: Box, peclet: number): Svg {
  const bands = Math.round(Math.min(9, Math.max(2, 2 + 2 * Math.log10(Math.max(peclet, 1)) * 1.5)));
  const inner = inset(box, capsule(box) * 0.55);
  const step = inner.width / bands;
  const parts = [rectangle(box, "liquid", capsule(box))];
  for (let k = 0; k < bands; k++) {
    const centre = inner.x + (k + 0.5) * step;
    const half = step * 0.75; // wider than a step: neighbours overlap, which is what dispersion does
    const left = Math.max(inner.x, centre - half);
    const right = Math.min(inner.x + inner.width, centre + half);
    parts.push(rectangle({ x: left, y: box.y + 2, width: right - left, height: box.height - 4 }, "band", 3));
  }
  return group("body dispersed", parts);
}

/** Segregated laminar flow in a round tube: a capsule with its parabolic front. */
export function laminarBody(box: Box): Svg {
  const left = box.x + capsule(box);
  const tip = box.x + box.width - capsule(box);
  const bottom = box.y + box.height;
  // a quadratic Bézier with its control point twice as far out is exactly the parabola u = 2 (1 - r^2)
  const front = `M${px(left)} ${px(box.y)}Q${px(2 * tip - left)} ${px(box.y + box.height / 2)} ${px(left)} ${px(bottom)}`;
  return group("body laminar", [rectangle(box, "liquid", capsule(box)), path(`${front}Z`, "front")]);
}

/** A cascade of `tanks` (any real number): thin walls for the nearest whole number, the number itself printed. */
export function cascadeBody(box: Box, tanks: number): Svg {
  const count = Math.max(1, Math.round(tanks));
  const parts = [rectangle(box, "liquid", capsule(box))];
  const walls = Math.min(count, Math.floor(box.width / 4)); // closer than 4 px walls would run into one tone
  for (let k = 1; k < walls; k++) {
    const x = box.x + (k * box.width) / walls;
    parts.push(line(x, box.y + 1, x, box.y + box.height - 1, "wall thin"));
  }
  const words = `N = ${Math.round(tanks * 100) / 100}`;
  if (box.height >= 18 && box.width >= 60) {
    const middle = box.x + box.width / 2;
    const plate = { x: middle - 27, y: box.y + box.height / 2 - 8, width: 54, height: 16 };
    parts.push(rectangle(plate, "plate", 3), text(middle, box.y + box.height / 2 + 4, words, "inside", "middle"));
  }
  return group("body cascade", parts);
}

/** Stagnant pockets along a body: a scalloped, hatched band; the box's area stands for the pockets' volume. */
export function pocketsBody(box: Box): Svg {
  const count = Math.max(2, Math.round(box.width / Math.max(box.height * 1.6, 8)));
  const step = box.width / count;
  let d = `M${px(box.x)} ${px(box.y)}H${px(box.x + box.width)}`;
  for (let k = count; k > 0; k--) {
    const right = box.x + k * step;
    const left = right - step;
    const deep = box.y + box.height * (4 / 3); // a cubic's belly reaches three quarters of its controls' depth
    d += `C${px(right)} ${px(deep)} ${px(left)} ${px(deep)} ${px(left)} ${px(box.y)}`;
  }
  return group("body pockets", [path(`${d}Z`, "still"), path(`${d}Z`, "hatched")]);
}

/** Volume that no stream reaches: a hatched outline without tint. */
export function deadBody(box: Box): Svg {
  return group("body dead", [rectangle(box, "still", corner(box)), rectangle(box, "hatched", corner(box))]);
}

/** A meeting of streams without volume: a dot across the box's smaller side. */
export function junctionBody(box: Box): Svg {
  const middle = { x: box.x + box.width / 2, y: box.y + box.height / 2 };
  return group("body junction", [circle(middle.x, middle.y, Math.min(box.width, box.height) / 2, "dot")]);
}

/** Many bodies drawn as one: a box divided like bricks, each row at its own joints, about as many as there are bodies up to 24. */
export function severalBody(box: Box, count: number): Svg {
  const rows = Math.max(2, Math.min(4, Math.round(Math.sqrt(count / 1.5))));
  const across = Math.max(1, Math.min(6, Math.round(count / rows)));
  const height = box.height / rows;
  const step = box.width / across;
  const parts = [rectangle(box, "liquid", corner(box))];
  for (let k = 0; k < rows; k++) {
    const y = box.y + k * height;
    if (k > 0) parts.push(line(box.x, y, box.x + box.width, y, "wall thin"));
    for (let j = 1; j <= across; j++) {
      const x = box.x + (j - (k % 2) / 2) * step;
      if (x > box.x + 2 && x < box.x + box.width - 2) parts.push(line(x, y, x, y + height, "wall thin"));
    }
  }
  return group("body several", parts);
}

const capsule = (box: Box): number => Math.min(box.width, box.height) / 2;

const corner = (box: Box): number => Math.min(10, Math.min(box.width, box.height) / 5);

const inset = (box: Box, by: number): Box => ({ ...box, x: box.x + by, width: Math.max(1, box.width - 2 * by) });

/** A small hook through a wall, against the flow: part of what left comes back. */
function returnNotch(x: number, box: Box, size: number): Svg {
  const y = box.y + box.height * 0.72;
  const hook = `M${px(x + size)} ${px(y - size)}Q${px(x + size)} ${px(y)} ${px(x - size)} ${px(y)}`;
  const head = `m${px(size * 0.6)} ${px(-size * 0.5)}l${px(-size * 0.6)} ${px(size * 0.5)}l${px(size * 0.6)} ${px(size * 0.5)}`;
  return path(hook + head, "return");
}
