import type { StudyResult } from "../../study/result.js";
import { inUnit } from "../../units/unit.js";
import type { Change } from "../input.js";
import { estimate, readingUnit } from "./estimate.js";

/** Is more than one network taken further? Then what is said of one names it. */
export const severalSurvive = (result: StudyResult): boolean => result.ranking.filter((r) => r.survives).length > 1;

/** What each change would bring, figure by figure. */
export function changeRows(result: StudyResult): Change[] {
  return result.changes.flatMap((c) => {
    const on = severalSurvive(result) ? ` (by '${c.rival.network.title}')` : "";
    return c.figures.map((f): Change => {
      const unit = readingUnit(f.duty, f.name, f.unit);
      return {
        name: `${c.change.title}${on}`,
        quantity: `${f.name}, ${f.duty.title}`,
        estimate: estimate(f.value, f.interval95, unit),
        today: inUnit(f.before, unit),
        probabilityBetter: f.probabilityBetter ?? Number.NaN,
      };
    });
  });
}
