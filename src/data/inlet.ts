import type { Injection } from "../model/trial.js";
import { roughness } from "./noise.js";
import { momentsOf, pulseResponse, type RawMoments } from "./response.js";
import type { Rule } from "./weights.js";

/** Moments of a measured inlet about the injection's own time; area in concentration times s. */
export function inletMoments(injection: Injection, rule: Rule): RawMoments | undefined {
  if (injection.form.is !== "signal") return undefined;
  const { time, value } = injection.form.table;
  const since = time.map((t) => t - injection.start);
  const sd = new Float64Array(time.length).fill(roughness(since, value));
  return momentsOf(pulseResponse({ time: since, value, before: 0, noise: { sd } }, rule));
}
