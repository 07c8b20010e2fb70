import { compile } from "../compile/compile.js";
import type { Fit } from "../fit/result.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { furtherTests } from "../plan/further.js";
import { sameCurves } from "../plan/same-curve.js";
import { sameCurveWords } from "../report/study/further-words.js";
import { furtherJson, sameCurveJson } from "./json/further.js";
import { partsLibrary } from "./library.js";
import { furtherText } from "./text/further.js";
import { blocks, wrap } from "./text/table.js";

/** What lies beyond a fit: the tests that would tell more, and the networks that no test at the outlet tells from this one. */
export function beyondFit(
  network: Network,
  trials: readonly Trial[],
  fit: Fit,
  options: { readonly free?: readonly string[]; readonly further?: true },
): { text: string; json: object } {
  const tests = furtherTests(network, trials, fit, asked(fit, options.further === true), options.free);
  const { plant } = compile(network, fit.values);
  const same = plant && options.further ? sameCurves(plant, partsLibrary()) : undefined;
  const words = same?.map((s) => wrap("  ", `${sameCurveWords(s)}; no test at the outlet tells it from this network.`));
  return {
    text: blocks(furtherText(tests), (words ?? []).join("\n")),
    json: { further: tests.map(furtherJson), ...(same ? { sameCurve: same.map(sameCurveJson) } : {}) },
  };
}

/** The parameters that the data tell badly; all where they were asked for. */
function asked(fit: Fit, all: boolean): string[] {
  const names = fit.parameters.map((p) => p.name);
  const about = fit.findings
    .filter((f) => f.code === "cannot-tell" || f.code === "wide-interval")
    .flatMap((f) => f.about);
  return all ? names : names.filter((name) => about.includes(name));
}
