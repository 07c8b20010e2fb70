import type { Ranked, StudyResult } from "../../study/result.js";
import type { Provenance, ReportParameter, StudyReport } from "../input.js";
import { alongFigures } from "./along-figures.js";
import { analysesOf } from "./analyses.js";
import { answerOf } from "./answer.js";
import { reportAims, sweepFigures, sweepSays } from "./asked.js";
import { changeRows, severalSurvive } from "./change-rows.js";
import { dataQuality } from "./data.js";
import { decisionWords } from "./decision-words.js";
import { studyDiversionWords } from "./diversion-words.js";
import { parameterEstimate } from "./estimate.js";
import { curveFigures, rivalFigures } from "./figures.js";
import { dataRemarks, findingsOf, notSupportedOf } from "./findings.js";
import { furtherOf } from "./further-words.js";
import { assumptionsOf, cautionsOf } from "./grounds.js";
import { identifiabilityOf } from "./identifiability.js";
import { inTimeFigures } from "./in-time-figures.js";
import { nestedWords } from "./nested-words.js";
import { predictionRows } from "./prediction-rows.js";
import { regulatedLines } from "./regulated-words.js";
import { residenceFigures } from "./residence-figures.js";
import { equalsOf, rivalRows } from "./rival-rows.js";
import { studyStatesWords } from "./states-words.js";
import { testedFlows } from "./tested.js";
import { vesselFigure } from "./vessel-figure.js";

/** The report of a study. */
export function reportOf(result: StudyResult, provenance: Omit<Provenance, "seed">): StudyReport {
  const best = result.ranking[0];
  const vessel = best && vesselFigure(best, result.study.trials);
  const identifiability = best?.fit ? identifiabilityOf(best) : { says: [], correlations: [], figures: [] };
  const further = furtherOf(result.further);
  const tested = testedFlows(result.study);
  const predicted = best ? result.predictions.filter((p) => p.rival === best.rival) : [];
  return {
    title: result.study.title,
    answer: answerOf(result),
    ...(vessel ? { vessel } : {}),
    curves: curveFigures(result),
    analyses: analysesOf(result),
    data: dataQuality(result),
    dataRemarks: dataRemarks(result),
    findings: findingsOf(result),
    notSupported: notSupportedOf(result),
    rivals: rivalRows(result),
    equals: equalsOf(result),
    nested: result.nested.map(nestedWords),
    rivalCurves: rivalFigures(result),
    parameters: best?.fit ? parametersOf(best) : [],
    identifiability: { ...identifiability, ...(further ? { further } : {}) },
    residence: result.residence && best ? residenceFigures(result.residence, best.rival.network.units.time) : [],
    predictions: predictionRows(result),
    states: studyStatesWords(result),
    diversion: studyDiversionWords(result),
    along: alongFigures(predicted),
    inTime: inTimeFigures(predicted),
    regulated: result.regulated.map(({ rival, duty, figures, lower }) => ({
      about: `${duty.title}${severalSurvive(result) ? ` (by '${rival.network.title}')` : ""}`,
      lines: duty.regulated ? regulatedLines(figures, duty.regulated, rival.network.units, lower) : [],
    })),
    changes: changeRows(result),
    decisions: decisionWords(result),
    sweeps: sweepFigures(result),
    sweepSays: sweepSays(result),
    aims: reportAims(result),
    assumptions: assumptionsOf(result),
    cautions: cautionsOf(result, tested.extrapolated),
    tested: tested.lines,
    provenance: { ...provenance, seed: result.study.seed },
  };
}

function parametersOf(best: Ranked): ReportParameter[] {
  return (best.fit?.parameters ?? []).map((p): ReportParameter => {
    const about = best.rival.network.names.find((n) => n.name === (p.ofTrial?.name ?? p.name))?.about;
    return { name: p.name, estimate: parameterEstimate(p), atBound: p.atBound, ...(about ? { about } : {}) };
  });
}
