import type { Report } from "../problems/report.js";
import { clockFormat } from "../read/clock.js";
import { decodeText } from "../read/decode.js";
import type { Files } from "../read/files.js";
import { openTable } from "../read/open.js";
import { beside } from "../read/paths.js";
import { type ReadSeries, readSeries, type SeriesSpec } from "../read/series.js";
import { child, type MapNode, type Tree, textOf } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { parseUnit } from "../units/parse.js";
import type { Unit } from "../units/unit.js";
import { resolveDetectorUnit } from "./detector.js";
import { column, csvOptions } from "./table-keys.js";
import { resolveUnit } from "./value.js";

/** Where the table of a reading is, how its clock is written, and what it holds. */
export interface ResolvedTable extends ReadSeries {
  readonly valueUnit: Unit;
}

/**
 * Reads the table that `file`, `time`, `value` and `csv` of a reading or a measured inlet name.
 * @returns undefined where something is wrong; reported
 */
export function resolveTable(node: MapNode, anyWord: boolean, files: Files, report: Report): ResolvedTable | undefined {
  const fileNode = child(node, "file");
  const file = textOf(node, "file");
  if (!fileNode || file === undefined) return undefined;
  const full = beside(fileNode.at.source.path, file);
  const content = openTable(full, { text: file, at: fileNode.at }, files, report);
  const time = column(child(node, "time"), fileNode);
  const value = column(child(node, "value"), fileNode);
  const format = resolveFormat(child(node, "time"), report);
  const timeUnit = resolveUnit(child(child(node, "time"), "unit"), dimensions.time, report);
  const valueUnit = resolveDetectorUnit(child(node, "value"), "unit", anyWord, report);
  const units = checkUnits(node, timeUnit, valueUnit, report);
  const warm = temperatureColumn(child(child(node, "calibration"), "temperature"), fileNode, report);
  if (warm === "faulty") return undefined;
  if (content === undefined || !time || !value || !valueUnit || format === "faulty" || !units) return undefined;
  const spec = {
    file: full,
    at: fileNode.at,
    time: { ...time, unit: timeUnit },
    format,
    value: { ...value, unit: valueUnit },
    beside: warm,
    csv: csvOptions(child(node, "csv")),
    shownTime: minute,
  };
  const read = readSeries({ path: full, text: decodeText(content) }, spec, report);
  return read && { ...read, valueUnit };
}

function temperatureColumn(node: Tree | undefined, file: Tree, report: Report): SeriesSpec["beside"] | "faulty" {
  if (!node) return undefined;
  const name = column(node, file);
  const unit = resolveUnit(child(node, "unit"), dimensions.temperature, report);
  return name && unit ? { ...name, unit } : "faulty";
}

const minute: Unit = { name: "min", factor: 60, offset: 0, dimension: dimensions.time };

function resolveFormat(time: Tree | undefined, report: Report): ReturnType<typeof clockFormat> | "faulty" {
  const text = textOf(time, "format");
  const node = child(time, "format");
  if (!node || text === undefined) return undefined;
  const format = clockFormat(text);
  if (!format) report("bad-format", node.at, { format: text });
  return format ?? "faulty";
}

/** Are units there when they must be, and not beside a format? */
function checkUnits(node: MapNode, time: Unit | undefined, value: Unit | undefined, report: Report): boolean {
  const before = { time: child(node, "time"), value: child(node, "value") };
  const name = (part: "time" | "value"): string => textOf(before[part], "column") ?? part;
  if (before.value && !value && !child(before.value, "unit"))
    report("unit-missing", before.value.at, { column: name("value") });
  if (!time) return child(before.time, "unit") === undefined;
  if (!child(before.time, "format")) return true;
  report("unit-and-format", child(before.time, "unit")?.at ?? node.at, { column: name("time") });
  return false;
}

/** A unit by its name where it is surely one. */
export const knownUnit = (text: string): Unit | undefined => {
  const unit = parseUnit(text);
  return "factor" in unit ? unit : undefined;
};
