import type { Network } from "../model/network.js";
import type { Value } from "../model/value.js";
import { inBasis } from "../units/basis.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import type { Rule } from "./rule.js";

/** Constants that state the volume of the whole vessel by their name. */
const vesselNames = new Set(["total", "total-volume", "vessel", "vessel-volume"]);

/** How far volumes may miss a constant, relative: as far as a check may by default. */
const usualWithin = 0.001;

/** The volumes at the start values add to what the file states of the vessel: a check, else a constant named so. */
export const statedVolume: Rule = (network, report, { env, say }) => {
  const stated = statement(network);
  // Where a requirement is broken too, that says it better.
  if (!stated || network.requires.some((r) => !(r.slack(env) > 0))) return;
  const wanted = stated.value.of(env);
  const volumes = network.compartments.map((c) => {
    const values = Object.fromEntries(Object.entries(c.values).map(([key, v]) => [key, v.of(env)]));
    return c.kind.volume({ values, counts: c.counts, zones: c.zones });
  });
  if (volumes.some((v) => v < 0)) return; // that is told, and this follows
  const sum = volumes.reduce((total, v) => total + v, 0);
  if (!Number.isFinite(sum - wanted) || Math.abs(sum - wanted) <= stated.within * Math.abs(wanted)) return;
  const text = (volume: number): string => say(volume, dimensions.volume);
  report("volume-off", stated.value.at, { sum: text(sum), stated: text(wanted) });
};

function statement(network: Network): { value: Value; within: number } | undefined {
  const check = network.checks.find((c) => c.what === "volume" && c.of === "all");
  if (check) return { value: check.equals, within: check.within };
  const constant = network.names.find(
    (n) =>
      n.role === "constant" &&
      vesselNames.has(n.name) &&
      sameDimension(n.value.dimension, inBasis(dimensions.volume, network.basis)),
  );
  return constant && network.compartments.length > 0 ? { value: constant.value, within: usualWithin } : undefined;
}
