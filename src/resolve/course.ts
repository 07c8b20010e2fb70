import type { DutyFeed, FeedCourse, Placed } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type Entry, entriesOf, type MapNode, type Tree } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { concentrationBases } from "./bases.js";
import { certain } from "./certain.js";
import { resolveFlowLog } from "./flow-log.js";
import { aboveZero } from "./sign.js";
import { type ResolvedTable, resolveTable } from "./trial-table.js";
import { unknownValue } from "./unknown.js";
import { emptyScope, resolveTemperature, resolveUnit, resolveValue, type Wanted } from "./value.js";

/** What the course of a temperature goes by among those of a feed's species. */
export const temperatureName = "temperature";

/** What sort of quantity changes, and how a message speaks of it. */
interface Changed {
  /** "in feed 'feed', the concentration of 'A'". */
  readonly what: string;
  readonly wanted: Wanted;
  /** May it be zero, before and as what it goes to? */
  readonly zero: boolean;
  readonly toZero: boolean;
  readonly read: (node: Tree | undefined, report: Report) => Value | undefined;
}

const plain = (what: string, wanted: Wanted): Changed => ({
  what,
  wanted,
  zero: true,
  toZero: true,
  read: (node, report) => resolveValue(node, wanted, emptyScope, report),
});

/**
 * What a feed brings, or a place holds: concentrations by species, some of which may change in time, and how warm it is.
 * @param warm whether it may have a temperature
 * @param where for messages: "feed 'feed'"
 */
export function resolveMixture(
  at: Span,
  entries: readonly Entry[],
  warm: boolean,
  where: string,
  files: Files,
  report: Report,
): DutyFeed {
  const species = new Map<string, Placed>();
  const courses = new Map<string, FeedCourse>();
  let temperature: Value | undefined;
  for (const { key, value } of entries) {
    const isWarmth = warm && key.text === temperatureName;
    const of: Changed = isWarmth
      ? {
          what: `the temperature of ${where}`,
          wanted: dimensions.temperature,
          zero: false,
          toZero: false,
          read: (node, tell) => resolveTemperature(node, emptyScope, tell),
        }
      : plain(`in ${where}, the concentration of '${key.text}'`, concentrationBases);
    let found: Value | undefined;
    if (value.type === "map") {
      const changing = resolveChanging(value, of, files, report);
      found = changing?.before;
      if (changing) courses.set(key.text, changing.course);
    } else {
      const resolved = of.read(value, report);
      if (resolved && aboveZero(of.what, resolved, of.zero, report)) found = resolved;
    }
    if (isWarmth) temperature = found ?? unknownValue(value.at, dimensions.temperature);
    else if (found) species.set(key.text, { at: key.at, value: found });
  }
  return { at, species, temperature, ...(courses.size > 0 ? { courses } : {}) };
}

/** Flows by feed, some of which may change in time. */
export function resolveFlows(
  node: Tree | undefined,
  files: Files,
  report: Report,
): { flows: Map<string, Placed>; flowCourses: Map<string, FeedCourse> } {
  const flows = new Map<string, Placed>();
  const flowCourses = new Map<string, FeedCourse>();
  for (const { key, value } of entriesOf(node)) {
    const of = { ...plain(`the flow of feed '${key.text}'`, dimensions.flow), zero: false };
    if (value.type === "map") {
      const changing = child(value, "file")
        ? loggedFlow(key.text, value, files, report)
        : resolveUpset(value, of, report);
      if (!changing) continue;
      if (changing.course.is === "upset") certain(`what ${of.what} changes to`, changing.course.to, report);
      flows.set(key.text, { at: key.at, value: changing.before });
      flowCourses.set(key.text, changing.course);
      continue;
    }
    const resolved = of.read(value, report);
    if (resolved && aboveZero(of.what, resolved, false, report)) flows.set(key.text, { at: key.at, value: resolved });
  }
  return { flows, flowCourses };
}

interface Changing {
  readonly before: Value;
  readonly course: FeedCourse;
}

const resolveChanging = (node: MapNode, of: Changed, files: Files, report: Report): Changing | undefined =>
  child(node, "file") ? resolveLog(node, of, files, report) : resolveUpset(node, of, report);

function resolveUpset(node: MapNode, { what, zero, toZero, read }: Changed, report: Report): Changing | undefined {
  const level = (key: string, orZero: boolean): Value | undefined => {
    const value = read(child(node, key), report);
    return value && aboveZero(what, value, orZero, report) ? value : undefined;
  };
  const time = (key: string, name: string, orZero: boolean): Value | "none" | undefined => {
    const written = child(node, key);
    if (!written) return "none";
    const value = resolveValue(written, dimensions.time, emptyScope, report);
    certain(`the ${name} of an upset`, value, report);
    return value && aboveZero(`the ${name} of an upset`, value, orZero, report) ? value : undefined;
  };
  const [before, to] = [level("from", zero), level("to", toZero)];
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
function resolveLog(node: MapNode, { what, wanted }: Changed, files: Files, report: Report): Changing | undefined {
  const unitNode = child(child(node, "value"), "unit");
  if (unitNode && !resolveUnit(unitNode, wanted, report)) return undefined;
  const table = resolveTable(node, false, files, report);
  if (!table) return undefined;
  const { value, row, file, valueUnit } = table.series;
  const low = value.findIndex((c) => c < 0);
  if (low >= 0) {
    report("log-negative", table.series.at, {
      what,
      value: formatQuantity(value[low], valueUnit),
      row: row[low],
      file,
    });
    return undefined;
  }
  return logged(table);
}

function loggedFlow(feed: string, node: MapNode, files: Files, report: Report): Changing | undefined {
  const table = resolveFlowLog(feed, node, files, report);
  if (table && !(table.series.value[0] > 0)) {
    report("flow-log-still", table.series.at, { feed, file: table.series.file });
    return undefined;
  }
  return table && logged(table);
}

/** Clock times are counted from the first row. */
function logged({ series, clock }: ResolvedTable): Changing {
  const { time, value, at, valueUnit } = series;
  const origin = clock ? time[0] : 0;
  const times = time.map((t) => t - origin);
  return { before: constant(value[0], valueUnit, at), course: { is: "logged", times, values: value.slice() } };
}

function constant(value: number, unit: Unit, at: Span): Value {
  const expression = { type: "number" as const, value, unit, at: { from: 0, to: 0 } };
  return { at, dimension: unit.dimension, unit, expression, uses: [], of: () => value, sd: undefined };
}
