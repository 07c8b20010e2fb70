import type { Problem } from "../problems/problem.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { Part, type Plant } from "./plant.js";

/** What is to be done with a plant: followed by integrating, by inverting transfer functions, or its steady state with reaction. */
export type Work = "tracer" | "ode" | "laplace" | "reaction" | "transient";

/** What this version does in about half a minute: nodes in all, and nodes that feed one another. */
const limits: Readonly<Record<Work, { says: string; nodes: number; circle: number }>> = {
  tracer: { says: "compute tracer curves of", nodes: 20_000, circle: 20_000 },
  ode: { says: "integrate tracer curves of", nodes: 20_000, circle: 20_000 },
  laplace: { says: "compute tracer curves by transfer functions of", nodes: 5_000, circle: 1_000 },
  reaction: { says: "solve reaction in", nodes: 2_000_000, circle: 2_000_000 },
  transient: { says: "follow reaction in time in", nodes: 20_000, circle: 20_000 },
};

/** Why this version cannot do a work: bodies that are no cells, tubes and junctions (exact), or have no equations in time (ode), too many nodes. */
export function uncarried(plant: Plant, work: Work = "tracer"): Problem[] {
  const { size, part } = plant.columns;
  const { says, nodes, circle } = limits[work];
  const largest = plant.groups.reduce((most, group) => Math.max(most, group.length), 0);
  const tooMany = (found: number, most: number, circle: boolean): Problem[] => [
    problem("too-many-cells", plant.network.at, { what: says, nodes: found, most, circle }),
  ];
  if (size > nodes) return tooMany(size, nodes, false);
  if (largest > circle) return tooMany(largest, circle, true);
  if ((work !== "tracer" && work !== "ode") || !part.includes(Part.Block)) return [];
  return plant.nodes.flatMap(({ part, block, name, inflow }) => {
    if (part !== Part.Block || !block) return [];
    if (work === "ode" && (!(inflow > 0) || block.realize(inflow))) return [];
    const { at } = plant.network.compartments.find((body) => body.name === name) ?? plant.network;
    const engine = work === "ode" ? "ode" : "exact";
    return [problem("not-carried", at, { name, is: block.is, engine })];
  });
}

/** @throws RefusedError where a plant is beyond what this version does */
export function requireCarried(plant: Plant, work: Work = "tracer"): void {
  const problems = uncarried(plant, work);
  if (problems.length > 0) throw new RefusedError(problems);
}
