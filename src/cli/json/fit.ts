import type { Bootstrap } from "../../fit/bootstrap.js";
import { patternsOf } from "../../fit/patterns.js";
import type { Estimate, Fit, FittedParameter, FittedProfile, LackOfFit, Nuisance } from "../../fit/result.js";
import { differenceInUnit, type Unit } from "../../units/unit.js";
import { finite, quantity, series, unitName } from "./quantity.js";

/** What a fit found, every number in the unit that people see. */
export function fitJson(fit: Fit, time: Unit, refits?: Bootstrap): Record<string, unknown> {
  return {
    parameters: Object.fromEntries(fit.parameters.map((p) => [p.name, parameterJson(p)])),
    nuisance: Object.fromEntries(Object.entries(fit.nuisance).map(([key, terms]) => [key, nuisanceJson(terms)])),
    residualSumOfSquares: finite(fit.residualSumOfSquares),
    residualUnit: fit.residualUnit ? unitName(fit.residualUnit) : "standard deviation",
    observations: fit.observations,
    freeParameters: fit.freeParameters,
    aicc: finite(fit.aicc),
    ...(fit.aiccCorrelated === undefined ? {} : { aiccCorrelated: finite(fit.aiccCorrelated) }),
    bic: finite(fit.bic),
    correlation: { names: fit.correlation.names, rows: fit.correlation.rows.map((row) => row.map(finite)) },
    converged: fit.converged,
    ...(fit.stopped ? { stopped: fit.stopped } : {}),
    evaluations: fit.evaluations,
    optima: fit.optima.map((o) => ({
      parameters: Object.fromEntries(fit.parameters.map((p) => [p.name, quantity(o.values[p.name], p.unit)])),
      residualSumOfSquares: finite(o.residualSumOfSquares),
      starts: o.starts,
    })),
    readings: fit.readings.map((r) => ({
      trial: r.trial,
      at: r.at,
      ...(r.of ? { of: r.of.name, steady: r.of.steady } : {}),
      key: r.key,
      time: series(r.time, time),
      measured: series(r.measured, r.unit),
      fitted: series(r.fitted, r.unit),
      residual: { unit: unitName(r.unit), values: Array.from(r.residual, (v) => finite(differenceInUnit(v, r.unit))) },
    })),
    held: fit.held,
    patterns: patternsOf(fit.readings),
    lackOfFit: fit.lackOfFit ? lackOfFitJson(fit.lackOfFit) : null,
    ...(fit.unlike ? { unlikeTests: fit.unlike } : {}),
    ...(refits ? { bootstrap: bootstrapJson(refits) } : {}),
    ...(fit.profiles ? { profiles: Object.fromEntries(fit.profiles.map((p) => [p.name, profileJson(p)])) } : {}),
    findings: fit.findings,
  };
}

/** Sums in squares of weighted residuals: of `residualUnit`, or of standard deviations. */
function lackOfFitJson({ readings, moments, pure, lack, f, p, correlation }: LackOfFit): object {
  return { readings, moments, pure, lack, f: finite(f), p, correlation };
}

export function parameterJson(p: FittedParameter): object {
  const spread = (si: number): number | null => finite(differenceInUnit(si, p.unit));
  const ends = p.interval95?.map((v) => quantity(v, p.unit).value);
  return {
    ...(p.ofTrial ? { parameter: p.ofTrial.name, trial: p.ofTrial.trial } : {}),
    ...quantity(p.value, p.unit),
    standardError: p.standardError === undefined ? null : spread(p.standardError),
    ...(p.standardErrorCorrelated === undefined ? {} : { standardErrorCorrelated: spread(p.standardErrorCorrelated) }),
    interval95: ends ?? null,
    ...(p.standardError === undefined || ends === undefined ? { why: "not-estimable" } : {}),
    atBound: p.atBound ?? null,
  };
}

function bootstrapJson({ parameters, ...how }: Bootstrap): object {
  return {
    ...how,
    parameters: Object.fromEntries(
      parameters.map(({ name, unit, standardError, interval95, median }) => [
        name,
        {
          ...quantity(median, unit),
          standardError: finite(differenceInUnit(standardError, unit)),
          interval95: interval95.every(Number.isFinite) ? interval95.map((v) => quantity(v, unit).value) : null,
        },
      ]),
    ),
  };
}

function profileJson({ unit, value, deviation, interval95, ends }: FittedProfile): object {
  return {
    value: series(Float64Array.from(value), unit),
    deviation: { unit: "1", values: deviation.map(finite) },
    interval95: interval95.map((v) => (v === undefined ? null : quantity(v, unit).value)),
    ends,
  };
}

const nuisanceJson = ({ offset, drift, scale, correlation }: Nuisance): object => ({
  ...(offset ? { offset: estimateJson(offset) } : {}),
  ...(drift ? { drift: estimateJson(drift) } : {}),
  ...(scale ? { scale: estimateJson(scale) } : {}),
  ...(correlation ? { correlation: quantity(correlation.value, correlation.unit) } : {}),
});

const estimateJson = ({ value, unit, standardError }: Estimate): object => ({
  ...quantity(value, unit),
  standardError: standardError === undefined ? null : finite(differenceInUnit(standardError, unit)),
  ...(standardError === undefined ? { why: "not-estimable" } : {}),
});
