import { readingLabel } from "../../model/trial.js";
import type { StudyResult } from "../../study/result.js";
import { formatQuantity } from "../../units/format.js";
import type { Analysis } from "../input.js";

/** Analyses of the settled vessel beside what the best rival gives there. */
export function analysesOf({ ranking }: StudyResult): Analysis[] {
  const readings = (ranking[0]?.fit?.readings ?? []).filter((r) => r.of?.steady);
  return readings.map((r) => ({
    trial: r.trial,
    of: readingLabel(r),
    found: formatQuantity(r.measured[0], r.unit, 4),
    fitted: formatQuantity(r.fitted[0], r.unit, 4),
    deviations: r.residual[0] * r.weight[0],
  }));
}
