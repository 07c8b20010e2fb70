import type { Problem } from "../problems/problem.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { Part, type Plant } from "./plant.js";

/** What this version cannot work out over time or react: every body that only its transfer function describes. */
export function uncarried(plant: Plant): Problem[] {
  if (!plant.columns.part.includes(Part.Block)) return [];
  return plant.nodes.flatMap(({ part, block, name }) => {
    if (part !== Part.Block || !block) return [];
    const { at } = plant.network.compartments.find((body) => body.name === name) ?? plant.network;
    return [problem("not-carried", at, { name, is: block.is })];
  });
}

/** @throws RefusedError where a body of the plant is beyond the time-domain engines and the reaction of this version */
export function requireCarried(plant: Plant): void {
  const problems = uncarried(plant);
  if (problems.length > 0) throw new RefusedError(problems);
}
