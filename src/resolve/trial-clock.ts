import type { Report } from "../problems/report.js";
import { type ClockFormat, guessClock } from "../read/clock.js";
import { showTime } from "../read/series.js";
import type { Tree } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { certain } from "./certain.js";
import type { ResolvedTable } from "./trial-table.js";
import { emptyScope, resolveValue } from "./value.js";

/**
 * The one clock that all tables of a trial share. Elapsed times are kept as they are; clock times count from midnight
 * of the first day.
 */
export interface TrialClock {
  /** How times are written; undefined where they are elapsed. */
  readonly format: ClockFormat | undefined;
  /** First and last time of all tables, s; 0 where there is none. */
  readonly first: number;
  readonly last: number;
  /** Seconds to take off what a table's own format reads. */
  originOf(format: ClockFormat | undefined): number;
  /** A time written in the document: as the tables write it, or elapsed since their first row. Reports. */
  time(node: Tree, report: Report): number | undefined;
  show(t: number): string;
}

const day = 86_400;

/** Builds it from the tables that could be read. */
export function trialClock(tables: readonly ResolvedTable[]): TrialClock {
  const dated = tables.filter(({ clock }) => clock?.dated);
  const earliest = Math.min(...dated.map(({ series }) => series.time[0]));
  const origin = dated.length > 0 ? Math.floor(earliest / day) * day : 0;
  const originOf = (format: ClockFormat | undefined): number => (format?.dated ? origin : 0);
  const ends = tables.map(({ series, clock }) => {
    const shift = originOf(clock);
    return [series.time[0] - shift, series.time[series.time.length - 1] - shift];
  });
  const first = ends.length > 0 ? Math.min(...ends.map(([a]) => a)) : 0;
  const last = ends.length > 0 ? Math.max(...ends.map(([, b]) => b)) : 0;
  const formats = tables.flatMap(({ clock }) => clock ?? []);
  const format = formats[0];
  const unit: Unit | undefined = tables[0]?.series.timeUnit;
  // A clock without dates that has passed midnight: a time before the first row that comes again before the last is of the next day.
  const unwrapped = (t: number, { dated }: ClockFormat): number =>
    !dated && t < first && t + day <= last ? t + day : t;
  const show = (t: number): string => showTime(t + originOf(format), format, unit);
  return {
    format,
    first,
    last,
    originOf,
    show,
    time(node, report) {
      if (node.type !== "scalar") return undefined;
      for (const f of formats) {
        const t = f.read(node.text);
        if (t !== undefined) return unwrapped(t - originOf(f), f);
      }
      const guess = guessClock(node.text);
      const isElapsed = /^[+-]?[\d.]+(?:[eE][+-]?\d+)?(?: \S.*)?$/.test(node.text.trim());
      if (guess !== undefined && guess !== "ambiguous" && (format !== undefined || tables.length === 0)) {
        const t = guess.read(node.text);
        if (t !== undefined) return unwrapped(t - originOf(guess), guess);
      } else if (guess === undefined && isElapsed) {
        const value = resolveValue(node, dimensions.time, emptyScope, report);
        certain("a time on the trial's clock", value, report);
        return value && value.of([]) + (format ? first : 0);
      }
      report("start-unclear", node.at, { text: node.text, example: show(first) });
      return undefined;
    },
  };
}
