import { plotBars } from "../../draw/bars.js";
import { drawIntervals, type IntervalRow, intervalsTable } from "../../draw/intervals.js";
import { formatNumber } from "../../units/format.js";
import { figureLine } from "../digits.js";
import { type Cell, figure, type Html, list, section, table } from "../html.js";
import type { Prediction, StudyReport } from "../input.js";
import { estimateRow, grouped, withUnit } from "./rows.js";

/** What the vessel makes under each duty: value, interval, where mixing would put it. */
export function predictionsSection({ predictions, states = [], along }: StudyReport): Html {
  const driven = predictions.some((p) => (p.drivers?.length ?? 0) > 0);
  const rows = predictions.map((p) => {
    const { bounds, boundsSay } = p;
    const between = bounds
      ? `${formatNumber(bounds.segregated, 3)} to ${withUnit(bounds.maximumMixedness, p.estimate.unit)}`
      : (boundsSay ?? "");
    return [
      { words: p.duty, under: p.name },
      ...valueCells(p),
      bounds && boundsSay ? { words: between, under: boundsSay } : between,
      ...(driven ? [driverWords(p)] : []),
    ];
  });
  const columns = [
    { head: "duty" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    { head: "segregated to maximum mixedness" },
    ...(driven ? [{ head: "what is unsure rests with" }] : []),
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
  return section("predictions", "What it makes", [
    ...drawn,
    table("Predictions", columns, rows),
    states.length > 0 ? `<h3>Steady states</h3>${list(states)}` : "",
    ...spreads(predictions),
    ...along.map(figure),
  ]);
}

/** Value and interval; below the interval what is kept on the side that hurts. */
function valueCells(p: Prediction): Cell[] {
  const [value, interval] = estimateRow("", p.estimate).slice(1);
  return [value, p.oneSided === undefined ? interval : { words: interval, under: p.oneSided }];
}

/** "k2 (71 %), corner (20 %)" */
const driverWords = ({ drivers = [] }: Prediction): string =>
  drivers
    .slice(0, 2)
    .map((d) => `${d.name} (${Math.round(100 * d.share)}\u2009%)`)
    .join(", ");

const mostSpreads = 2;
const mostDrivers = 6;

/** What to measure better to narrow an interval: one picture each for the first predictions that have several inputs. */
function spreads(predictions: readonly Prediction[]): Html[] {
  const told = predictions.filter((p) => (p.drivers?.length ?? 0) > 1).slice(0, mostSpreads);
  return told.map((p, k) => {
    const title = `${p.duty}: what holds the uncertainty of ${p.name}`;
    const rows = (p.drivers ?? []).slice(0, mostDrivers).map((d) => ({ label: d.name, percent: 100 * d.share }));
    const says = p.spreadSays === undefined ? "" : `: ${p.spreadSays}`;
    const how = p.spreadMethod === undefined ? "" : ` (${p.spreadMethod})`;
    return figure({
      name: `spread-${k + 1}`,
      ...plotBars({ title, quantity: "share of the variance, %", rows }, { untitled: true }),
      caption: `${title}${says}${how}.`,
    });
  });
}

function predictionRow(p: Prediction): readonly IntervalRow[] {
  const { value, low, high } = p.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  const text = figureLine(p.name, p.estimate);
  return [{ label: p.duty, value, low, high, text, ...(p.bounds ? { bounds: p.bounds } : {}) }];
}
