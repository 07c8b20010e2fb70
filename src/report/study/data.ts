import type { Figure } from "../../data/figure.js";
import type { ReadingMoments } from "../../data/moments.js";
import { shapeCodes } from "../../data/shape-rules.js";
import type { StudyResult } from "../../study/result.js";
import { inUnit } from "../../units/unit.js";
import type { DataQuality, Estimate } from "../input.js";

/** Data quality per reading: grade, figures, what each cleaning step did. */
export function dataQuality(result: StudyResult): DataQuality[] {
  return result.readings.flatMap(({ trial, moments }) =>
    moments.readings.map((r): DataQuality => {
      return {
        trial: trial.title,
        at: r.at,
        grade: moments.grade,
        clean: !moments.findings.some((f) => f.at === r.at && !shapeCodes.has(f.code)),
        figures: figuresOf(r),
        steps: r.steps.map((s) => ({
          name: s.name,
          area: inUnit(s.area, r.area.unit),
          mean: inUnit(s.mean ?? Number.NaN, r.mean.unit),
          variance: inUnit(s.variance ?? Number.NaN, r.variance.unit),
          t10: inUnit(s.t10 ?? Number.NaN, r.t10.unit),
        })),
        stepUnits: { area: r.area.unit.name, time: r.timeUnit.name },
      };
    }),
  );
}

function figuresOf(r: ReadingMoments): DataQuality["figures"] {
  const named: [string, Figure | undefined][] = [
    ["recovery", r.recovery],
    ["mean", r.mean],
    ["t10", r.t10],
    ["t50", r.t50],
    ["t90", r.t90],
    ["mean over V/Q", r.indices["mean-over-tau"]],
    ["tanks in series", r.indices.tanks],
  ];
  return named.flatMap(([name, f]) => (f ? [{ name, estimate: figureEstimate(f, name === "recovery") }] : []));
}

/** A figure with its standard error as an interval of twice that on either side. */
function figureEstimate(f: Figure, percent: boolean): Estimate {
  if (f.value === undefined) return { value: undefined, unit: f.unit.name };
  const scale = percent ? 100 : 1;
  const value = scale * inUnit(f.value, f.unit);
  const unit = percent ? "%" : f.unit.name;
  if (f.standardError === undefined) return { value, unit };
  const half = (1.96 * f.standardError * scale) / f.unit.factor;
  return { value, unit, low: value - half, high: value + half };
}
