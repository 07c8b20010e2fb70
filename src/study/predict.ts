import type { Duty } from "../model/duty.js";
import { predict } from "../reaction/prediction.js";
import { changes } from "../transient/course-line.js";
import { asksForTime, withTimes } from "../transient/in-time.js";
import { betterIs } from "./direction.js";
import { diversionWindows } from "./diversion.js";
import { overTime } from "./in-time.js";
import { noRow, plantOf, type Row } from "./operate.js";
import { otherStates } from "./other-states.js";
import type { Bounds, Prediction, Ranked } from "./result.js";
import type { Sample } from "./sample.js";
import { interval95, quantile } from "./spread.js";
import { spreadsOf } from "./spread-shares.js";

/** A duty's figures for a ranked rival at its fitted values, with intervals from the draws and the bounds of mixing. */
export function predictDuty(ranked: Ranked, { operation, rows, values }: Sample): Prediction[] {
  const { duty } = operation;
  const { plant } = plantOf(operation);
  if (!plant) return [];
  const { state, figures: steady, bounds, premises } = predict(plant, duty);
  const figures = withTimes(plant, duty, steady);
  const spreads = spreadsOf(operation, ranked.fit, rows, values);
  const states = otherStates(operation, noRow);
  const course = overTime(plant, duty);
  const windows = asksForTime(duty) && changes(duty) ? diversionWindows(operation, someRows(rows), 0) : [];
  return figures.map((f, k): Prediction => {
    const b = bounds[k];
    const within: Bounds | undefined = b && {
      segregated: b.segregated.value,
      maximumMixedness: b.maximumMixedness.value,
      position: b.position,
      says: premises?.says ?? "",
      apply: premises?.bound ?? "not checked",
    };
    return {
      rival: ranked.rival,
      duty,
      name: f.name,
      value: f.value,
      unit: f.unit,
      interval95: interval95(values.map((s) => s?.[k] ?? Number.NaN)),
      oneSided95: oneSided(duty, k, values),
      bounds: within,
      spread: spreads[k],
      steady: state,
      states,
      diversion: windows.find((w) => w.line === duty.report[k]),
      course,
      plant,
    };
  });
}

/** Each row is a run in time. */
const mostRuns = 100;
const someRows = (rows: readonly Row[]): readonly Row[] => (rows.length > 0 ? rows.slice(0, mostRuns) : [noRow]);

/** Fewer draws have no end that is worth telling. */
const fewest = 20;

function oneSided(duty: Duty, k: number, values: Sample["values"]): Prediction["oneSided95"] {
  const sign = betterIs(duty, k);
  const drawn = values.flatMap((v) => (v && !Number.isNaN(v[k]) ? [v[k]] : [])).sort((a, b) => a - b);
  if (sign === 0 || drawn.length < fewest) return undefined;
  return { bound: sign > 0 ? "at least" : "at most", value: quantile(drawn, sign > 0 ? 0.05 : 0.95) };
}
