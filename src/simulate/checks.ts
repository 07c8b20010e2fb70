import { kindValues } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import { plantFollowing } from "../compile/sends.js";
import { broughtTo } from "../compile/through.js";
import { memberOf } from "../model/members.js";
import type { Check } from "../model/network.js";
import { meanAges } from "./ages.js";
import { moments } from "./moments.js";

/** What a statement of a network came to; value and `equals` in SI. */
export interface CheckResult {
  readonly check: Check;
  /** NaN where there is nothing to measure: a mean time at an outlet that no feed reaches. */
  readonly value: number;
  readonly equals: number;
  readonly holds: boolean;
}

/** Tests the `checks:` of a plant's network. Mean times are exact moments, of what all feeds bring in together. */
export function runChecks(plant: Plant): CheckResult[] {
  let times: ReadonlyMap<string, number> | undefined;
  return plant.network.checks.map((check): CheckResult => {
    const equals = check.equals.of(plant.env);
    if (check.what === "mean-time" && !check.follows) times ??= meanTimes(plant);
    const value =
      check.what === "volume"
        ? volumeOf(plant, check.of)
        : check.what === "flow"
          ? flowOf(plant, check.of)
          : check.follows
            ? meanTimeOf(plant, check.follows.of, check.of)
            : (times?.get(check.of) ?? Number.NaN);
    return { check, value, equals, holds: Math.abs(value - equals) <= check.within * Math.abs(equals) };
  });
}

/** Mean residence time by outlet, s, and of `all` outlets together, whichever feed it came by: the age of what leaves. */
function meanTimes(plant: Plant): Map<string, number> {
  const ages = meanAges(plant);
  const wet = plant.outlets.filter((o) => o.flow > 0);
  const sum = (of: (o: Plant["outlets"][number]) => number): number => wet.reduce((total, o) => total + of(o), 0);
  const all: [string, number] = ["all", sum((o) => o.flow * ages[o.node]) / sum((o) => o.flow)];
  return new Map([...plant.outlets.map((o): [string, number] => [o.name, ages[o.node]]), all]);
}

/** Mean residence time of a substance that divides otherwise than the liquid, brought by all feeds alike, s. */
function meanTimeOf(liquid: Plant, of: string, outlet: string): number {
  const plant = plantFollowing(liquid, of);
  const fed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const all = moments(plant, new Map(plant.feeds.map((f) => [f.node, f.flow / fed])));
  const outlets = plant.outlets.filter((o) => outlet === "all" || o.name === outlet).map((o) => all[o.node]);
  const wet = outlets.filter((m) => m.share > 0);
  return wet.reduce((sum, m) => sum + m.share * m.mean, 0) / wet.reduce((sum, m) => sum + m.share, 0);
}

function volumeOf({ network, env, volume, columns }: Plant, name: string): number {
  if (name === "all") return volume.total;
  const part = network.groups.find((g) => g.name === name);
  if (part) {
    const members = new Set(part.members);
    return network.compartments.reduce(
      (sum, c) => sum + (members.has(c.name) ? c.kind.volume(kindValues(c, env)) : 0),
      0,
    );
  }
  const body = network.compartments.find((c) => c.name === name);
  if (body) return body.kind.volume(kindValues(body, env));
  return memberOf(network.compartments, name) ? volumeOfNodes(columns, name) : Number.NaN;
}

/** What a member of a repeat holds, its pockets included. */
function volumeOfNodes({ size, volume, nameOf }: Plant["columns"], name: string): number {
  let sum = 0;
  for (let i = 0; i < size; i++) {
    const node = nameOf(i);
    if (node === name || node.startsWith(`${name}.`)) sum += volume[i];
  }
  return sum;
}

/** Through-flow, exchange and backflow left out; of a part, what enters by all its inlets. */
function flowOf(plant: Plant, name: string): number {
  const feed = plant.feeds.find((f) => f.name === name);
  if (feed) return feed.flow;
  const ways = plant.network.groups.find((g) => g.name === name)?.inlets ?? [name];
  return ways.reduce((sum, way) => sum + broughtTo(plant, way), 0);
}
