import { explainsNothing } from "../../fit/explains-nothing.js";
import type { Network } from "../../model/network.js";
import type { Asked } from "../../model/study.js";
import type { DiversionWindow } from "../../study/diversion.js";
import type {
  Answered,
  Bounds,
  ChangedFigure,
  ChangeOutcome,
  Decision,
  Prediction,
  Ranked,
  StudyResult,
} from "../../study/result.js";
import type { Spread } from "../../study/spread-shares.js";
import { dimensions } from "../../units/dimension.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { acrossJson } from "./across.js";
import { fitJson } from "./fit.js";
import { furtherJson, sameCurveJson } from "./further.js";
import { momentsResultJson } from "./moments.js";
import { finite, pure, quantity } from "./quantity.js";
import { regulatedJson } from "./regulated.js";
import { aimJson, otherStatesJson, sweepJson } from "./sweep.js";

/** What a study found, without the path of its report. */
export function studyJson(result: StudyResult): Record<string, unknown> {
  return {
    study: result.study.title,
    seed: result.study.seed,
    draws: result.draws,
    converged: result.converged,
    ...(result.stopped ? { stopped: result.stopped } : {}),
    ranking: result.ranking.map(rankedJson),
    readings: result.readings.map(({ trial, moments }) => ({ trial: trial.title, ...momentsResultJson(moments) })),
    ...acrossOfStudy(result),
    predictions: result.predictions.map(predictionJson),
    changes: result.changes.flatMap(changeJson),
    decisions: result.decisions.map((d) => decisionJson(result, d)),
    telling: result.telling.map(({ rivals, says, apart }) => ({
      networks: rivals.map((r) => r.path),
      says,
      apart: finite(apart),
    })),
    regulated: result.regulated.map(({ rival, duty, figures, lower }) => ({
      network: rival.path,
      duty: duty.title,
      ...regulatedJson(figures, rival.network.units),
      t10Lower95: lower === undefined ? null : quantity(lower, rival.network.units.time),
    })),
    sweeps: result.sweeps.map((a) => ({ ...askedJson(a), ...(a.found ? sweepJson(a.found) : { skipped: a.skipped }) })),
    aims: result.aims.map((a) => ({ ...askedJson(a), ...(a.found ? aimJson(a.found) : { skipped: a.skipped }) })),
    nested: result.nested.map(({ freedom, ...n }) => ({ ...n, f: finite(n.f), freedom: [...freedom] })),
    sameCurve: result.sameCurves.map(sameCurveJson),
    further: result.further.map(furtherJson),
    findings: [
      ...result.readings.flatMap(({ trial, moments }) => moments.findings.map((f) => ({ trial: trial.title, ...f }))),
      ...(result.across?.findings ?? []),
      ...result.ranking.flatMap(({ rival, fit }) => (fit?.findings ?? []).map((f) => ({ network: rival.path, ...f }))),
    ],
  };
}

function acrossOfStudy({ across, study }: StudyResult): object {
  const units = study.rivals[0]?.network.units;
  return across && units ? { across: acrossJson(across, units.unitFor(dimensions.volume)) } : {};
}

function rankedJson({ rival, fit, standing, survives, problems }: Ranked): object {
  const head = { network: rival.path, title: rival.network.title };
  if (!fit) {
    const why = problems.map((p) => p.message);
    // Without trials a network counts as it is written.
    const weight = survives ? standing.weight : 0;
    return { ...head, aicc: null, why: "not-estimable", weight, survives, fit: null, because: why };
  }
  return {
    ...head,
    aicc: finite(fit.aicc),
    ...(fit.aiccCorrelated === undefined ? {} : { aiccCorrelated: finite(fit.aiccCorrelated) }),
    difference: finite(standing.difference),
    weight: standing.weight,
    survives,
    ...(explainsNothing(fit) ? { because: ["explains no more than a flat line"] } : {}),
    fit: fitJson(fit, rival.network.units.time),
  };
}

