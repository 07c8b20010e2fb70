import type { StudyResult } from "../../study/result.js";
import { dimensions } from "../../units/dimension.js";
import { dutyTriggers } from "../duty-cautions.js";
import type { CautionTriggers } from "../input.js";
import { sweepsSkipped } from "./asked.js";
import { traitsOf } from "./traits.js";
import { isUntested } from "./untested.js";

/** What is taken for granted, and what was left out. */
export function assumptionsOf(result: StudyResult): string[] {
  const skipped = result.changes.flatMap((c) =>
    c.skipped ? [`${c.change.title} was left out for '${c.rival.network.title}': ${c.skipped}`] : [],
  );
  const lost = result.ranking.filter((r) => !r.survives).length;
  return [
    ...(isUntested(result)
      ? [
          "Nothing was tested or fitted: the vessel is taken to be as the network says, and intervals carry every ± that the files declare.",
        ]
      : [
          "Flow and volume were steady during each test, and the tracer followed the liquid.",
          "Intervals carry what the fit leaves open and every ± that the files declare; constants of the vessel are drawn beside the fitted values, which errs on the wide side.",
        ]),
    `Predictions rest on ${result.draws} draws${lost > 0 ? "; only networks with a weight above 5 % were taken further" : ""}.`,
    `A change keeps every ${isUntested(result) ? "" : "fitted "}value but those that it sets itself.`,
    ...skipped,
    ...sweepsSkipped(result),
  ];
}

/** Which cautions of the trade the study calls for. */
export function cautionsOf(result: StudyResult, extrapolated: readonly string[]): CautionTriggers {
  const best = result.ranking[0];
  const traits = best?.plant && best.fit ? traitsOf(best.plant, best.fit) : [];
  const reacting = result.study.duties.some((d) => (d.chemistry?.reactions.length ?? 0) > 0);
  const own = dutyTriggers(result.study.duties);
  const radio = result.study.trials.some((t) =>
    t.injections.some(
      (i) => i.form.is === "pulse" && i.form.amount.dimension.every((x, k) => x === dimensions.frequency[k]),
    ),
  );
  return {
    ...own,
    ...(own.disinfection ? { drinkingWater: true } : {}),
    toxic: reacting && traits.some((t) => t.is === "bypass" || t.is === "dead"),
    radiotracer: radio,
    untested: isUntested(result),
    extrapolated,
  };
}
