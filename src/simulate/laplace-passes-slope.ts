import type { Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { NodeEquations } from "../transfer/node-equations.js";
import { type Passing, type PassingSlope, passingSlopes } from "./laplace-gain.js";
import type { Passes } from "./laplace-passes.js";

/** How tracer sorted by its delays moves along one direction, per unit of t. */
export interface PassesSlope {
  /** By copy, and last the rest: s. */
  readonly delays: Float64Array;
  /** By copy, of its undispersed part: of what leaves every node and of what enters it. */
  readonly direct: readonly Float64Array[];
  readonly enteringDirect: readonly Float64Array[];
  /** Of each slot, s: those of one copy may part. */
  readonly slotDelay: Float64Array;
  /** By link, of its part of what enters. */
  readonly weight: Float64Array;
  readonly passing: readonly PassingSlope[];
}

/** Below this part of a delay's own movement, another one moves alike. */
const alike = 1e-10;

/**
 * The derivative of `passes` along a direction.
 * @returns undefined where there is none: a body has none, or undispersed parts with one delay part
 */
export function passesSlope(
  plant: Plant,
  passing: readonly Passing[],
  { copies, rest, slots }: Passes,
  put: readonly (readonly [node: number, level: number])[],
  moves: PlantSlope,
): PassesSlope | undefined {
  const slopes = passingSlopes(plant, passing, moves);
  if (!slopes) return undefined;
  const { from, to, flow } = plant;
  const { inflow, size: n } = plant.columns;
  const share = flow.map((q, k) => (inflow[to[k]] > 0 ? q / inflow[to[k]] : 0));
  const weight = flow.map((_, k) =>
    inflow[to[k]] > 0 ? (moves.flow[k] - share[k] * moves.inflow[to[k]]) / inflow[to[k]] : 0,
  );
  const equations = new NodeEquations(plant);
  for (let i = 0; i < n; i++) equations.gainRe[i] = passing[i].delay > 0 ? 0 : passing[i].direct;
  equations.factor();
  const imaginary = new Float64Array(n);
  /** What enters by links of which one factor moves. */
  const entering = (by: Float64Array, c: Float64Array): Float64Array => {
    const mean = new Float64Array(n);
    for (let k = 0; k < flow.length; k++) mean[to[k]] += by[k] * c[from[k]];
    return mean;
  };
  const delays = new Float64Array(copies.length + 1);
  const slotDelay = new Float64Array(slots);
  const slotDirect = new Float64Array(slots);
  const slotSlope = new Float64Array(slots);
  const direct: Float64Array[] = [];
  const enteringDirect: Float64Array[] = [];
  for (const [c, copy] of copies.entries()) {
    if (copy.seeds.length > 0) delays[c] = slotDelay[copy.seeds[0].slot];
    const spikes = copy.seeds.filter(({ slot }) => slotDirect[slot] > 0);
    for (const { slot } of spikes) {
      const apart = Math.abs(slotDelay[slot] - delays[c]);
      if (apart > alike * Math.max(Math.abs(slotDelay[slot]), Math.abs(delays[c]))) return undefined;
    }
    const moved = new Float64Array(n);
    const brought = entering(weight, copy.direct);
    if (c === 0) for (const [node, level] of put) brought[node] -= (level * moves.inflow[node]) / inflow[node];
    for (let i = 0; i < n; i++) {
      if (passing[i].delay > 0) continue;
      moved[i] = passing[i].direct * brought[i] + slopes[i].direct * copy.enteringDirect[i];
    }
    for (const { node, slot } of copy.seeds) moved[node] += slotSlope[slot];
    equations.solve(moved, imaginary.fill(0));
    const later = entering(share, moved);
    for (let i = 0; i < n; i++) later[i] += brought[i];
    for (const { node, slot } of copy.exits) {
      if (slot === undefined) continue;
      slotDelay[slot] = delays[c] + slopes[node].delay;
      slotDirect[slot] += copy.enteringDirect[node] * passing[node].direct;
      slotSlope[slot] += later[node] * passing[node].direct + copy.enteringDirect[node] * slopes[node].direct;
    }
    direct.push(moved);
    enteringDirect.push(later);
  }
  if (rest.length > 0) delays[copies.length] = slotDelay[rest[0].slot];
  return { delays, direct, enteringDirect, slotDelay, weight, passing: slopes };
}
