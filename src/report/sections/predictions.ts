import { formatNumber } from "../../units/format.js";
import { type Cell, figure, type Html, list, section, table } from "../html.js";
import type { Prediction, StudyReport } from "../input.js";
import { predictionFigures, spreadFigures } from "../interval-figures.js";
import { estimateRow, withUnit } from "./rows.js";

/** What the vessel makes under each duty: value, interval, where mixing would put it. */
export function predictionsSection(report: StudyReport): Html {
  const { predictions, states = [], along } = report;
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
  return section("predictions", "What it makes", [
    ...predictionFigures(report).map(figure),
    table("Predictions", columns, rows),
    states.length > 0 ? `<h3>Steady states</h3>${list(states)}` : "",
    ...spreadFigures(report).map(figure),
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
