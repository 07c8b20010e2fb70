import type { Figure } from "../../data/figure.js";
import type { ReadingMoments } from "../../data/moments.js";
import type { Fit } from "../../fit/result.js";
import type { StudyResult } from "../../study/result.js";
import { inUnit } from "../../units/unit.js";
import { chance } from "../digits.js";
import type { DataQuality, Estimate, ReportFinding } from "../input.js";
import { secondLook, traitsOf } from "./traits.js";

/** Data quality per reading: grade, why, figures, what each cleaning step did. */
export function dataQuality(result: StudyResult): DataQuality[] {
  return result.readings.flatMap(({ trial, moments }) =>
    moments.readings.map((r): DataQuality => {
      const reasons = moments.findings.filter((f) => f.at === r.at).map((f) => f.message);
      return {
        trial: trial.title,
        at: r.at,
        grade: moments.grade,
        because: reasons.length > 0 ? reasons : ["nothing in the log speaks against it"],
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

/** What the logs and the best fit tell, and what they do not. */
export function findingsOf(result: StudyResult): { findings: ReportFinding[]; notSupported: string[] } {
  const several = result.readings.length > 1;
  const fromData = fromTests(result);
  const best = result.ranking[0];
  const fromFit = (best?.fit?.findings ?? []).map(
    (f): ReportFinding => ({ message: f.message, evidence: evidenceWords(f.evidence), next: f.fix }),
  );
  const traits = best?.plant && best.fit && !best.fit.stopped ? traitsOf(best.plant, best.fit) : [];
  const fromTraits = traits.map(
    (t): ReportFinding => ({
      message: t.line,
      evidence: `fitted by '${best.rival.network.title}' to all trials, weight ${chance(best.standing.weight)}`,
      ...secondLook[t.is],
    }),
  );
  const notSupported = result.readings.flatMap(({ trial, moments }) =>
    moments.notSupported.map((words) => (several ? `${trial.title}: ${words}` : words)),
  );
  const together = (result.across?.findings ?? []).map(
    ({ at, message, evidence, couldBe, next }): ReportFinding => ({
      message: `trials together, ${at}: ${message}`,
      evidence,
      couldBe,
      next,
    }),
  );
  return {
    findings: [...fromTraits, ...together, ...fromFit, ...fromData],
    notSupported: [...notSupported, ...(result.across?.notSupported ?? []), ...unrepeated(best?.fit)],
  };
}

/** Without repeats nothing but the network itself says how far readings may be off. */
const unrepeated = (fit: Fit | undefined): string[] =>
  !fit || fit.lackOfFit
    ? []
    : ["lack of fit: no two readings are of one moment; samples or a test that are repeated would tell what is error"];

/** What the tests show, once for all tests that show it: the evidence says where. */
function fromTests({ readings }: StudyResult): ReportFinding[] {
  const found = readings.flatMap(({ trial, moments }) =>
    moments.findings.map((f) => ({ f, where: readings.length > 1 ? `${trial.title}, ${f.at}` : f.at })),
  );
  const same = new Map<string, typeof found>();
  for (const one of found) same.set(one.f.message, [...(same.get(one.f.message) ?? []), one]);
  return [...same.values()].map((all): ReportFinding => {
    const [{ f, where }] = all;
    const { couldBe, next } = f;
    return all.length === 1
      ? { message: `${where}: ${f.message}`, evidence: f.evidence, couldBe, next }
      : { message: f.message, evidence: all.map((x) => `${x.where}: ${x.f.evidence}`).join("; "), couldBe, next };
  });
}

const evidenceWords = (evidence: Readonly<Record<string, number | string>>): string =>
  Object.entries(evidence)
    .map(([name, value]) => `${name} ${typeof value === "number" ? Number(value.toPrecision(3)) : value}`)
    .join(", ");
