import { type CurvesOptions, plotStacked } from "../../draw/curves.js";
import type { Plotted } from "../../draw/plotted.js";
import { typeset } from "../../draw/scale.js";
import type { Duty } from "../../model/duty.js";
import type { Branches, BranchPoint, Turn } from "../../reaction/branches.js";
import { type Figure, temperatureUnit } from "../../reaction/figures.js";
import { formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { readingUnit } from "./estimate.js";

/** Steady states over a range of one input, with what there is to draw of each. */
export interface BranchPlot {
  readonly title: string;
  readonly duty: Duty;
  /** The input: its name, the unit to draw it in, and its value now, SI. */
  readonly input: { readonly name: string; readonly unit: Unit; readonly value: number };
  readonly found: Branches;
  /** The figures of a point, the same at every point. */
  figuresAt(point: BranchPoint): readonly Figure[];
}

/** Every figure over the input: stable states as a whole line, others beside it, with open circles where states end or swing. */
export function plotBranches(plot: BranchPlot, options: CurvesOptions = {}): Plotted {
  const { title, duty, input, found, figuresAt } = plot;
  const { branches, turns } = found;
  const figures = branches.map((points) => points.map(figuresAt));
  const count = figures[0]?.[0]?.length ?? 0;
  const x = (at: number): number => inUnit(at, input.unit);
  const panels = Array.from({ length: count }, (_, k) => {
    const { name, unit } = figures[0][0][k];
    const shown = name.startsWith("temperature") ? temperatureUnit(duty) : readingUnit(duty, name, unit);
    const y = (f: Figure): number => (f.why === undefined ? inUnit(f.value, shown) : Number.NaN);
    const line = (label: string, wanted: (stable: boolean | undefined) => boolean) => {
      const xs: number[] = [];
      const ys: number[] = [];
      branches.forEach((points, b) => {
        points.forEach((p, i) => {
          // A line goes on to where its states end, and what is unstable to where that begins.
          const beside = [points[i - 1], points[i + 1]].some((q) => q?.stable !== undefined && wanted(q.stable));
          const mine = wanted(p.stable) || (beside && (p.stable === undefined || wanted(false)));
          xs.push(x(p.at));
          ys.push(mine ? y(figures[b][i][k]) : Number.NaN);
        });
        xs.push(Number.NaN);
        ys.push(Number.NaN);
      });
      return { label, beside: true, x: xs, y: ys };
    };
    const lines = [
      line("stable", (s) => s === true),
      line("unstable", (s) => s === false),
      line("not judged", (s) => s === undefined && branches.every((b) => b.every((p) => p.stable === undefined))),
    ].filter((l) => l.y.some(Number.isFinite));
    return {
      title: name,
      x: `${input.name}${input.unit.name ? `, ${input.unit.name}` : ""}`,
      y: `${name}${shown.name ? `, ${shown.name}` : ""}`,
      free: name.startsWith("temperature"),
      lines,
      upright: { at: x(input.value), label: typeset(`now ${formatQuantity(input.value, input.unit, 4)}`) },
      points: {
        names: turns.map((t) => typeset(`${turnWords(t)} ${formatQuantity(t.at, input.unit, 4)}`)),
        x: turns.map((t) => x(t.at)),
        y: turns.map((t) => y(figuresAt({ at: t.at, state: t.state, stable: undefined })[k])),
      },
    };
  });
  return plotStacked(title, panels, options);
}

/** What happens to the state that a vessel runs at: "ignites". */
export const turnWords = ({ what, of }: Pick<Turn, "what" | "of">): string =>
  ({
    ignites: "ignites",
    "goes out": "goes out",
    ends: "the state ends",
    swings: "begins to swing",
    "gives way": "gives way to another state",
    "washes out": `${of} washes out`,
  })[what];
