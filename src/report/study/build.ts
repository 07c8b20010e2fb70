import { explainsNothing } from "../../fit/explains-nothing.js";
import type { Ranked, StudyResult } from "../../study/result.js";
import type { Spread } from "../../study/spread-shares.js";
import { dimensions } from "../../units/dimension.js";
import { formatNumber } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { dutyTriggers } from "../duty-cautions.js";
import type {
  CautionTriggers,
  Change,
  Figure,
  Prediction,
  Provenance,
  ReportParameter,
  Rival,
  StudyReport,
} from "../input.js";
import { alongFigures } from "./along-figures.js";
import { analysesOf } from "./analyses.js";
import { answerOf } from "./answer.js";
import { reportAims, sweepFigures, sweepsSkipped } from "./asked.js";
import { dataQuality, findingsOf } from "./data.js";
import { decisionWords } from "./decision-words.js";
import { driverName, methodWords, spreadWords } from "./driver-words.js";
import { estimate, parameterEstimate, readingUnit } from "./estimate.js";
import { curveFigures, rivalFigures, shortName, vesselFigure } from "./figures.js";
import { furtherWords, sameCurveWords } from "./further-words.js";
import { identifiabilityOf } from "./identifiability.js";
import { inTimeFigures } from "./in-time-figures.js";
import { nestedWords } from "./nested-words.js";
import { regulatedLines } from "./regulated-words.js";
import { residenceFigures } from "./residence-figures.js";
import { studyStatesWords } from "./states-words.js";
import { testedFlows } from "./tested.js";
import { traitsOf } from "./traits.js";

/** The report of a study, and its drawings under the names that they are saved by. */
export function reportOf(
  result: StudyResult,
  provenance: Omit<Provenance, "seed">,
): { report: StudyReport; figures: readonly Figure[] } {
  const best = result.ranking[0];
  const vessel = best && vesselFigure(best, result.study.trials);
  const curves = curveFigures(result);
  const rivalCurves = rivalFigures(result);
  const residence = result.residence && best ? residenceFigures(result.residence, best.rival.network.units.time) : [];
  const identifiability = best?.fit ? identifiabilityOf(best) : { says: [], correlations: [], figures: [] };
  const { findings, notSupported } = findingsOf(result);
  const tested = testedFlows(result.study);
  const sweeps = sweepFigures(result);
  const inTime = best ? inTimeFigures(result.predictions.filter((p) => p.rival === best.rival)) : [];
  const along = best ? alongFigures(result.predictions.filter((p) => p.rival === best.rival)) : [];
  const report: StudyReport = {
    title: result.study.title,
    answer: answerOf(result),
    ...(vessel ? { vessel } : {}),
    curves,
    analyses: analysesOf(result),
    data: dataQuality(result),
    findings,
    notSupported,
    rivals: result.ranking.map((r, i) => rivalRow(r, i, result)),
    equals: equalsOf(result),
    nested: result.nested.map(nestedWords),
    rivalCurves,
    parameters: best?.fit ? parametersOf(best) : [],
    identifiability: { ...identifiability, says: [...identifiability.says, ...furtherWords(result.further)] },
    residence,
    predictions: result.predictions.filter((p) => p.rival === best?.rival).map(predictionRow),
    states: studyStatesWords(result),
    along,
    inTime,
    regulated: result.regulated.map(({ rival, duty, figures, lower }) => ({
      about: `${duty.title}${severalSurvive(result) ? ` (by '${rival.network.title}')` : ""}`,
      lines: duty.regulated ? regulatedLines(figures, duty.regulated, rival.network.units, lower) : [],
    })),
    changes: changeRows(result),
    decisions: decisionWords(result),
    sweeps,
    aims: reportAims(result),
    assumptions: assumptionsOf(result),
    cautions: cautionsOf(result, tested.extrapolated),
    tested: tested.lines,
    provenance: { ...provenance, seed: result.study.seed },
  };
  const figures = [
    ...(vessel ? [vessel] : []),
    ...curves,
    ...rivalCurves,
    ...inTime,
    ...identifiability.figures,
    ...residence,
    ...along,
    ...sweeps,
  ];
  return { report, figures };
}

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
    ...(result.ranking.length > 1 ? { short: shortName(r) } : {}),
    freeParameters: r.fit?.freeParameters ?? 0,
    aicc: r.fit ? r.standing.criterion : Number.NaN,
    weight: r.standing.weight,
    verdict: r.fit && !r.fit.converged ? `${verdict}; its fit did not converge` : verdict,
  };
}

function ratioWords(r: Ranked, lead: Ranked): string {
  const ratio = (r.fit?.residualSumOfSquares ?? 0) / (lead.fit?.residualSumOfSquares ?? 1);
  return ratio >= 10
    ? `${Number(ratio.toPrecision(2)).toLocaleString("en").replace(/,/g, " ")} times`
    : `${ratio.toPrecision(3)} times`;
}

function equalsOf(result: StudyResult): string[] {
  const [best, ...others] = result.ranking.filter((r) => r.survives);
  const byTests = others.map(
    (r) => `'${best.rival.network.title}' and '${r.rival.network.title}' cannot be told apart by these tests`,
  );
  const byAny = result.sameCurves.map(
    (s) => `${sameCurveWords(s)}: no test at the outlet tells it from the best network`,
  );
  return [...byTests, ...byAny];
}

function parametersOf(best: Ranked): ReportParameter[] {
  return (best.fit?.parameters ?? []).map((p): ReportParameter => {
    const about = best.rival.network.names.find((n) => n.name === (p.ofTrial?.name ?? p.name))?.about;
    return { name: p.name, estimate: parameterEstimate(p), atBound: p.atBound, ...(about ? { about } : {}) };
  });
}

function predictionRow(p: StudyResult["predictions"][number]): Prediction {
  const unit = readingUnit(p.duty, p.name, p.unit);
  const b = p.bounds;
  return {
    duty: p.duty.title,
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

const severalSurvive = (result: StudyResult): boolean => result.ranking.filter((r) => r.survives).length > 1;

function changeRows(result: StudyResult): Change[] {
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

function assumptionsOf(result: StudyResult): string[] {
  const skipped = result.changes.flatMap((c) =>
    c.skipped ? [`${c.change.title} was left out for '${c.rival.network.title}': ${c.skipped}`] : [],
  );
  const lost = result.ranking.filter((r) => !r.survives).length;
  return [
    "Flow and volume were steady during each test, and the tracer followed the liquid.",
    "Intervals carry what the fit leaves open and every ± that the files declare; constants of the vessel are drawn beside the fitted values, which errs on the wide side.",
    `Predictions rest on ${result.draws} draws${lost > 0 ? "; only networks with a weight above 5 % were taken further" : ""}.`,
    "A change keeps every fitted value but those that it sets itself.",
    ...skipped,
    ...sweepsSkipped(result),
  ];
}

function cautionsOf(result: StudyResult, extrapolated: readonly string[]): CautionTriggers {
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
    extrapolated,
  };
}
