import { kindValues } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import type { Check } from "../model/network.js";
import { moments, type NodeMoments } from "./moments.js";

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
    if (check.what === "mean-time") times ??= meanTimes(plant);
    const value =
      check.what === "volume"
        ? volumeOf(plant, check.of)
        : check.what === "flow"
          ? flowOf(plant, check.of)
          : (times?.get(check.of) ?? Number.NaN);
    return { check, value, equals, holds: Math.abs(value - equals) <= check.within * Math.abs(equals) };
  });
}

/** Mean residence time by outlet, s, and of `all` outlets together: each feed counts by the flow that it sends there. */
function meanTimes({ feeds, outlets, ...plant }: Plant): Map<string, number> {
  const byFeed = feeds.map((f): NodeMoments[] =>
    moments({ feeds, outlets, ...plant }, plant.entry.get(f.name) ?? f.node),
  );
  const mean = (nodes: readonly number[]): number => {
    let [flow, age] = [0, 0];
    feeds.forEach((f, i) => {
      for (const node of nodes) {
        const { share, mean: time } = byFeed[i][node];
        if (!(share > 0)) continue;
        flow += f.flow * share;
        age += f.flow * share * time;
      }
    });
    return age / flow;
  };
  const all: [string, number] = ["all", mean(outlets.map((o) => o.node))];
  return new Map([...outlets.map((o): [string, number] => [o.name, mean([o.node])]), all]);
}

function volumeOf({ network, env, volume }: Plant, name: string): number {
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
  return body ? body.kind.volume(kindValues(body, env)) : Number.NaN;
}

/** Through-flow, exchange left out; of a part, what enters by all its inlets. */
function flowOf({ network, feeds, streams }: Plant, name: string): number {
  const feed = feeds.find((f) => f.name === name);
  if (feed) return feed.flow;
  const ways = new Set(network.groups.find((g) => g.name === name)?.inlets ?? [name]);
  return streams.reduce((sum, s) => sum + (ways.has(s.to) && s.role !== "exchange" ? s.flow : 0), 0);
}
