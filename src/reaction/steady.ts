import { requireCarried } from "../compile/carried.js";
import { Part, type Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { type Conditions, conditionsOf, type DutySettings } from "./conditions.js";
import { imbalance } from "./conserved.js";
import { type SteadyProgress, Walk } from "./walk.js";

/** Concentrations everywhere in a plant that has settled. SI; species by their index in `species`. */
export interface SteadyState {
  readonly species: readonly string[];
  readonly converged: boolean;
  /** Where the balances hold worst, when they did not converge. */
  readonly worst: { readonly node: string; readonly species: string } | undefined;
  /** Largest imbalance of a node, as a share of the concentration scale of its species. */
  readonly residual: number;
  /** Outflow of every node: concentrations[node * species.length + i]. NaN where nothing flows. */
  readonly concentrations: Float64Array;
  readonly feeds: readonly Port[];
  readonly outlets: readonly Port[];
  /** Amount per second over the whole plant, by species; `made` is negative where consumed. */
  readonly fed: Float64Array;
  readonly left: Float64Array;
  readonly made: Float64Array;
  /** (fed + made - left) as a share of the larger of fed and left; 0 is a closed balance. */
  readonly closure: Float64Array;
  /** How far sums that no reaction changes (elements, say) differ between fed and left, the largest, as a share. */
  readonly conserved: number;
}

/** What crosses the boundary of the plant at one place. */
export interface Port {
  readonly name: string;
  /** m3/s. */
  readonly flow: number;
  readonly concentrations: Float64Array;
}

/**
 * The steady state of a chemistry in a plant of any kinds of compartments: node after node downstream along the flow. What is
 * segregated or flows along a body (`tubular`, `laminar`, `cascade`) is followed as parcels, `dispersed` as a boundary-value
 * problem; pockets react beside the flow that passes them. Where nodes feed one another they are solved together by Newton's
 * method with exact derivatives: up to 200 by elimination, more by iteration (BiCGStab behind an incomplete LU in flow order).
 *
 * Balances hold to about 1e-11 of each concentration; of a `dispersed` body in which a reactant runs out, to 1e-7. With a
 * chemistry that has several steady states in a loop this finds the one that the unreacted mixture runs into. What did not
 * converge is said in the result (`converged`, `worst`), which then holds the best found.
 *
 * Concentrations are SI (mol/m3, kg/m3 or 1/m3, as the duty feeds them), node by node: those that leave compartment `bulk` are
 * `concentrations[plant.exit.get("bulk") * species.length + i]`.
 * @param chemistry undefined: the feeds only mix
 * @param settings values in place of the duty's (`DutySettings`), SI
 * @param progress told now and then how far many nodes that feed one another have come
 * @throws RefusedError where the plant is larger than this version solves
 * @see the methods beside their code in `src/reaction` and `src/numerics`
 */
export function steadyState(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  settings: DutySettings = {},
  progress?: (solved: SteadyProgress) => void,
): SteadyState {
  requireCarried(plant, "reaction");
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  const walk = new Walk(plant, conditions, progress);
  for (const group of plant.groups) walk.pass(group);
  return summary(plant, conditions, walk);
}

/** Back to SI, with the balances of the whole plant. */
function summary(plant: Plant, conditions: Conditions, walk: Walk): SteadyState {
  const { species, feeds, scale, reactionsAt } = conditions;
  const n = species.length;
  const sum = (add: (total: Float64Array) => void): Float64Array => {
    const total = new Float64Array(n);
    add(total);
    return total;
  };
  const concentrations = new Float64Array(walk.y.length);
  for (let k = 0; k < concentrations.length; k++) concentrations[k] = walk.y[k] * scale[k % n];
  const port = (name: string, flow: number, c: Float64Array): Port => ({ name, flow, concentrations: c });
  const inPorts = plant.feeds.map((feed, k) => port(feed.name, feed.flow, feeds[k]));
  const outPorts = plant.outlets.map((outlet) =>
    port(outlet.name, outlet.flow, concentrations.slice(outlet.node * n, outlet.node * n + n)),
  );
  const carried = (ports: readonly Port[]): Float64Array =>
    sum((total) => {
      for (const p of ports) if (p.flow > 0) for (let i = 0; i < n; i++) total[i] += p.flow * p.concentrations[i];
    });
  const fed = carried(inPorts);
  const left = carried(outPorts);
  const made = sum((total) => addMade(total, plant, walk, reactionsAt));
  for (let i = 0; i < n; i++) made[i] *= scale[i];
  const closure = fed.map((f, i) => (f + made[i] - left[i]) / (Math.max(f, left[i]) || 1));
  return {
    species,
    converged: walk.worst === undefined,
    worst: walk.worst && { node: plant.columns.nameOf(walk.worst.node), species: species[walk.worst.species] ?? "" },
    residual: walk.residual,
    concentrations,
    feeds: inPorts,
    outlets: outPorts,
    fed,
    left,
    made,
    closure,
    conserved: imbalance(
      walk.conserved,
      fed.map((x, i) => x / scale[i]),
      left.map((x, i) => x / scale[i]),
    ),
  };
}

/** Adds volume x rate of every cell, and what each body changed between its ends. Scaled. */
function addMade(
  total: Float64Array,
  { columns, flow, from }: Plant,
  walk: Walk,
  reactionsAt: Conditions["reactionsAt"],
): void {
  const n = total.length;
  const { part, volume, size } = columns;
  const { start, edges } = walk.into;
  const rate = new Float64Array(n);
  for (let node = 0; node < size; node++) {
    if (!(walk.inflow[node] > 0) || part[node] === Part.Joint) continue;
    if (part[node] === Part.Cell) {
      reactionsAt(node).cell.production(walk.y, node * n, rate, 0);
      for (let i = 0; i < n; i++) total[i] += volume[node] * rate[i];
      continue;
    }
    for (let e = start[node]; e < start[node + 1]; e++) {
      for (let i = 0; i < n; i++) total[i] -= flow[edges[e]] * walk.y[from[edges[e]] * n + i];
    }
    for (let i = 0; i < n; i++) total[i] += walk.inflow[node] * walk.y[node * n + i] - walk.fed[node * n + i];
  }
}
