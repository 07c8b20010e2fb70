import { formatNumber } from "../../units/format.js";
import { type Cell, figures, type Html, list, paragraph, section, table } from "../html.js";
import type { Prediction, StudyReport } from "../input.js";
import { predictionFigures, spreadFigures } from "../interval-figures.js";
import { estimateRow, grouped, withUnit } from "./rows.js";

/** What the vessel makes under each duty: value, interval, where mixing would put it. */
export function predictionsSection(report: StudyReport): Html {
  const { predictions, states = [], diversion = [], along } = report;
  const bounded = predictions.some((p) => p.bounds !== undefined);
  const driven = predictions.some((p) => (p.drivers?.length ?? 0) > 0);
  const rows = predictions.map((p) => {
    const { bounds } = p;
    const between = bounds
      ? `${formatNumber(bounds.segregated, 3)} to ${withUnit(bounds.maximumMixedness, p.estimate.unit)}`
      : "";
    return [
      { words: p.duty, under: p.name },
      ...valueCells(p),
      ...(bounded ? [between] : []),
      ...(driven ? [driverWords(p)] : []),
    ];
  });
  const columns = [
    { head: "duty" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    ...(bounded ? [{ head: "segregated to maximum mixedness", number: true }] : []),
    ...(driven ? [{ head: "what is unsure rests with" }] : []),
  ];
  return section("predictions", "What it makes", [
    figures(predictionFigures(report)),
    table("Predictions", columns, rows),
    ...boundsWords(predictions).map((says) => paragraph(says)),
    states.length > 0 ? `<h3>Steady states</h3>${list(states)}` : "",
    diversion.length > 0 ? `<h3>When to divert</h3>${list(diversion)}` : "",
    figures([...spreadFigures(report), ...along]),
  ]);
}

/** What follows from the bounds of mixing, once for all figures of which it is true. */
const boundsWords = (predictions: readonly Prediction[]): string[] =>
  grouped(
    predictions.filter((p) => p.boundsSay !== undefined),
    (p) => p.boundsSay ?? "",
  ).map(([says, of]) => `${[...new Set(of.map((p) => p.name))].join(", ")}: ${uncapital(says)}`);

const uncapital = (words: string): string => words.charAt(0).toLowerCase() + words.slice(1);

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
