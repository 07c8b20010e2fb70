import type { StudyResult } from "../../study/result.js";
import type { Spread } from "../../study/spread-shares.js";
import { formatNumber } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import type { Prediction } from "../input.js";
import { steadyTitle } from "./before-change.js";
import { driverName, methodWords, spreadWords } from "./driver-words.js";
import { estimate, readingUnit } from "./estimate.js";

/** What the best network makes under each duty. */
export const predictionRows = (result: StudyResult): Prediction[] =>
  result.predictions.filter((p) => p.rival === result.ranking[0]?.rival).map(predictionRow);

function predictionRow(p: StudyResult["predictions"][number]): Prediction {
  const unit = readingUnit(p.duty, p.name, p.unit);
  const b = p.bounds;
  return {
    duty: steadyTitle(p.duty, p.name),
    name: p.name,
    estimate: estimate(p.value, p.interval95, unit),
    ...(b && b.apply !== "no"
      ? { bounds: { segregated: inUnit(b.segregated, unit), maximumMixedness: inUnit(b.maximumMixedness, unit) } }
      : {}),
    ...(b?.says ? { boundsSay: b.says } : {}),
    ...oneSidedRow(p, unit),
    ...spreadRow(p.spread),
  };
}

/** Limits are kept or not: of a kill and of what is left over the end that hurts is told. */
function oneSidedRow(
  { duty, name, oneSided95 }: StudyResult["predictions"][number],
  unit: Unit,
): Pick<Prediction, "oneSided"> {
  const what = duty.report.find((r) => r.text === name)?.what;
  if (!oneSided95 || (what !== "log-removal" && what !== "concentration")) return {};
  return { oneSided: `${oneSided95.bound} ${formatNumber(inUnit(oneSided95.value, unit), 3)} with 95 %` };
}

function spreadRow(spread: Spread | undefined): Pick<Prediction, "drivers" | "spreadSays" | "spreadMethod"> {
  const says = spreadWords(spread);
  if (!spread || says === undefined) return {};
  return {
    drivers: spread.drivers.map((d) => ({ name: driverName(d), share: d.share })),
    spreadSays: says,
    spreadMethod: methodWords(spread),
  };
}
