import { columnsOf, type FigureData, type PlotData } from "../../draw/plotted.js";
import type { Box } from "../../svg/svg.js";

/** What a page knows of a figure: its numbers once each, and which of them are axes, curves and columns of the saved table. */
export interface Embedded {
  readonly name: string;
  /** Columns of numbers, `null` where there is none. */
  readonly numbers: readonly (readonly (number | null)[])[];
  readonly plots: readonly EmbeddedPlot[];
  /** Saved as CSV: names, and indices into `numbers`; or words where the figure is a table. */
  readonly head: readonly string[];
  readonly columns?: readonly number[];
  readonly rows?: readonly (readonly (string | number | null)[])[];
  /** Where rows stand in the drawing: left, top, width, height. */
  readonly boxes?: readonly (readonly number[])[];
}

/** Indices point into `numbers`. */
export interface EmbeddedPlot {
  readonly label: string;
  readonly box: readonly number[];
  readonly x: PlotData["x"];
  readonly y: PlotData["y"];
  readonly series: readonly { readonly label: string; readonly x: number; readonly y: number }[];
}

/** Seven digits are more than any reading has, and half as long as all of them. */
const digits = 7;

export function embedded(name: string, data: FigureData): Embedded {
  if ("table" in data) {
    const rows = data.table.rows.map((row) => row.map((cell) => (typeof cell === "number" ? short(cell) : cell)));
    const boxes = data.table.boxes?.map(corners);
    return { name, numbers: [], plots: [], head: data.table.head, rows, ...(boxes ? { boxes } : {}) };
  }
  const pool = new Map<ArrayLike<number>, number>();
  const numbers: (number | null)[][] = [];
  const indexOf = (list: ArrayLike<number>): number => {
    const known = pool.get(list);
    if (known !== undefined) return known;
    pool.set(list, numbers.length);
    return numbers.push(Array.from(list, short)) - 1;
  };
  const plots = data.plots.map(
    (p): EmbeddedPlot => ({
      label: p.label,
      box: corners(p.box),
      x: p.x,
      y: p.y,
      series: p.series.filter((s) => !s.hidden).map((s) => ({ label: s.label, x: indexOf(s.x), y: indexOf(s.y) })),
    }),
  );
  const { head, columns } = columnsOf(data);
  return { name, plots, head, columns: columns.map(indexOf), numbers };
}

const corners = ({ x, y, width, height }: Box): number[] => [x, y, width, height].map((v) => Math.round(v * 100) / 100);

/** JSON that cannot end the element that it stands in. */
export const embeddedJson = (e: Embedded): string => JSON.stringify(e).replace(/</g, "\\u003c");

const short = (x: number): number | null => (Number.isFinite(x) ? Number(x.toPrecision(digits)) : null);
