import type { Reported } from "../../model/duty.js";
import type { Figure } from "../../reaction/figures.js";
import type { AimResult, Reached } from "../../study/aim.js";
import type { JumpFound } from "../../study/jumps.js";
import type { OtherStates } from "../../study/other-states.js";
import type { Sweep } from "../../study/sweep.js";
import type { WashOutFound } from "../../study/wash-outs.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { finite, type QuantityJson, quantity, series, unitName } from "./quantity.js";
import { reportedJson } from "./steady.js";

/** A sweep: its inputs, then every point with its figures, or why there are none. Conversion, yield and selectivity are fractions. */
export function sweepJson({
  operation,
  axes,
  points,
  others,
  jumps,
  washOuts,
  draws,
  stopped,
}: Sweep): Record<string, unknown> {
  return {
    over: axes.map(({ input, values }) => ({ name: input.name, ...series(values, input.unit) })),
    points: points.map(({ at, figures, cannot, intervals }) => ({
      at: at.map((v, k) => quantity(v, axes[k].input.unit)),
      ...(figures
        ? {
            figures: figures.map((f, k) => ({
              name: f.name,
              ...reportedJson(f),
              interval95: intervalJson(intervals[k], f.unit),
            })),
          }
        : { figures: null, cannot }),
    })),
    otherStates: others.map((o) =>
      otherStatesJson(
        o,
        axes.map((a) => a.input.unit),
      ),
    ),
    jumps: jumps.map((jump) => ({
      ...jumpJson(jump, axes[0].input.unit, operation.duty.report, points.find((p) => p.figures)?.figures ?? []),
      ...(axes[1] && jump.beside !== undefined ? { where: quantity(jump.beside, axes[1].input.unit) } : {}),
    })),
    ...(washOuts.length > 0 ? { washOuts: washOutsJson(washOuts, axes[0].input.unit) } : {}),
    draws,
    ...(stopped ? { stopped: "cancelled" } : {}),
  };
}

/** Where figures jump as an input rises: `what` happens there, and how far the states on both sides go on. */
export const jumpJson = (
  { below, above, lines, what, stays }: JumpFound,
  unit: Unit,
  report: readonly Reported[],
  figures: readonly Figure[],
): object => ({
  at: quantity((below + above) / 2, unit),
  what,
  figures: lines.map(({ line, before, after }) => ({
    name: report[line].text,
    before: quantity(before, figures[line].unit),
    after: quantity(after, figures[line].unit),
  })),
  ...(stays
    ? {
        staysDownTo: stays.down === undefined ? null : quantity(stays.down, unit),
        staysUpTo: stays.up === undefined ? null : quantity(stays.up, unit),
      }
    : {}),
});

const washOutsJson = (washOuts: readonly WashOutFound[], unit: Unit): object[] =>
  washOuts.map(({ at, of, as }) => ({ at: quantity(at, unit), of, as }));

const intervalJson = (interval: readonly [number, number] | undefined, unit: Unit): (number | null)[] | null =>
  interval ? interval.map((v) => finite(inUnit(v, unit))) : null;

/** The same as a table; cells of points that cannot be are empty. */
export function sweepCsv({ operation, axes, points }: Sweep): string {
  const first = points.find((p) => p.figures)?.figures;
  const banded = operation.duty.report.map((_, k) => points.some((p) => p.intervals[k]));
  const header = [
    ...axes.map(({ input }) => `${input.name} [${unitName(input.unit)}]`),
    ...operation.duty.report.flatMap(({ text }, k) => {
      const name = `${text} [${first ? unitName(first[k].unit) : "1"}]`;
      return banded[k] ? [name, `${name} 2.5 %`, `${name} 97.5 %`] : [name];
    }),
    "left out because",
  ];
  const number = (v: number | undefined): string => (v === undefined || !Number.isFinite(v) ? "" : String(v));
  const rows = points.map(({ at, figures, intervals, cannot }) => [
    ...at.map((v, k) => number(inUnit(v, axes[k].input.unit))),
    ...operation.duty.report.flatMap((_, k) => {
      const f = figures?.[k];
      const cells = [f?.value, ...(banded[k] ? [intervals[k]?.[0], intervals[k]?.[1]] : [])];
      return cells.map((v) => number(f && v !== undefined ? inUnit(v, f.unit) : undefined));
    }),
    cannot ?? "",
  ]);
  const cell = (text: string): string => (/[",\n\r]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text);
  return `${[header, ...rows].map((r) => r.map(cell).join(",")).join("\n")}\n`;
}

/** What an aim came to. */
export function aimJson(found: AimResult): Record<string, unknown> {
  const {
    aim,
    range,
    sign,
    confidence,
    crossings,
    met,
    metByAll,
    metByStable,
    jumps,
    washOuts,
    best,
    impossible,
    others,
    draws,
    stopped,
  } = found;
  const { unit } = range.input;
  const stretch = ({ from, to }: { from: number; to: number }): object => ({
    from: quantity(from, unit),
    to: quantity(to, unit),
  });
  return {
    aim: { text: aim.text, figure: aim.line.text, sign, target: quantity(aim.target.value, aim.target.unit) },
    by: { name: range.input.name, ...stretch(range) },
    confidence: confidence ?? null,
    reachable: crossings.length > 0 || met.length > 0,
    crossings: crossings.map((c) => reachedJson(c, unit)),
    met: met.map(stretch),
    ...(metByAll ? { metInEveryState: metByAll.map(stretch) } : {}),
    ...(metByStable ? { metInStableState: metByStable.map(stretch) } : {}),
    ...(washOuts.length > 0 ? { washOuts: washOutsJson(washOuts, unit) } : {}),
    jumps: best ? jumps.map((jump) => jumpJson(jump, unit, [aim.line], [best.figure])) : [],
    best: best ? reachedJson(best, unit) : null,
    impossible: impossible.map((s) => ({ ...stretch(s), why: s.why })),
    otherStates: others.map((o) => otherStatesJson(o, [unit])),
    draws,
    ...(stopped ? { stopped: "cancelled" } : {}),
  };
}

const reachedJson = (
  { at, figure, share, shareError, kept }: Reached,
  unit: Unit,
): {
  value: number | null;
  unit: string;
  figure: QuantityJson;
  shareMeeting: number | null;
  shareError: number | null;
  kept?: QuantityJson;
} => ({
  value: finite(inUnit(at, unit)),
  unit: unitName(unit),
  figure: reportedJson(figure),
  shareMeeting: share ?? null,
  shareError: shareError ?? null,
  ...(kept === undefined ? {} : { kept: quantity(kept, figure.unit) }),
});

/** Steady states that a search found at one point, each with what it reports. */
export const otherStatesJson = ({ at, states, left }: OtherStates, units: readonly Unit[]): object => ({
  ...(units.length > 0 ? { at: at.map((v, k) => quantity(v, units[k])) } : {}),
  states: states.map(({ figures, stable, swings, reached }) => ({
    stable: stable ?? null,
    ...(swings ? { swings } : {}),
    fromFeed: reached,
    report: figures.map((f) => ({ name: f.name, ...reportedJson(f) })),
  })),
  notSearched: left,
});
