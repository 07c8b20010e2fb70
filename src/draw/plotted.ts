import type { Box, Svg } from "../svg/svg.js";
import type { Axis } from "./axes.js";

/** A drawing with the numbers behind it, so that a page can read them out under a pointer and save them as a table. */
export interface Plotted {
  readonly drawing: Svg;
  readonly data: FigureData;
}

/** Curves over axes, or a plain table where a drawing has none. */
export type FigureData = { readonly plots: readonly PlotData[] } | { readonly table: TableData };

export interface TableData {
  readonly head: readonly string[];
  readonly rows: readonly (readonly (string | number)[])[];
  /** Where each row stands in the drawing, px, for those who point at it. */
  readonly boxes?: readonly Box[];
}

/** One pair of axes inside a drawing. */
export interface PlotData {
  /** Which of several plots it is; empty where there is one. */
  readonly label: string;
  /** Where the axes span in the drawing, px. */
  readonly box: Box;
  readonly x: AxisData;
  readonly y: AxisData;
  readonly series: readonly Series[];
}

/** Values at the left or lower, and the right or upper end of an axis. */
export interface AxisData {
  /** Quantity and unit: "time, min". */
  readonly words: string;
  readonly from: number;
  readonly to: number;
  readonly log: boolean;
}

/** Points of a curve in the units of the axes, both of one length. `hidden` ones are saved but not read out. */
export interface Series {
  readonly label: string;
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  readonly hidden?: boolean;
}

export const axisData = ({ domain: [from, to] }: Axis, words: string, log = false): AxisData => ({
  words,
  from,
  to,
  log,
});

/** A table of plain columns: one of x for each set of x that series share, each followed by those series. */
export function columnsOf({ plots }: { readonly plots: readonly PlotData[] }): {
  readonly head: readonly string[];
  readonly columns: readonly ArrayLike<number>[];
} {
  const head: string[] = [];
  const columns: ArrayLike<number>[] = [];
  for (const plot of plots) {
    const sets = new Map<ArrayLike<number>, Series[]>();
    for (const s of plot.series) sets.set(s.x, [...(sets.get(s.x) ?? []), s]);
    const prefix = plots.length > 1 && plot.label !== "" ? `${plot.label}: ` : "";
    for (const [x, series] of sets) {
      const which = sets.size > 1 ? ` of ${series.map((s) => s.label).join(" and ")}` : "";
      head.push(
        `${prefix}${plot.x.words}${which}`,
        ...series.map((s) => `${prefix}${s.label}, ${unitIn(plot.y.words)}`),
      );
      columns.push(x, ...series.map((s) => s.y));
    }
  }
  return { head: head.map((h) => h.replace(/, $/, "")), columns };
}

/** "E, 1/min" is in 1/min; words without a unit are told whole. */
const unitIn = (words: string): string => (words.includes(", ") ? words.slice(words.lastIndexOf(", ") + 2) : words);
