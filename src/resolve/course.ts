import type { DutyFeed, FeedCourse, Placed } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type Entry, type MapNode } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { concentrationBases } from "./bases.js";
import { aboveZero } from "./sign.js";
import { resolveTable } from "./trial-table.js";
import { emptyScope, resolveUnit, resolveValue } from "./value.js";

/**
 * What a feed brings, or a place holds: concentrations by species, some of which may change in time.
 * @param what for messages: "in feed 'feed', the concentration of"
 */
export function resolveMixture(
  at: Span,
  entries: readonly Entry[],
  what: string,
  files: Files,
  report: Report,
): DutyFeed {
  const species = new Map<string, Placed>();
  const courses = new Map<string, FeedCourse>();
  for (const { key, value } of entries) {
    const named = `${what} '${key.text}'`;
    if (value.type === "map") {
      const found = child(value, "file") ? resolveLog(value, named, files, report) : resolveUpset(value, named, report);
      if (!found) continue;
      species.set(key.text, { at: key.at, value: found.before });
      courses.set(key.text, found.course);
      continue;
    }
    const resolved = resolveValue(value, concentrationBases, emptyScope, report);
    if (resolved && aboveZero(named, resolved, true, report)) species.set(key.text, { at: key.at, value: resolved });
  }
  return { at, species, ...(courses.size > 0 ? { courses } : {}) };
}

interface Changing {
  readonly before: Value;
  readonly course: FeedCourse;
}

function resolveUpset(node: MapNode, what: string, report: Report): Changing | undefined {
  const level = (key: string): Value | undefined => {
    const value = resolveValue(child(node, key), concentrationBases, emptyScope, report);
    return value && aboveZero(what, value, true, report) ? value : undefined;
  };
  const time = (key: string, name: string, zero: boolean): Value | "none" | undefined => {
    const written = child(node, key);
    if (!written) return "none";
    const value = resolveValue(written, dimensions.time, emptyScope, report);
    return value && aboveZero(`the ${name} of an upset`, value, zero, report) ? value : undefined;
  };
  const [before, to] = [level("from"), level("to")];
  const [start, lasting] = [time("start", "start", true), time("lasting", "length", false)];
  if (!before || !to || !start || !lasting) return undefined;
  if (!sameDimension(before.dimension, to.dimension)) {
    report("upset-units", to.at, { from: before.unit?.name ?? "", to: to.unit?.name ?? "" });
    return undefined;
  }
  return {
    before,
    course: {
      is: "upset",
      to,
      start: start === "none" ? 0 : start.of([]),
      lasting: lasting === "none" ? undefined : lasting.of([]),
    },
  };
}

/** A logged feed value: straight between rows, its first value before them and its last after. */
function resolveLog(node: MapNode, what: string, files: Files, report: Report): Changing | undefined {
  const unitNode = child(child(node, "value"), "unit");
  if (unitNode && !resolveUnit(unitNode, concentrationBases, report)) return undefined;
  const table = resolveTable(node, false, files, report);
  if (!table) return undefined;
  const { time, value, row, file, at, valueUnit } = table.series;
  const low = value.findIndex((c) => c < 0);
  if (low >= 0) {
    report("log-negative", at, { what, value: formatQuantity(value[low], valueUnit), row: row[low], file });
    return undefined;
  }
  // Clock times are counted from the first row.
  const origin = table.clock ? time[0] : 0;
  const times = time.map((t) => t - origin);
  return { before: constant(value[0], valueUnit, at), course: { is: "logged", times, values: value.slice() } };
}

function constant(value: number, unit: Unit, at: Span): Value {
  const expression = { type: "number" as const, value, unit, at: { from: 0, to: 0 } };
  return { at, dimension: unit.dimension, unit, expression, uses: [], of: () => value, sd: undefined };
}
