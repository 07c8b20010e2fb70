import { type Curves, type CurvesOptions, plotStacked } from "../../draw/curves.js";
import type { Plotted } from "../../draw/plotted.js";
import type { Sweep, SweepPoint } from "../../study/sweep.js";
import { formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { readingUnit } from "./estimate.js";

/** More lines than this cannot be told apart: every n-th is drawn, the table has them all. */
const mostLines = 6;
/** More computed points than this are a line by themselves. */
const mostDots = 40;

/**
 * Every figure of a sweep over its first input, one plot each; where there is a second input, one line for each of its values.
 * Bands hold 95 % of what is possible.
 */
export function plotSweep(sweep: Sweep, options: CurvesOptions = {}): Plotted {
  const plots = panelsOf(sweep);
  return plotStacked(titleOf(sweep), plots, { height: plots.length > 1 ? 170 : 240, ...options });
}

/** The same, each figure in a drawing of its own. */
export const plotSweepApart = (
  sweep: Sweep,
  options: CurvesOptions = {},
): readonly { readonly of: string; readonly made: Plotted }[] =>
  panelsOf(sweep).map((p) => ({ of: p.y, made: plotStacked(`${p.title}: ${titleOf(sweep)}`, [p], options) }));

const titleOf = ({ operation: { duty, network }, axes }: Sweep): string =>
  `${duty.title} over ${axes.map((a) => a.input.name).join(" and ")}: ${network.title}`;

function panelsOf({ operation, axes, points, jumps }: Sweep): Curves[] {
  const { duty } = operation;
  const [first, second] = axes;
  const { input, log } = first;
  const count = second?.values.length ?? 1;
  const every = Math.ceil(count / mostLines);
  const chosen = Array.from({ length: count }, (_, j) => j).filter((j) => j % every === 0);
  return duty.report.flatMap((reported, k): Curves[] => {
    const unit = unitOf(points, k);
    if (!unit) return [];
    const shown = readingUnit(duty, reported.text, unit);
    const of = (p: SweepPoint | undefined, v: number | undefined): number =>
      p?.figures && v !== undefined && Number.isFinite(v) ? inUnit(v, shown) : Number.NaN;
    const lines = chosen.map((j) => {
      const beside = second?.values[j];
      const own = jumps.filter((jump) => jump.beside === beside && jump.lines.some((l) => l.line === k));
      const along = first.values.map((_, i) => points[i * count + j] as SweepPoint | undefined);
      const banded = along.some((p) => p?.intervals[k]);
      const value = (p: SweepPoint | undefined): number => of(p, p?.figures?.[k].value);
      const shape = broken(
        first.values.map((v, i) => ({
          x: v,
          y: value(along[i]),
          low: of(along[i], along[i]?.intervals[k]?.[0]),
          high: of(along[i], along[i]?.intervals[k]?.[1]),
        })),
        own.map(({ below, above, lines: all }) => {
          const jump = all.find((l) => l.line === k);
          const sides = [jump?.before ?? Number.NaN, jump?.after ?? Number.NaN] as const;
          return {
            below,
            above,
            sides: sides.map((v) => (Number.isFinite(v) ? inUnit(v, shown) : Number.NaN)) as [number, number],
          };
        }),
      );
      return {
        label: second
          ? `${second.input.name} ${formatQuantity(second.values[j], second.input.unit, 3)}`
          : reported.text,
        unnamed: !second,
        x: shape.map((p) => inUnit(p.x, input.unit)),
        y: shape.map((p) => p.y),
        ...(along.length <= mostDots
          ? { dots: { x: first.values.map((v) => inUnit(v, input.unit)), y: along.map(value) } }
          : {}),
        ...(banded && !second ? { band: { low: shape.map((p) => p.low), high: shape.map((p) => p.high) } } : {}),
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
}

interface Drawn {
  readonly x: number;
  readonly y: number;
  readonly low: number;
  readonly high: number;
}

/** A line that goes up to each side of a jump and is not joined across it; no band is known there. */
function broken(
  line: readonly Drawn[],
  jumps: readonly { readonly below: number; readonly above: number; readonly sides: readonly [number, number] }[],
): Drawn[] {
  const rising = line.length < 2 || line[line.length - 1].x > line[0].x;
  return line.flatMap((point, i) => {
    const before = line[i - 1];
    const here = before
      ? jumps.filter((j) => j.above > Math.min(before.x, point.x) && j.below < Math.max(before.x, point.x))
      : [];
    const gap = here.flatMap(({ below, above, sides }) => {
      const none = { low: Number.NaN, high: Number.NaN };
      const ends = [
        { x: below, y: sides[0], ...none },
        { x: (below + above) / 2, y: Number.NaN, ...none },
        { x: above, y: sides[1], ...none },
      ];
      return rising ? ends : ends.reverse();
    });
    return [...gap, point];
  });
}

const unitOf = (points: readonly SweepPoint[], k: number): Unit | undefined =>
  points.find((p) => p.figures)?.figures?.[k].unit;
