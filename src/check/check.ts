import { unknownKind } from "../compartments/unknown.js";
import type { Network } from "../model/network.js";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import type { Dimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { parameterBounds, requirements, sharesBesideRest } from "./bounds.js";
import { exchanges } from "./exchanges.js";
import { finiteValues } from "./finite.js";
import { membersReached } from "./members.js";
import { placeNames, streamTargets, unusedNames } from "./names.js";
import { writtenZeros } from "./nothing.js";
import type { Rule } from "./rule.js";
import { splits } from "./splits.js";
import { spreadsNamed } from "./spreads.js";
import { statedVolume } from "./stated-volume.js";
import { checkSubjects } from "./statements.js";
import { streamsTwice } from "./streams-twice.js";
import { topologyOf } from "./topology.js";
import { closedVessel, feedsAndOutlets, waysThrough } from "./ways.js";
import { zoneInlets } from "./zones.js";

/** What must hold before flows can be found. */
const flowRules: readonly Rule[] = [
  placeNames,
  streamTargets,
  streamsTwice,
  zoneInlets,
  feedsAndOutlets,
  waysThrough,
  membersReached,
  closedVessel,
  splits,
];

const otherRules: readonly Rule[] = [
  finiteValues,
  spreadsNamed,
  exchanges,
  parameterBounds,
  requirements,
  sharesBesideRest,
  unusedNames,
  checkSubjects,
  statedVolume,
  writtenZeros,
];

/**
 * Runs every rule on a network. What could not be bound in it is unknown and reported; rules say nothing of what hangs on it.
 * @returns whether its flows can be found
 */
export function checkNetwork(
  network: Network,
  env: ArrayLike<number>,
): { readonly problems: Problem[]; readonly flowsKnown: boolean } {
  const { report, problems } = collector();
  const topology = topologyOf(network);
  const say = (si: number, dimension: readonly number[], own?: Unit) =>
    formatQuantity(si, own?.name === "" ? own : network.units.unitFor(dimension as Dimension), 6);
  const aids = { topology, nearest, env, say };
  for (const rule of flowRules) rule(network, report, aids);
  const clear = !hasErrors(problems);
  for (const rule of otherRules) rule(network, report, aids);
  return { problems, flowsKnown: clear && flowsKnown(network, env) };
}

/** Is all known that flows are made of? */
function flowsKnown({ feeds, compartments }: Network, env: ArrayLike<number>): boolean {
  if (compartments.some((c) => c.kind === unknownKind)) return false;
  if (feeds.some((f) => !Number.isFinite(env[f.flowSlot]))) return false;
  const streams = [...feeds, ...compartments].flatMap((n) => n.streams);
  return streams.every((s) => !s.unknown && (!("value" in s.split) || Number.isFinite(s.split.value.of(env))));
}