function predictionJson({
  duty,
  rival,
  name,
  value,
  unit,
  interval95,
  oneSided95,
  bounds,
  spread,
  states,
  diversion,
}: Prediction): object {
  return {
    duty: duty.title,
    network: rival.path,
    name,
    ...quantity(value, unit),
    interval95: intervalJson(interval95, unit),
    oneSided95: oneSided95 ? { bound: oneSided95.bound, ...quantity(oneSided95.value, unit) } : null,
    bounds: bounds ? boundsJson(bounds, unit) : null,
    ...spreadJson(spread, unit),
    ...(states ? { otherStates: otherStatesJson(states, []) } : {}),
    ...(diversion ? { diversion: diversionJson(diversion, unit, rival.network) } : {}),
  };
}

/** When to turn away what leaves. */
const diversionJson = ({ window, draws }: DiversionWindow, time: Unit, { units }: Network): object => ({
  draws,
  touched: window?.touched ?? 0,
  stillAtEnd: window?.stillAtEnd ?? 0,
  from: quantity(window?.from, time),
  to: quantity(window?.to, time),
  volume: quantity(window?.volume ?? 0, units.unitFor(dimensions.volume)),
});

/** What holds the variance: shares are fractions. */
function spreadJson(spread: Spread | undefined, unit: Unit): object {
  if (!spread) return { drivers: [] };
  const { method, explained, sd, linearSd, drivers } = spread;
  return {
    drivers: drivers.map(({ kind, name, vessel, duty, share, total, linear }) => ({
      name,
      kind,
      of: [...vessel, ...duty],
      share,
      ...(total === undefined ? {} : { total }),
      linear: linear === undefined ? null : finite(linear),
    })),
    spread: {
      method,
      explained: explained === undefined ? null : finite(explained),
      standardDeviation: finite(sd / unit.factor),
      linear: linearSd === undefined ? null : finite(linearSd / unit.factor),
    },
  };
}

const boundsJson = ({ segregated, maximumMixedness, position, says, apply }: Bounds, unit: Unit): object => ({
  segregated: quantity(segregated, unit),
  maximumMixedness: quantity(maximumMixedness, unit),
  position: position ?? null,
  apply,
  says,
});

function changeJson({ change, rival, skipped, figures }: ChangeOutcome): object[] {
  const head = { change: change.title, file: change.path, network: rival.path };
  if (skipped !== undefined) return [{ ...head, skipped }];
  return figures.map((f) => ({ ...head, ...changedJson(f) }));
}

const changedJson = ({
  duty,
  name,
  unit,
  before,
  value,
  interval95,
  difference95,
  probabilityBetter,
}: ChangedFigure): object => ({
  duty: duty.title,
  name,
  before: quantity(before, unit),
  ...quantity(value, unit),
  interval95: intervalJson(interval95, unit),
  difference95: difference95 ? difference95.map((v) => pure(v / unit.factor).value) : null,
  probabilityBetter: probabilityBetter ?? null,
});

const decisionJson = ({ study }: StudyResult, { duty, name, choices, flips, averaged }: Decision): object => ({
  duty: study.duties[duty].title,
  name,
  flips,
  choices: choices.map(({ rival, weight, change, probabilityBetter }) => ({
    network: rival.path,
    weight,
    change: change?.title ?? null,
    probabilityBetter: probabilityBetter ?? null,
  })),
  averaged: averaged.map(({ change, probabilityBetter }) => ({ change: change.title, probabilityBetter })),
});

/** What a sweep or an aim is asked of. */
const askedJson = ({ asked, rival }: Answered<Asked, unknown>): object => ({
  network: rival.path,
  duty: asked.duty.title,
  change: asked.change?.title ?? null,
});

const intervalJson = (interval: readonly [number, number] | undefined, unit: Unit): (number | null)[] | null =>
  interval ? interval.map((v) => finite(inUnit(v, unit))) : null;
