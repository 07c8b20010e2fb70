import type { Box, Svg } from "../svg/svg.js";
import type { Axis } from "./axes.js";
import { extent, type Words } from "./caption.js";
import { Clutter } from "./clutter.js";
import type { Curves } from "./curves-input.js";
import { placeAt } from "./line-labels.js";

type Spot = { readonly x: number; readonly y: number };

/** Names inside a plot, clear of lines and marks: of what stands upright, of marked points, and of lines that are named beside. */
export function namesWithin(curves: Curves, ax: Axis, ay: Axis, plot: Box): readonly Svg[] {
  const { points, lines, upright } = curves;
  const beside = lines.filter((l) => l.beside);
  const marks = namesOf(points);
  if (!upright && beside.length === 0 && marks.length === 0) return [];
  const clutter = new Clutter();
  for (const l of lines) for (const p of along(l.x, l.y, ax, ay)) clutter.add(around(p, 2));
  for (let k = 0; k < (points?.x.length ?? 0); k++) {
    if (points && Number.isFinite(points.y[k]))
      clutter.add(around({ x: ax.at(points.x[k]), y: ay.at(points.y[k]) }, 5));
  }
  if (upright) clutter.add({ x: ax.at(upright.at) - 1, y: plot.y, width: 2, height: plot.height });
  // names of levels stand above their right end
  const { level } = curves;
  if (level) clutter.add({ x: plot.x, y: ay.at(level.at) - 1, width: plot.width, height: 2 });
  const named = (words: Words, spots: Iterable<Spot>): Svg => placeAt(words, spots, clutter, plot) ?? "";
  return [
    ...marks.flatMap(({ words, at }) =>
      points && Number.isFinite(points.y[at])
        ? [named(words, near({ x: ax.at(points.x[at]), y: ay.at(points.y[at]) }, words))]
        : [],
    ),
    ...beside.map((l) => {
      const words: Words = { words: l.label, style: l.accent ? "look" : "plain" };
      const all = along(l.x, l.y, ax, ay);
      const middle = all.length / 2;
      const order = [...all.keys()].sort((a, b) => Math.abs(a - middle) - Math.abs(b - middle));
      return named(
        words,
        order.filter((_, k) => k % 3 === 0).flatMap((k) => near(all[k], words)),
      );
    }),
    ...(upright ? [named({ words: upright.label, style: "quiet" }, down(ax.at(upright.at), upright.label, plot))] : []),
  ];
}

/** Of several marks each by its name, of one the label, where it is named. */
function namesOf(points: Curves["points"]): readonly { readonly words: Words; readonly at: number }[] {
  if (points?.names) return points.names.map((words, at) => ({ words: { words, style: "name" }, at }));
  return points?.named && points.label !== undefined && points.x.length > 0
    ? [{ words: { words: points.label, style: "name" }, at: 0 }]
    : [];
}

/** Places beside a point, the nearest first: right, left, below and above, then farther. */
function near(p: Spot, words: Words): readonly Spot[] {
  const { width, height } = extent([words]);
  return [8, 16, 28].flatMap((away) => [
    { x: p.x + away, y: p.y - height / 2 },
    { x: p.x - away - width, y: p.y - height / 2 },
    { x: p.x + away, y: p.y + away - height / 2 },
    { x: p.x + away, y: p.y - away - height / 2 },
    { x: p.x - away - width, y: p.y + away - height / 2 },
    { x: p.x - away - width, y: p.y - away - height / 2 },
    { x: p.x - width / 2, y: p.y + away },
    { x: p.x - width / 2, y: p.y - away - height },
  ]);
}

/** Places beside an upright line, from its top. */
function down(x: number, label: string, plot: Box): readonly Spot[] {
  const { width } = extent([{ words: label, style: "quiet" }]);
  const heights = Array.from({ length: Math.max(0, Math.floor((plot.height - 18) / 6)) }, (_, k) => plot.y + 3 + 6 * k);
  return heights.flatMap((y) => [
    { x: x + 5, y },
    { x: x - 5 - width, y },
  ]);
}

const around = ({ x, y }: Spot, by: number): Box => ({ x: x - by, y: y - by, width: 2 * by, height: 2 * by });

/** A line about every 4 px. */
function along(x: ArrayLike<number>, y: ArrayLike<number>, ax: Axis, ay: Axis): readonly Spot[] {
  const spots: Spot[] = [];
  let last: Spot | undefined;
  for (let k = 0; k < x.length; k++) {
    if (!Number.isFinite(x[k]) || !Number.isFinite(y[k])) {
      last = undefined;
      continue;
    }
    const here = { x: ax.at(x[k]), y: ay.at(y[k]) };
    const steps = last ? Math.max(1, Math.ceil(Math.hypot(here.x - last.x, here.y - last.y) / 4)) : 1;
    for (let i = 1; i <= steps; i++) {
      const t = i / steps;
      spots.push(last ? { x: last.x + t * (here.x - last.x), y: last.y + t * (here.y - last.y) } : here);
    }
    last = here;
  }
  return spots;
}
