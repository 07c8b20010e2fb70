import { drawIntervals, type IntervalRow, intervalsTable } from "../../draw/intervals.js";
import { formatNumber } from "../../units/format.js";
import { estimateLine } from "../digits.js";
import { figure, type Html, section, table } from "../html.js";
import type { Prediction, StudyReport } from "../input.js";
import { estimateRow, grouped } from "./rows.js";

/** What the vessel makes under each duty: value, interval, where mixing would put it. */
export function predictionsSection({ predictions }: StudyReport): Html {
  const driven = predictions.some((p) => p.drivenBy !== undefined);
  const rows = predictions.map((p) => {
    const { bounds, boundsSay } = p;
    const between = bounds
      ? `${formatNumber(bounds.segregated, 3)} to ${formatNumber(bounds.maximumMixedness, 3)}`
      : (boundsSay ?? "");
    return [
      { words: p.duty, under: p.name },
      ...estimateRow("", p.estimate).slice(1),
      bounds && boundsSay ? { words: between, under: boundsSay } : between,
      ...(driven ? [p.drivenBy ?? ""] : []),
    ];
  });
  const columns = [
    { head: "duty" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    { head: "segregated to maximum mixedness" },
    ...(driven ? [{ head: "most of the spread from" }] : []),
  ];
  const drawn = grouped(predictions, (p) => `${p.name}, ${p.estimate.unit}`).map(([quantity, list], k) => {
    const intervals = { title: quantity, quantity, rows: list.flatMap(predictionRow) };
    return figure({
      name: `prediction-${k + 1}`,
      drawing: drawIntervals(intervals, { untitled: true }),
      data: { table: intervalsTable(intervals) },
      caption: list.some((p) => p.bounds)
        ? `${quantity}: value, 95 % interval, and where full segregation and maximum mixedness would put it.`
        : `${quantity}: value and 95 % interval.`,
    });
  });
  return section("predictions", "What it makes", [...drawn, table("Predictions", columns, rows)]);
}

function predictionRow(p: Prediction): readonly IntervalRow[] {
  const { value, low, high } = p.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  const text = estimateLine(p.estimate);
  return [{ label: p.duty, value, low, high, text, ...(p.bounds ? { bounds: p.bounds } : {}) }];
}
