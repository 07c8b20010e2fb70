import { shapeCodes } from "../../data/shape-rules.js";
import { unlikeText } from "../../fit/repeats.js";
import type { StudyResult } from "../../study/result.js";
import { chance } from "../digits.js";
import type { ReportFinding, StudyReport } from "../input.js";
import { secondLook, traitsOf } from "./traits.js";

/** What bears on the worth of the tests, once for all tests of which it is true. */
export const dataRemarks = (result: StudyResult): ReportFinding[] => fromTests(result, (code) => !shapeCodes.has(code));

/** What the best fit and the shapes of the curves tell of the vessel. */
export function findingsOf(result: StudyResult): ReportFinding[] {
  const fromData = fromTests(result, (code) => shapeCodes.has(code));
  const best = result.ranking[0];
  const fromFit = (best?.fit?.findings ?? []).map(
    (f): ReportFinding => ({ message: f.message, evidence: `the fit of '${best?.rival.network.title}'`, next: f.fix }),
  );
  const traits = best?.plant && best.fit && !best.fit.stopped ? traitsOf(best.plant, best.fit) : [];
  const fromTraits = traits.map(
    (t): ReportFinding => ({
      message: t.line,
      evidence: `fitted by '${best.rival.network.title}' to all trials, weight ${chance(best.standing.weight)}`,
      ...secondLook[t.is],
    }),
  );
  const together = (result.across?.findings ?? []).map(
    ({ at, message, evidence, couldBe, next }): ReportFinding => ({
      message: `trials together, ${at}: ${message}`,
      evidence,
      couldBe,
      next,
    }),
  );
  return [...fromTraits, ...together, ...fromFit, ...fromData];
}

/** What was looked for in the curves and is not there: each once, with what every test showed instead. */
export function notSupportedOf({ readings, across, ranking }: StudyResult): StudyReport["notSupported"] {
  const byWhat = new Map<string, string[]>();
  const add = (words: string, of: string): void => {
    const [, what, says] = /^([^:]*): (.*)$/s.exec(words) ?? ["", words, ""];
    byWhat.set(what, [...(byWhat.get(what) ?? []), ...(says === "" ? [] : [of + says])]);
  };
  for (const { trial, moments } of readings) {
    // Where a test has one reading, nobody asks which.
    const one = (words: string): string =>
      moments.readings.length < 2 ? words.replace(/ \(at '[^']*'\)$/, "") : words;
    for (const words of moments.notSupported) add(one(words), readings.length > 1 ? `${trial.title}: ` : "");
  }
  for (const words of across?.notSupported ?? []) add(words, "");
  const fit = ranking[0]?.fit;
  // Without repeats nothing but the network itself says how far readings may be off.
  if (fit && !fit.lackOfFit)
    add(
      fit.unlike
        ? `lack of fit: ${unlikeText(fit.unlike)}`
        : "lack of fit: no two readings are of one moment; samples or a test that are repeated would tell what is error",
      "",
    );
  return [...byWhat].map(([what, says]) => ({ what, says }));
}

/** What the tests show, once for all tests that show it: the evidence says where. */
function fromTests({ readings }: StudyResult, wanted: (code: string) => boolean): ReportFinding[] {
  const found = readings.flatMap(({ trial, moments }) =>
    moments.findings
      .filter((f) => wanted(f.code))
      .map((f) => ({ f, where: readings.length > 1 ? `${trial.title}, ${f.at}` : f.at })),
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
