import { type CurvesOptions, plotStacked } from "../../draw/curves.js";
import type { Plotted } from "../../draw/plotted.js";
import type { Sweep, SweepPoint } from "../../study/sweep.js";
import { formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { readingUnit } from "./estimate.js";

/** More lines than this cannot be told apart: every n-th is drawn, the table has them all. */
const mostLines = 6;

/**
 * Every figure of a sweep over its first input, one plot each; where there is a second input, one line for each of its values.
 * Bands hold 95 % of what is possible.
 */
export function plotSweep({ operation, axes, points }: Sweep, options: CurvesOptions = {}): Plotted {
  const { network, duty } = operation;
  const [first, second] = axes;
  const { input, log } = first;
  const count = second?.values.length ?? 1;
  const every = Math.ceil(count / mostLines);
  const chosen = Array.from({ length: count }, (_, j) => j).filter((j) => j % every === 0);
  const plots = duty.report.flatMap((reported, k) => {
    const unit = unitOf(points, k);
    if (!unit) return [];
    const shown = readingUnit(duty, reported.text, unit);
    const of = (p: SweepPoint | undefined, v: number | undefined): number =>
      p?.figures && v !== undefined && Number.isFinite(v) ? inUnit(v, shown) : Number.NaN;
    const x = first.values.map((v) => inUnit(v, input.unit));
    const lines = chosen.map((j) => {
      const along = first.values.map((_, i) => points[i * count + j] as SweepPoint | undefined);
      const banded = along.some((p) => p?.intervals[k]);
      return {
        label: second
          ? `${second.input.name} ${formatQuantity(second.values[j], second.input.unit, 3)}`
          : reported.text,
        unnamed: !second,
        x,
        y: along.map((p) => of(p, p?.figures?.[k].value)),
        ...(banded && !second
          ? {
              band: {
                low: along.map((p) => of(p, p?.intervals[k]?.[0])),
                high: along.map((p) => of(p, p?.intervals[k]?.[1])),
              },
            }
          : {}),
      };
    });
    const words = (name: string, u: Unit): string => (u.name === "" ? name : `${name}, ${u.name}`);
    return [
      {
        title: reported.text,
        x: words(input.name, input.unit),
        y: words(reported.text, shown),
        lines,
        xLog: log,
        free: true,
      },
    ];
  });
  const title = `${duty.title} over ${axes.map((a) => a.input.name).join(" and ")}: ${network.title}`;
  return plotStacked(title, plots, { height: plots.length > 1 ? 170 : 240, ...options });
}

const unitOf = (points: readonly SweepPoint[], k: number): Unit | undefined =>
  points.find((p) => p.figures)?.figures?.[k].unit;
