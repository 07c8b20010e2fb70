import { predict } from "../reaction/prediction.js";
import { plantOf } from "./operate.js";
import type { Bounds, Prediction, Ranked } from "./result.js";
import type { Sample } from "./sample.js";
import { interval95 } from "./spread.js";
import { spreadsOf } from "./spread-shares.js";

/** A duty's figures for a ranked rival at its fitted values, with intervals from the draws and the bounds of mixing. */
export function predictDuty(ranked: Ranked, { operation, rows, values }: Sample): Prediction[] {
  const { duty } = operation;
  const { plant } = plantOf(operation);
  if (!plant) return [];
  const { state, figures, bounds, premises } = predict(plant, duty);
  const spreads = spreadsOf(operation, ranked.fit, rows, values);
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
      bounds: within,
      spread: spreads[k],
      steady: state,
      plant,
    };
  });
}
