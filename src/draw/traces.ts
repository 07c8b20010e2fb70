import { path } from "../svg/marks.js";
import { px, type Svg } from "../svg/svg.js";
import type { Axis } from "./axes.js";

/** More points than this are drawn as dots on a grid of px: loggers give hundreds of thousands. */
const many = 1200;

/** A line through points; breaks where a value is no number, or lies at or below `floor` (log axes). */
export function trace(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  ax: Axis,
  ay: Axis,
  className: string,
  floor = Number.NEGATIVE_INFINITY,
): Svg {
  let d = "";
  let last: { x: number; y: number } | undefined;
  for (let k = 0; k < x.length; k++) {
    if (!shown(x[k], y[k], ax, floor)) {
      last = undefined;
      continue;
    }
    const here = { x: ax.at(x[k]), y: ay.at(y[k]) };
    if (last && k < x.length - 1 && Math.abs(here.x - last.x) + Math.abs(here.y - last.y) < 0.3) continue;
    d += `${last ? "L" : "M"}${px(here.x)} ${px(here.y)}`;
    last = here;
  }
  return d === "" ? "" : path(d, className);
}

/** Measured points, small and open; where they are dense, dots. `hidden`: how many the axes cannot show. */
export function points(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  ax: Axis,
  ay: Axis,
  className: string,
  floor = Number.NEGATIVE_INFINITY,
): { svg: Svg; hidden: number } {
  const dense = x.length > many;
  const r = x.length > 250 ? 1.4 : 2.2;
  const taken = new Set<number>();
  let d = "";
  let hidden = 0;
  for (let k = 0; k < x.length; k++) {
    if (!shown(x[k], y[k], ax, floor)) {
      hidden++;
      continue;
    }
    const here = { x: ax.at(x[k]), y: ay.at(y[k]) };
    if (dense) {
      const spot = { x: Math.round(here.x), y: Math.round(here.y) };
      const key = spot.x * 65536 + spot.y;
      if (!taken.has(key)) d += `M${spot.x} ${spot.y}h.1`;
      taken.add(key);
      continue;
    }
    const arc = `a${px(r)} ${px(r)} 0 1 0`;
    d += `M${px(here.x - r)} ${px(here.y)}${arc} ${px(2 * r)} 0${arc} ${px(-2 * r)} 0`;
  }
  return { svg: d === "" ? "" : path(d, dense ? `${className} dense` : className), hidden };
}

/** The area between two lines over the same x; breaks where either is no number. */
export function area(x: ArrayLike<number>, low: ArrayLike<number>, high: ArrayLike<number>, ax: Axis, ay: Axis): Svg {
  const pieces: { readonly up: string[]; readonly down: string[] }[] = [];
  let last: number | undefined;
  for (let k = 0; k < x.length; k++) {
    if (!Number.isFinite(low[k]) || !Number.isFinite(high[k])) {
      last = undefined;
      continue;
    }
    const at = ax.at(x[k]);
    if (last === undefined) pieces.push({ up: [], down: [] });
    else if (at - last < 0.3) continue;
    const { up, down } = pieces[pieces.length - 1];
    up.push(`${px(at)} ${px(ay.at(high[k]))}`);
    down.push(`${px(at)} ${px(ay.at(low[k]))}`);
    last = at;
  }
  const d = pieces.map(({ up, down }) => `M${[...up, ...down.reverse()].join("L")}Z`).join("");
  return d === "" ? "" : path(d, "area");
}

/** Residuals as stems from zero; where they are dense, the lowest and highest of each half px. */
export function stems(x: ArrayLike<number>, y: ArrayLike<number>, ax: Axis, ay: Axis): Svg {
  const ends = new Map<number, { low: number; high: number }>();
  for (let k = 0; k < x.length; k++) {
    if (!shown(x[k], y[k], ax, Number.NEGATIVE_INFINITY)) continue;
    const at = x.length > many ? Math.round(ax.at(x[k]) * 2) / 2 : ax.at(x[k]);
    const known = ends.get(at);
    ends.set(at, { low: Math.min(y[k], known?.low ?? 0), high: Math.max(y[k], known?.high ?? 0) });
  }
  const d = [...ends].map(([at, { low, high }]) => `M${px(at)} ${px(ay.at(low))}V${px(ay.at(high))}`).join("");
  return d === "" ? "" : path(d, x.length > 250 ? "residual thin" : "residual");
}

/** The largest number among values; `least` where there is none. Safe for arrays of any length. */
export function largest(values: Iterable<number>, least: number): number {
  let most = least;
  for (const v of values) if (Number.isFinite(v) && v > most) most = v;
  return most;
}

const shown = (x: number, y: number, ax: Axis, floor: number): boolean =>
  Number.isFinite(y) && y > floor && x >= ax.domain[0] && x <= ax.domain[1];
