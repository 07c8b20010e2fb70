import { namesIn } from "../expressions/ast.js";
import { isFault } from "../expressions/fault.js";
import { parseValue } from "../expressions/parse.js";
import type { Series, Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { beside } from "../read/paths.js";
import { child, entriesOf, itemsOf, type MapNode, type ScalarNode, type Tree, textOf } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { isLevel } from "../units/basis.js";
import { dimensions } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { resolveContents } from "./contents.js";
import { meanFlow, resolveFlowLog } from "./flow-log.js";
import { resolveInjection, signalNode } from "./injection.js";
import { ofSpecies, resolveReacting, resolveSteady, type TrialFiles } from "./reacting.js";
import { resolveReading, unreadable } from "./reading.js";
import { aboveZero } from "./sign.js";
import { resolveTracer } from "./tracer.js";
import { type TrialClock, trialClock } from "./trial-clock.js";
import { knownUnit, type ResolvedTable, resolveTable } from "./trial-table.js";
import { unknownValue } from "./unknown.js";
import { emptyScope, resolveValue, type Scope, type Wanted } from "./value.js";

/**
 * A trial document with its tables read, all on one clock, in SI.
 * @param tree  a document that has passed the shape check
 * @param path  of the document
 * @param open  what the trial names besides tables
 * @param scope names that `flows` and `with` may use: the network's, where one is known
 * @returns what can be read; what is wrong is reported and unknown in it, so that the rest is checked all the same
 */
export function resolveTrial(
  tree: MapNode,
  path: string,
  files: Files,
  report: Report,
  open: TrialFiles = noFiles,
  scope: Scope = emptyScope,
): Trial {
  const readingNodes = mapsOf(child(tree, "readings"));
  const injectionNodes = mapsOf(child(tree, "injection"));
  const free = readingNodes.length > 0 && readingNodes.every((node) => textOf(node, "scale") === "free");
  const table = (node: MapNode | undefined): ResolvedTable | undefined => {
    const anyWord = child(node, "calibration") !== undefined || textOf(node, "scale") === "free" || free;
    return node && child(node, "file") ? resolveTable(node, anyWord, files, report) : undefined;
  };
  const readTables = readingNodes.map(table);
  const inletTables = injectionNodes.map((node) => table(signalNode(node)));
  const logTables = entriesOf(child(tree, "flows")).flatMap(({ key, value }) => {
    if (value.type !== "map") return [];
    const log = resolveFlowLog(key.text, value, files, report);
    const unit = textOf(child(value, "value"), "unit");
    return [{ feed: key.text, at: key.at, log, unit: unit === undefined ? undefined : knownUnit(unit) }];
  });
  const tables = [...readTables, ...inletTables, ...logTables.map((l) => l.log)].filter((t) => t !== undefined);
  const clock = trialClock(tables);
  const title = child(tree, "trial");
  // Between two clocks no time is right: which of them is meant is said, and nothing more of times.
  const timed: Report = oneClock(tables, report) ? report : () => {};

  const onClock = (t: ResolvedTable | undefined): ResolvedTable | undefined => t && moved(t, -clock.originOf(t.clock));
  const injections = injectionNodes.map((node, i) =>
    resolveInjection(node, onClock(inletTables[i]), clock, free, files, timed),
  );
  const vessel = vesselPath(child(tree, "vessel"));
  const withChemistry = child(tree, "chemistry") !== undefined;
  const named = vessel === undefined ? undefined : { path: vessel, at: child(tree, "vessel")?.at ?? tree.at };
  const reacting = resolveReacting(tree, named, clock, open, timed);
  if (!withChemistry)
    for (const { key, value } of nested(child(tree, "contents"))) report("needs-chemistry", value, { key });
  const contents = withChemistry
    ? undefined
    : resolveContents(levelsOnly(child(tree, "contents")), clock, free, report);
  const start = injections[0]?.start ?? contents?.begins ?? 0;
  const first = injections[0]?.form;
  const dose = first?.is === "pulse" && !first.amount.unknown ? first.amount : undefined;
  const level = first?.is === "step" && isLevel(first.level.dimension) ? first.level : undefined;
  const planned = plannedUnit(dose, level ?? contents?.levels[0]?.level);
  if (injectionNodes.length === 0 && !child(tree, "contents") && !withChemistry)
    report("nothing-put-in", title?.at ?? tree.at, {});
  const readings = readingNodes.map((node, i) => {
    const missing = child(node, "file") !== undefined && readTables[i] === undefined;
    const own = afterMidnight(onClock(readTables[i]), start, clock);
    const reading = resolveReading(node, own, clock, planned, files, timed);
    if (missing || !reading) return unreadable(node);
    if (!withChemistry && child(node, "of")) report("needs-chemistry", child(node, "of")?.at ?? node.at, { key: "of" });
    return ofSpecies(reading, node, reacting, report);
  });
  const steady = resolveSteady(child(tree, "steady"), reacting, report);
  if (readingNodes.length === 0 && !child(tree, "steady")) report("nothing-read", title?.at ?? tree.at, {});
  const flows = values(child(tree, "flows"), [dimensions.flow, dimensions["mass rate"]], scope, report);
  for (const flow of flows.values()) if (flow.uses.length === 0) aboveZero("the flow of a feed", flow, true, report);
  const flowLogs = new Map<string, Series>();
  for (const { feed, at, log, unit } of logTables) {
    const moved = onClock(log);
    if (!moved) {
      flows.set(feed, unknownOf(unit, at));
      continue;
    }
    flowLogs.set(feed, moved.series);
    flows.set(feed, meanFlow(moved.series, at));
  }
  const { settings, late } = settingsOf(child(tree, "with"), scope, report);
  const tracer = resolveTracer(child(tree, "tracer"), report);
  const words = child(tree, "conditions");
  const conditions = new Map(entriesOf(words).map(({ key }) => [key.text, textOf(words, key.text) ?? ""]));
  if (contents && tracer?.loss)
    report("not-yet", child(tree, "contents")?.at ?? tree.at, { what: "`contents` beside a `loss` of the tracer" });
  return {
    title: textOf(tree, "trial") ?? "",
    at: title?.at ?? tree.at,
    path,
    vessel,
    vesselAt: child(tree, "vessel")?.at,
    flows,
    ...(flowLogs.size > 0 ? { flowLogs } : {}),
    with: settings,
    ...(late.size > 0 ? { late } : {}),
    ...(conditions.size > 0 ? { conditions } : {}),
    injections: injections.filter((part) => part !== undefined),
    ...(contents ? { contents } : {}),
    readings: [...readings, ...steady],
    ...(reacting ? { reacting } : {}),
    ...(tracer ? { tracer } : {}),
    ...(clock.format ? { clock: clock.format } : {}),
  };
}

/** No file can be reached. */
const noFiles: TrialFiles = { chemistry: () => undefined, flask: () => undefined };

/** A map without what holds maps. */
const levelsOnly = (node: Tree | undefined): Tree | undefined =>
  node?.type === "map" ? { ...node, entries: node.entries.filter(({ value }) => value.type !== "map") } : node;

/** Keys of a map that hold maps. */
const nested = (node: Tree | undefined): { key: string; value: Span }[] =>
  entriesOf(node).flatMap(({ key, value }) => (value.type === "map" ? [{ key: key.text, value: value.at }] : []));

/** Relative to the file in which it is written, which may be the base of a variant. */
const vesselPath = (node: Tree | undefined): string | undefined =>
  node?.type === "scalar" && !node.empty ? beside(node.at.source.path, node.text) : undefined;

const mapsOf = (node: Tree | undefined): MapNode[] =>
  itemsOf(node).flatMap((item) => (item.type === "map" ? [item] : []));

/** Constants of the day: numbers at once, what is made of names once the network is known. */
function settingsOf(
  node: Tree | undefined,
  scope: Scope,
  report: Report,
): { settings: Map<string, Value>; late: Map<string, ScalarNode> } {
  const settings = new Map<string, Value>();
  const late = new Map<string, ScalarNode>();
  for (const { key, value } of entriesOf(node)) {
    const written = value.type === "scalar" ? parseValue(value.text) : undefined;
    const open = written && !isFault(written) && namesIn(written.expression).some((n) => scope.slot(n) === undefined);
    if (open) late.set(key.text, value as ScalarNode);
    else {
      settings.set(key.text, resolveValue(value, "any", scope, report) ?? unknownValue(value.at));
    }
  }
  return { settings, late };
}

function values(node: Tree | undefined, wanted: Wanted, scope: Scope, report: Report): Map<string, Value> {
  const found = new Map<string, Value>();
  for (const { key, value } of entriesOf(node)) {
    if (value.type === "map") continue; // a table: read with the others
    found.set(key.text, resolveValue(value, wanted, scope, report) ?? unknownValue(value.at));
  }
  return found;
}

/** What stands for the mean of a log that cannot be read; its kind of flow is known by its unit. */
function unknownOf(unit: Unit | undefined, at: Span): Value {
  if (!unit) return unknownValue(at);
  const { unknown: _, ...mean } = unknownValue(at, unit.dimension);
  return mean;
}

/** Elapsed times and clock times have no common zero. */
function oneClock(tables: readonly ResolvedTable[], report: Report): boolean {
  const clocked = tables.find((t) => t.clock);
  const elapsed = tables.find((t) => !t.clock);
  if (!clocked?.clock || !elapsed) return true;
  const { series } = elapsed;
  report("clocks-mixed", series.at, { file: series.file, clock: clocked.series.file, format: clocked.clock.text });
  return false;
}

function moved(table: ResolvedTable, by: number): ResolvedTable {
  return by === 0 ? table : { ...table, series: { ...table.series, time: table.series.time.map((t) => t + by) } };
}

/** Beside a log that runs past midnight, one that ends more than half a day before the injection is of the next day. */
function afterMidnight(table: ResolvedTable | undefined, start: number, clock: TrialClock): ResolvedTable | undefined {
  if (!table?.clock || table.clock.dated || clock.format?.dated) return table;
  const last = table.series.time[table.series.time.length - 1];
  return last < start - 43_200 ? moved(table, 86_400) : table;
}

/** The unit of concentration that a planned reading is in: that of the dose in a liter, or of what enters or is inside. */
function plannedUnit(amount: Value | undefined, level: Value | undefined): Unit {
  if (!amount && level?.unit) return level.unit;
  const perLiter = amount?.unit && knownUnit(`${amount.unit.name}/L`);
  return perLiter ?? { name: "g/L", factor: 1, offset: 0, dimension: dimensions["mass concentration"] };
}
