import { type FitOptions, fit } from "../../src/fit/fit.js";
import { networkModel } from "../../src/fit/network-model.js";
import type { Fit } from "../../src/fit/result.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { random } from "../../src/numerics/random.js";
import { trialOf } from "./load.js";

/** A synthetic trial: keys of the document in YAML flow style, and what the instrument adds to the truth. */
export interface Synthetic {
  readonly title?: string;
  readonly injection: string;
  readonly flows?: string;
  /** Further keys of the reading, each on a line of its own. */
  readonly reading?: readonly string[];
  readonly at: string;
  /** min. */
  readonly times: readonly number[];
  /** g/L added to the truth at point i. */
  readonly noise?: (i: number, truth: number) => number;
}

const headings = "t_min,c_g_per_L\n";

/** The text of a trial with readings in g/L over minutes. */
function textOf(s: Synthetic): string {
  return `trial: ${s.title ?? "Synthetic"}
format: 1
${s.flows ? `flows: ${s.flows}\n` : ""}injection: ${s.injection}
readings:
  - at: ${s.at}
    file: data.csv
    time: {column: t_min, unit: min}
    value: {column: c_g_per_L, unit: g/L}
${(s.reading ?? []).map((line) => `    ${line}\n`).join("")}`;
}

/** A trial whose data are what `network` would give at `truth` (SI, by name), plus noise. */
export function synthetic(network: Network, truth: Readonly<Record<string, number>>, s: Synthetic): Trial {
  const table = (value: (i: number) => number): string =>
    headings + s.times.map((t, i) => `${t},${value(i).toPrecision(17)}\n`).join("");
  const blank = trialOf(textOf(s), () => table((i) => 1e-3 * (i + 1)));
  const time = blank.readings[0].series?.time ?? new Float64Array(0);
  const exact = networkModel(network).respond(blank, truth, [{ time }]);
  if (!exact) throw new Error("the truth makes no vessel");
  return trialOf(textOf(s), () => table((i) => exact[0][i] + (s.noise?.(i, exact[0][i]) ?? 0)));
}

export const every = (step: number, count: number): number[] =>
  Array.from({ length: count }, (_, i) => (i + 0.5) * step);

/** Normal noise, seeded. */
export function noisy(seed: number, sd: number): () => number {
  const draw = random(seed);
  return () => sd * draw.normal();
}

/** A fit that must be one. */
export function fitted(network: Network, trials: readonly Trial[], options: FitOptions = {}): Fit {
  const { fit: found, problems } = fit(network, trials, options);
  if (!found) throw new Error(problems.map((p) => p.message).join("\n"));
  return found;
}

export const parameterOf = (found: Fit, name: string): Fit["parameters"][number] => {
  const p = found.parameters.find((q) => q.name === name);
  if (!p) throw new Error(`no parameter ${name}`);
  return p;
};
