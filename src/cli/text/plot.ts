import { formatNumber } from "../../units/format.js";
import type { Io } from "../io.js";

/** A curve for a terminal: what it is, and the points. */
export interface TextCurve {
  readonly label: string;
  readonly x: ArrayLike<number>;
  readonly xUnit: string;
  readonly y: ArrayLike<number>;
  readonly yUnit: string;
}

/** More would push the numbers off the screen. */
const mostCurves = 3;

/** Curves for whoever looks at a terminal; nothing for a pipe, or where NO_COLOR asks for plain words. */
export const curvesOn = ({ colour }: Pick<Io, "colour">, curves: () => readonly TextCurve[]): string =>
  colour.out
    ? curves()
        .slice(0, mostCurves)
        .map(blockCurve)
        .filter((c) => c !== "")
        .join("\n\n")
    : "";

const width = 64;
const height = 7;
const eighths = " ▁▂▃▄▅▆▇█";

/**
 * A small picture of a curve in block characters, with its largest value and the ends of the axis; nothing where there is no
 * curve. Values below zero are drawn as none.
 */
export function blockCurve({ label, x, xUnit, y, yUnit }: TextCurve): string {
  const columns = largestPerColumn(x, y);
  const most = Math.max(0, ...columns);
  if (columns.length === 0 || !(most > 0) || !Number.isFinite(most)) return "";
  const rows = Array.from({ length: height }, (_, r) => {
    const floor = height - 1 - r;
    const row = columns.map((v) => {
      const filled = Math.round((Math.max(0, v) / most) * height * 8) - 8 * floor;
      return eighths[Math.min(8, Math.max(0, filled))];
    });
    return `  ${row.join("").trimEnd()}`;
  });
  const first = `${formatNumber(x[0], 3)}`;
  const last = `${formatNumber(x[x.length - 1], 3)} ${xUnit}`;
  const axis = `  ${first}${last.padStart(Math.max(last.length + 1, width - first.length))}`;
  return [`  ${label}, largest ${formatNumber(most, 3)} ${yUnit}`.trimEnd(), ...rows, axis].join("\n");
}

/** Where several points fall into a column the largest counts, so that no peak is lost; where none does, between neighbours. */
function largestPerColumn(x: ArrayLike<number>, y: ArrayLike<number>): number[] {
  const n = x.length;
  const span = x[n - 1] - x[0];
  if (n < 2 || !(span > 0)) return [];
  const columns = Array<number>(width).fill(Number.NEGATIVE_INFINITY);
  for (let k = 0; k < n; k++) {
    if (!Number.isFinite(y[k])) continue;
    const at = Math.min(width - 1, Math.floor(((x[k] - x[0]) / span) * width));
    columns[at] = Math.max(columns[at], y[k]);
  }
  let k = 0;
  return columns.map((v, c) => {
    if (v !== Number.NEGATIVE_INFINITY) return v;
    const middle = x[0] + ((c + 0.5) / width) * span;
    while (k < n - 2 && x[k + 1] < middle) k++;
    const share = (middle - x[k]) / (x[k + 1] - x[k]);
    const between = y[k] + share * (y[k + 1] - y[k]);
    return Number.isFinite(between) ? between : 0;
  });
}
