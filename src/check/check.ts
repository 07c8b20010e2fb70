import type { Network } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import type { Dimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { parameterBounds, requirements, sharesBesideRest } from "./bounds.js";
import { exchanges } from "./exchanges.js";
import { finiteValues } from "./finite.js";
import { membersReached } from "./members.js";
import { placeNames, streamTargets, unusedNames } from "./names.js";
import type { Rule } from "./rule.js";
import { splits } from "./splits.js";
import { statedVolume } from "./stated-volume.js";
import { checkSubjects } from "./statements.js";
import { topologyOf } from "./topology.js";
import { closedVessel, feedsAndOutlets, waysThrough } from "./ways.js";
import { zoneInlets } from "./zones.js";

const rules: readonly Rule[] = [
  placeNames,
  streamTargets,
  zoneInlets,
  feedsAndOutlets,
  waysThrough,
  membersReached,
  closedVessel,
  finiteValues,
  splits,
  exchanges,
  parameterBounds,
  requirements,
  sharesBesideRest,
  unusedNames,
  checkSubjects,
  statedVolume,
];

/** Runs every rule on a network whose names and values are all bound. */
export function checkNetwork(network: Network, env: ArrayLike<number>, report: Report): void {
  const topology = topologyOf(network);
  const say = (si: number, dimension: readonly number[], own?: Unit) =>
    formatQuantity(si, own?.name === "" ? own : network.units.unitFor(dimension as Dimension), 6);
  for (const rule of rules) rule(network, report, { topology, nearest, env, say });
}
