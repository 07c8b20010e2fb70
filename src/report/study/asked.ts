import { columnWidth } from "../../draw/picture.js";
import type { Asked } from "../../model/study.js";
import type { Answered, StudyResult } from "../../study/result.js";
import { inBrackets } from "../digits.js";
import type { Figure, ReportAim } from "../input.js";
import { aimText, aimWords } from "./aim-words.js";
import { sweepJumpWords } from "./jump-words.js";
import { sweepStatesWords } from "./states-words.js";
import { plotSweepApart } from "./sweep-figure.js";
import { beyondAim, beyondRange, beyondWords } from "./tested.js";

/** "(with Second tank; by 'R-12')": what an answer is about beside the duty, where it is not the vessel as it is. */
function about(result: StudyResult, { asked, rival }: Answered<Asked, unknown>): string {
  const several = result.ranking.filter((r) => r.survives).length > 1;
  const parts = [
    ...(asked.change ? [`with '${asked.change.title}'`] : []),
    ...(several ? [`by '${rival.network.title}'`] : []),
  ];
  return parts.length === 0 ? "" : ` (${parts.join("; ")})`;
}

/** A figure for every sweep of every surviving rival. */
export function sweepFigures(result: StudyResult): Figure[] {
  return result.sweeps.flatMap((answer, k): Figure[] => {
    const { found, asked } = answer;
    if (!found?.points.some((p) => p.figures)) return [];
    const names = asked.over.map((r) => r.name).join(" and ");
    const left = found.points.filter((p) => p.cannot !== undefined);
    const gaps =
      left.length > 0 ? ` ${left.length} of ${found.points.length} points are left out: ${left[0].cannot}.` : "";
    const band = found.axes.length === 1 && found.draws > 0 ? "; the band holds 95 % of what is possible" : "";
    const ownFlow = asked.over.some((r) => r.name.endsWith(".flow"));
    const beyond = found.axes
      .map((a) => beyondRange(result.study, a.input.name, [...a.values]))
      .filter((says) => says !== "")
      .map((says) => ` Partly ${says.charAt(0).toLowerCase()}${says.slice(1)}`)
      .join("");
    const apart = plotSweepApart(found, { untitled: true, width: columnWidth, height: 170 });
    return apart.map(({ of, made }, i) => ({
      name: apart.length === 1 ? `sweep-${k + 1}` : `sweep-${k + 1}-${i + 1}`,
      ...made,
      caption: `${asked.duty.title}: ${inBrackets(of)} over ${names}${about(result, answer)}${ownFlow ? "" : beyondWords(result.study, asked.duty)}; dots are what was computed${band}.${beyond}${i === 0 ? gaps : ""}`,
    }));
  });
}

/** Where a sweep jumps or passes further steady states, in sentences. */
export const sweepSays = (result: StudyResult): string[] =>
  result.sweeps.flatMap((answer) => {
    const { found, asked } = answer;
    const said = found ? [...sweepJumpWords(found), ...sweepStatesWords(found)] : [];
    const over = asked.over.map((r) => r.name).join(" and ");
    return said.length > 0 ? [`${asked.duty.title} over ${over}${about(result, answer)}: ${said.join(" ")}`] : [];
  });

/** Aims with their answers, in the order of the study, and sweeps and aims that could not be asked. */
export function reportAims(result: StudyResult): ReportAim[] {
  return result.aims.map((answer): ReportAim => {
    const { found, asked, skipped } = answer;
    return {
      question: `${aimText(asked.aim.text)} by ${asked.by.name}, ${asked.duty.title}${about(result, answer)}`,
      says: found
        ? [...aimWords(found), beyondAim(result.study, asked, found)].filter((s) => s !== "")
        : [`Left out: ${skipped}.`],
    };
  });
}

/** Sweeps that could not be made. */
export const sweepsSkipped = (result: StudyResult): string[] =>
  result.sweeps.flatMap(({ skipped, asked, rival }) =>
    skipped === undefined
      ? []
      : [
          `The sweep over ${asked.over.map((r) => r.name).join(" and ")} was left out for '${rival.network.title}': ${skipped}`,
        ],
  );
