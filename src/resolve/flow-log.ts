import type { Series } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { showTime } from "../read/series.js";
import { child, type MapNode } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import { type ResolvedTable, resolveTable } from "./trial-table.js";
import { resolveUnit } from "./value.js";

/** A gap this many times as long as most, and this part of the log, is said. */
const longGap = 10;
const longPart = 0.02;

/** A flow that a table logs, m3/s. Undefined where something is wrong; reported. */
export function resolveFlowLog(feed: string, node: MapNode, files: Files, report: Report): ResolvedTable | undefined {
  const unit = resolveUnit(child(child(node, "value"), "unit"), [dimensions.flow, dimensions["mass rate"]], report);
  if (!unit && child(child(node, "value"), "unit")) return undefined;
  const table = resolveTable(node, false, files, report);
  if (!table) return undefined;
  const { series, clock } = table;
  const { time, value, row, file } = series;
  const low = value.findIndex((q) => q < 0);
  if (low >= 0) {
    const flow = formatQuantity(value[low], series.valueUnit);
    report("flow-log-negative", series.at, { feed, flow, row: row[low], file });
    return undefined;
  }
  if (!value.some((q) => q > 0)) {
    report("flow-log-zero", series.at, { feed, file });
    return undefined;
  }
  const gaps = Array.from(time.subarray(1), (t, i) => t - time[i]);
  const usual = [...gaps].sort((a, b) => a - b)[gaps.length >> 1];
  const wide = gaps.reduce((most, g, i) => (g > gaps[most] ? i : most), 0);
  if (gaps[wide] > longGap * usual && gaps[wide] > longPart * (time[time.length - 1] - time[0])) {
    const show = (t: number): string => showTime(t, clock, series.timeUnit);
    report("flow-log-gap", series.at, { feed, from: show(time[wide]), to: show(time[wide + 1]), row: row[wide], file });
  }
  return table;
}

/** The mean of a log over its time, known exactly. */
export function meanFlow({ time, value, valueUnit }: Series, at: Span): Value {
  let sum = 0;
  for (let i = 0; i + 1 < time.length; i++) sum += ((value[i] + value[i + 1]) / 2) * (time[i + 1] - time[i]);
  const mean = sum / (time[time.length - 1] - time[0]);
  const expression = { type: "number" as const, value: mean, unit: valueUnit, at: { from: 0, to: 0 } };
  return { at, dimension: valueUnit.dimension, unit: valueUnit, expression, uses: [], of: () => mean, sd: undefined };
}
