import { path } from "../svg/marks.js";
import { px, type Svg } from "../svg/svg.js";
import type { Axis } from "./axes.js";

/** A line through points; breaks where a value is no number. `floor`: values at or below it break the line too (log axes). */
export function trace(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  ax: Axis,
  ay: Axis,
  className: string,
  floor = Number.NEGATIVE_INFINITY,
): Svg {
  let d = "";
  let open = false;
  let last = "";
  for (let k = 0; k < x.length; k++) {
    const shown = Number.isFinite(y[k]) && y[k] > floor && x[k] >= ax.domain[0] && x[k] <= ax.domain[1];
    if (!shown) {
      open = false;
      continue;
    }
    const spot = `${px(ax.at(x[k]))} ${px(ay.at(y[k]))}`;
    if (!open || spot !== last) d += (open ? "L" : "M") + spot;
    last = spot;
    open = true;
  }
  return d === "" ? "" : path(d, className);
}

/** Measured points, small and open; where they are dense, dots. Returns how many could not be shown. */
export function points(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  ax: Axis,
  ay: Axis,
  className: string,
  floor = Number.NEGATIVE_INFINITY,
): { svg: Svg; hidden: number } {
  const r = x.length > 1200 ? 0.8 : x.length > 250 ? 1.4 : 2.2;
  let d = "";
  let hidden = 0;
  for (let k = 0; k < x.length; k++) {
    if (!Number.isFinite(y[k]) || y[k] <= floor || x[k] < ax.domain[0] || x[k] > ax.domain[1]) {
      hidden++;
      continue;
    }
    const arc = `a${px(r)} ${px(r)} 0 1 0`;
    d += `M${px(ax.at(x[k]) - r)} ${px(ay.at(y[k]))}${arc} ${px(2 * r)} 0${arc} ${px(-2 * r)} 0`;
  }
  return { svg: d === "" ? "" : path(d, className), hidden };
}

/** The area between two lines over the same x. */
export function area(x: ArrayLike<number>, low: ArrayLike<number>, high: ArrayLike<number>, ax: Axis, ay: Axis): Svg {
  let up = "";
  let down = "";
  for (let k = 0; k < x.length; k++) {
    up += `${k === 0 ? "M" : "L"}${px(ax.at(x[k]))} ${px(ay.at(high[k]))}`;
    down = `L${px(ax.at(x[k]))} ${px(ay.at(low[k]))}${down}`;
  }
  return x.length === 0 ? "" : path(`${up}${down}Z`, "area");
}

/** Residuals as stems from zero. */
export function stems(x: ArrayLike<number>, y: ArrayLike<number>, ax: Axis, ay: Axis): Svg {
  const zero = px(ay.at(0));
  let d = "";
  for (let k = 0; k < x.length; k++) {
    if (Number.isFinite(y[k]) && x[k] >= ax.domain[0] && x[k] <= ax.domain[1])
      d += `M${px(ax.at(x[k]))} ${zero}V${px(ay.at(y[k]))}`;
  }
  return d === "" ? "" : path(d, x.length > 250 ? "residual thin" : "residual");
}
