import type { Chemistry } from "../model/chemistry.js";
import type { Duty, Exchanger, HeatDuty, Jacket } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, itemsOf, type Tree, textOf } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { aboveZero } from "./sign.js";
import { unknownValue } from "./unknown.js";
import { emptyScope, resolveTemperature, resolveValue } from "./value.js";

/** `adiabatic`, or jackets by place. What is wrong is reported, and unknown: its place can still be looked up. */
export function resolveHeat(node: Tree, exchange: Tree | undefined, report: Report): HeatDuty {
  const exchangers = itemsOf(exchange).flatMap((item) => resolveExchanger(item, report) ?? []);
  const jackets = entriesOf(node).map(({ key, value }): [string, Jacket] => {
    const temperature = resolveTemperature(child(value, "jacket"), emptyScope, report);
    const conductance = resolveValue(child(value, "conductance"), dimensions["heat conductance"], emptyScope, report);
    aboveZero(`the jacket of '${key.text}'`, temperature, false, report);
    aboveZero(`the conductance of '${key.text}'`, conductance, true, report);
    const known = (value: Value | undefined, kind: keyof typeof dimensions): Value =>
      value ?? unknownValue(key.at, dimensions[kind]);
    return [
      key.text,
      {
        at: key.at,
        temperature: known(temperature, "temperature"),
        conductance: known(conductance, "heat conductance"),
      },
    ];
  });
  for (const side of ["feed", "outlet"] as const) {
    exchangers.forEach((e, k) => {
      if (exchangers.some((other, j) => j < k && other[side] === e[side])) {
        report("exchanger-twice", e.at, { side, name: e[side] });
      }
    });
  }
  return { at: node.at, jackets: new Map(jackets), exchangers };
}

function resolveExchanger(node: Tree, report: Report): Exchanger | undefined {
  const [feed, outlet] = [textOf(node, "warms"), textOf(node, "from")];
  const shareNode = child(node, "effectiveness");
  const wanted = shareNode ? dimensions.ratio : dimensions["heat conductance"];
  const value = resolveValue(shareNode ?? child(node, "conductance"), wanted, emptyScope, report);
  if (!value || feed === undefined || outlet === undefined) return undefined;
  if (!aboveZero(`the exchanger of '${feed}'`, value, true, report)) return undefined;
  if (shareNode && value.of([]) > 1) {
    report("effectiveness-range", shareNode.at, {});
    return undefined;
  }
  return { at: node.at, feed, outlet, size: { is: shareNode ? "effectiveness" : "conductance", value } };
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
