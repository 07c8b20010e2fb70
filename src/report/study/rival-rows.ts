import { explainsNothing } from "../../fit/explains-nothing.js";
import type { Ranked, StudyResult } from "../../study/result.js";
import type { Rival } from "../input.js";
import { letterOf } from "./figures.js";
import { sameCurveWords } from "./further-words.js";
import { isUntested } from "./untested.js";

/** The networks that were tried, best first; none where no trial compares them. */
export const rivalRows = (result: StudyResult): Rival[] =>
  isUntested(result) ? [] : result.ranking.map((r, i) => rivalRow(r, i, result));

function rivalRow(r: Ranked, place: number, result: StudyResult): Rival {
  const lead = result.ranking[0];
  const verdict = !r.fit
    ? `could not be fitted: ${r.problems[0]?.message ?? "no fit was found"}`
    : explainsNothing(r.fit)
      ? "explains the tests no better than a flat line"
      : place === 0
        ? "explains the tests best"
        : r.survives
          ? "fits about as well: not ruled out"
          : `leaves ${ratioWords(r, lead)} as much unexplained as the best`;
  return {
    network: r.rival.network.title,
    ...(result.ranking.length > 1 ? { letter: letterOf(place), file: r.rival.path.replace(/^.*[\\/]/u, "") } : {}),
    freeParameters: r.fit?.freeParameters ?? 0,
    aicc: r.fit ? r.standing.criterion : Number.NaN,
    weight: r.standing.weight,
    verdict: r.fit && !r.fit.converged ? `${verdict}; its fit did not converge` : verdict,
  };
}

/** How much more is left unexplained: of readings in several units the geometric mean, each by its own scatter. */
function ratioWords(r: Ranked, lead: Ranked): string {
  const ratio = Math.exp(deviancePerReading(r) - deviancePerReading(lead));
  return ratio >= 10
    ? `${Number(ratio.toPrecision(2)).toLocaleString("en").replace(/,/g, " ")} times`
    : `${ratio.toPrecision(3)} times`;
}

/** Logarithm of the scatter that a fit leaves, but for what is the same in all fits to the same readings: AICc without its price. */
function deviancePerReading({ fit }: Ranked): number {
  if (!fit) return Number.NaN;
  const { aicc, observations: n, freeParameters } = fit;
  const k = freeParameters + 1;
  return (aicc - 2 * k - (2 * k * (k + 1)) / (n - k - 1)) / n;
}

/** What these tests, or any test at the outlet, cannot tell apart. */
export function equalsOf(result: StudyResult): string[] {
  const [best, ...others] = result.ranking.filter((r) => r.survives);
  const byTests = isUntested(result)
    ? []
    : others.map(
        (r) => `'${best.rival.network.title}' and '${r.rival.network.title}' cannot be told apart by these tests`,
      );
  const byAny = result.sameCurves.map(
    (s) => `${sameCurveWords(s)}: no test at the outlet tells it from the best network`,
  );
  return [...byTests, ...byAny];
}
