import { Part, type Plant } from "../compile/plant.js";
import type { Conditions } from "./conditions.js";
import { conservedBy, imbalance } from "./conserved.js";
import type { FeedExchanger } from "./exchangers.js";
import { type HeatBalance, heatBalance } from "./heat-balance.js";
import { depleted } from "./kinetics.js";
import type { Port, Settled } from "./settled.js";

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
  /** K, of the outflow of every node, where heat is balanced; NaN where nothing flows. */
  readonly temperatures: Float64Array | undefined;
  /** Where the heat goes, where it is balanced. */
  readonly heat: HeatBalance | undefined;
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

/** Share of what is fed that the balance of a species over the whole plant may miss. */
const closed = 1e-6;

/** Back to SI, with the balances of the whole plant. */
export function summary(plant: Plant, conditions: Conditions, walk: Settled): SteadyState {
  const { species, feeds, scale, size, heat } = conditions;
  const n = species.length;
  const sum = (add: (total: Float64Array) => void): Float64Array => {
    const total = new Float64Array(size);
    add(total);
    return total;
  };
  const count = plant.columns.size;
  const concentrations = new Float64Array(count * n);
  for (let k = 0; k < count; k++) {
    for (let i = 0; i < n; i++) concentrations[k * n + i] = walk.y[k * size + i] * scale[i];
  }
  for (const i of conditions.spends) {
    for (let k = i; k < concentrations.length; k += n)
      if (concentrations[k] <= depleted * scale[i]) concentrations[k] = 0;
  }
  const temperatures = heat && Float64Array.from({ length: count }, (_, k) => walk.y[k * size + n] * scale[n]);
  const port = (name: string, flow: number, c: Float64Array, temperature: number | undefined): Port => ({
    name,
    flow,
    concentrations: c,
    temperature,
  });
  const inPorts = plant.feeds.map((feed, k) => port(feed.name, feed.flow, feeds[k].slice(0, n), heat && feeds[k][n]));
  const outPorts = plant.outlets.map(({ name, flow, node }, k) => {
    const exchanger = heat?.exchangers.find((e) => e.outlet === k);
    const inside = temperatures?.[node];
    const given = exchanger && inside !== undefined ? gives(plant, conditions, exchanger, inside) / flow : 0;
    return port(name, flow, concentrations.slice(node * n, node * n + n), inside && inside - given);
  });
  const carried = (ports: readonly Port[]): Float64Array =>
    sum((total) => {
      for (const p of ports) if (p.flow > 0) for (let i = 0; i < n; i++) total[i] += p.flow * p.concentrations[i];
    });
  const [fed, left] = [carried(inPorts).subarray(0, n), carried(outPorts).subarray(0, n)];
  const changed = sum((total) => addMade(total, plant, walk, conditions.reactionsAt));
  const made = Float64Array.from({ length: n }, (_, i) => changed[i] * scale[i]);
  const closure = fed.map((f, i) => (f + made[i] - left[i]) / (Math.max(f, left[i]) || 1));
  // A balance of the whole that stays open is no result, whatever its nodes say.
  const through = inPorts.reduce((all, p) => all + Math.max(p.flow, 0), 0);
  const open = fed.findIndex((f, i) => Math.abs(f + made[i] - left[i]) > closed * through * scale[i]);
  const worst =
    walk.worst ?? (open < 0 || plant.outlets.length === 0 ? undefined : { node: plant.outlets[0].node, species: open });
  return {
    species,
    converged: worst === undefined,
    worst: worst && {
      node: plant.columns.nameOf(worst.node),
      species: species[worst.species] ?? "the temperature",
    },
    residual: walk.residual,
    concentrations,
    temperatures,
    heat: heat && heatBalance(plant, conditions, walk, { feeds: inPorts, outlets: outPorts }, changed[n] * scale[n]),
    feeds: inPorts,
    outlets: outPorts,
    fed,
    left,
    made,
    closure,
    conserved: imbalance(
      conservedBy(
        conditions.numbers.map((row) => row.subarray(0, n)),
        n,
      ),
      fed.map((x, i) => x / scale[i]),
      left.map((x, i) => x / scale[i]),
    ),
  };
}

/** What an outlet gives to a feed through an exchanger, K m3/s. */
const gives = (plant: Plant, { feeds, species }: Conditions, { feed, gain }: FeedExchanger, from: number): number =>
  plant.feeds[feed].flow * gain * (from - feeds[feed][species.length]);

/** Adds volume x rate of every cell, and what each body changed between its ends. Scaled. */
function addMade(
  total: Float64Array,
  { columns, flow, from }: Plant,
  walk: Settled,
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
