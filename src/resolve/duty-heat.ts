import type { Chemistry } from "../model/chemistry.js";
import type { Duty, HeatDuty, Jacket } from "../model/duty.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, type Tree } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { aboveZero } from "./sign.js";
import { emptyScope, resolveTemperature, resolveValue } from "./value.js";

/** `adiabatic`, or jackets by place. Undefined once a problem is reported. */
export function resolveHeat(node: Tree, report: Report): HeatDuty | undefined {
  const entries = entriesOf(node);
  const jackets = entries.flatMap(({ key, value }): [string, Jacket][] => {
    const temperature = resolveTemperature(child(value, "jacket"), emptyScope, report);
    const conductance = resolveValue(child(value, "conductance"), dimensions["heat conductance"], emptyScope, report);
    if (!aboveZero(`the jacket of '${key.text}'`, temperature, false, report)) return [];
    if (!aboveZero(`the conductance of '${key.text}'`, conductance, true, report)) return [];
    return temperature && conductance ? [[key.text, { at: key.at, temperature, conductance }]] : [];
  });
  return jackets.length === entries.length ? { at: node.at, jackets: new Map(jackets) } : undefined;
}

/** Is there all that heat balances need: a heat capacity, a temperature for each feed, constants that can follow? */
export function heatFits(
  at: Span,
  chemistry: Chemistry | undefined,
  { with: given, local, feeds }: Pick<Duty, "with" | "local" | "feeds">,
  report: Report,
): void {
  if (!chemistry?.heatCapacity) report("heat-capacity-missing", at, { chemistry: chemistry?.title });
  for (const [feed, { at: place, temperature }] of feeds) {
    if (!temperature) report("feed-temperature-missing", place, { feed });
  }
  for (const { text, heat } of chemistry?.reactions ?? []) if (!heat) report("heat-not-given", at, { text });
  if (chemistry?.makesFollowTemperature) {
    report("heat-follows-temperature", at, { what: "what a reaction makes (`makes:`)" });
  }
  const follows = (name: string): boolean => chemistry?.constants.find((c) => c.name === name)?.warmed !== undefined;
  for (const [name, { at: place }] of [given, ...[...(local?.values() ?? [])].map((l) => l.constants)].flatMap((m) => [
    ...m,
  ])) {
    if (follows(name)) report("constant-held", place, { name });
  }
}

/** Warns of feed temperatures where one temperature is held everywhere. */
export function feedTemperaturesUnused(feeds: Duty["feeds"], report: Report): void {
  for (const [feed, { temperature }] of feeds) {
    if (temperature) report("feed-temperature-unused", temperature.at, { feed });
  }
}
