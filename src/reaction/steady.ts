import { requireCarried } from "../compile/carried.js";
import { Part, type Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { bodyAt } from "./bodies.js";
import { type Conditions, conditionsOf, type DutySettings } from "./conditions.js";
import { conservedBy, imbalance } from "./conserved.js";
import { groupBalance } from "./group.js";
import { solveNewton } from "./newton.js";

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
 * The steady state of a chemistry in a plant: node after node downstream along the flow; where nodes feed one another,
 * together by Newton's method with the exact Jacobian; tubes as initial-value problems along their length.
 *
 * Balances hold to about 1e-11 of each concentration. With a chemistry that has several steady states in a loop this finds
 * the one that the unreacted mixture runs into. What did not converge is said in the result.
 * @param chemistry undefined: the feeds only mix
 * @param settings values in place of the duty's (`DutySettings`)
 * @throws RefusedError where the reaction in a body is not in this version
 */
export function steadyState(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  settings: DutySettings = {},
): SteadyState {
  requireCarried(plant, "reaction");
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  const walk = new Walk(plant, conditions);
  for (const group of plant.groups) walk.pass(group);
  return summary(plant, conditions, walk);
}

/** The solution as far as it has come: filled group by group, downstream. */
class Walk {
  readonly y: Float64Array;
  readonly inflow: Float64Array;
  readonly into: readonly number[][];
  readonly fed: Float64Array;
  residual = 0;
  worst: { node: number; species: number } | undefined;
  private readonly n: number;

  constructor(
    private readonly plant: Plant,
    private readonly conditions: Conditions,
  ) {
    const { nodes, feeds, to, flow } = plant;
    const n = conditions.species.length;
    this.n = n;
    this.y = new Float64Array(nodes.length * n);
    this.inflow = new Float64Array(nodes.length);
    this.fed = new Float64Array(nodes.length * n);
    this.into = nodes.map(() => []);
    for (let k = 0; k < to.length; k++) {
      if (!(flow[k] > 0)) continue;
      this.into[to[k]].push(k);
      this.inflow[to[k]] += flow[k];
    }
    feeds.forEach((feed, k) => {
      this.inflow[feed.node] += feed.flow;
      for (let i = 0; i < n; i++) {
        this.fed[feed.node * n + i] += (feed.flow * conditions.feeds[k][i]) / conditions.scale[i];
      }
    });
  }

  /** Solves one group; everything upstream of it is known. */
  pass(group: Int32Array): void {
    const nodes = group.filter((node) => this.inflow[node] > 0);
    for (const node of group) if (!(this.inflow[node] > 0)) this.y.fill(Number.NaN, node * this.n, (node + 1) * this.n);
    if (nodes.length === 0) return;
    const alone = nodes.length === 1 && !this.into[nodes[0]].some((k) => this.plant.from[k] === nodes[0]);
    if (alone && this.plant.nodes[nodes[0]].part !== Part.Cell) this.passAlone(nodes[0]);
    else this.passTogether(nodes);
  }

  /** A joint or a body that does not feed itself. */
  private passAlone(node: number): void {
    const { plant, n } = this;
    const y = this.y.subarray(node * n, node * n + n);
    y.set(this.brought(node, undefined));
    if (bodyAt(plant, node, this.conditions.reactions)?.(y) === false) this.fail(node, 0, Number.POSITIVE_INFINITY);
  }

  private passTogether(nodes: Int32Array): void {
    const { plant, n, inflow } = this;
    const place = new Map(Array.from(nodes, (node, k) => [node, k]));
    const outside = new Float64Array(nodes.length * n);
    const inlets = Array.from(nodes, (node, k) => {
      outside.set(this.brought(node, place), k * n);
      return this.into[node].flatMap((link) => {
        const from = place.get(plant.from[link]);
        return from === undefined ? [] : [{ from, share: plant.flow[link] / inflow[node] }];
      });
    });
    const balance = groupBalance(
      plant,
      nodes,
      outside,
      inlets,
      Float64Array.from(nodes, (node) => inflow[node]),
      this.conditions.reactions,
    );
    const y = balance.mixed() ?? outside.slice();
    const result = solveNewton(balance, y);
    nodes.forEach((node, k) => {
      this.y.set(y.subarray(k * n, k * n + n), node * n);
    });
    if (!result.converged) this.fail(nodes[Math.floor(result.worst / n)], result.worst % n, result.residual);
    else this.residual = Math.max(this.residual, result.residual);
  }

  /** Mean concentration (scaled) that reaches a node from outside the given ones, in units of its whole inflow. */
  private brought(node: number, within: ReadonlyMap<number, number> | undefined): Float64Array {
    const { plant, n } = this;
    const mix = this.fed.slice(node * n, node * n + n);
    for (const link of this.into[node]) {
      const from = plant.from[link];
      if (within?.has(from)) continue;
      for (let i = 0; i < n; i++) mix[i] += plant.flow[link] * this.y[from * n + i];
    }
    return mix.map((x) => x / this.inflow[node]);
  }

  private fail(node: number, species: number, residual: number): void {
    if (residual >= this.residual || !this.worst) this.worst = { node, species };
    this.residual = Math.max(this.residual, residual);
  }
}

/** Back to SI, with the balances of the whole plant. */
function summary(plant: Plant, { species, feeds, scale, reactions }: Conditions, walk: Walk): SteadyState {
  const n = species.length;
  const sum = (add: (total: Float64Array) => void): Float64Array => {
    const total = new Float64Array(n);
    add(total);
    return total;
  };
  const concentrations = walk.y.map((y, k) => y * scale[k % n]);
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
  const made = sum((total) => addMade(total, plant, walk, reactions.cell));
  for (let i = 0; i < n; i++) made[i] *= scale[i];
  const closure = fed.map((f, i) => (f + made[i] - left[i]) / (Math.max(f, left[i]) || 1));
  return {
    species,
    converged: walk.worst === undefined,
    worst: walk.worst && { node: plant.nodes[walk.worst.node].name, species: species[walk.worst.species] ?? "" },
    residual: walk.residual,
    concentrations,
    feeds: inPorts,
    outlets: outPorts,
    fed,
    left,
    made,
    closure,
    conserved: imbalance(
      conservedBy(reactions.cell.numbers, n),
      fed.map((x, i) => x / scale[i]),
      left.map((x, i) => x / scale[i]),
    ),
  };
}

/** Adds volume x rate of every cell, and what each tube changed between its ends. Scaled. */
function addMade(total: Float64Array, plant: Plant, walk: Walk, cell: Conditions["reactions"]["cell"]): void {
  const n = total.length;
  const rate = new Float64Array(n);
  plant.nodes.forEach(({ part, volume }, node) => {
    if (!(walk.inflow[node] > 0) || part === Part.Joint) return;
    if (part === Part.Cell) {
      cell.production(walk.y, node * n, rate, 0);
      for (let i = 0; i < n; i++) total[i] += volume * rate[i];
      return;
    }
    for (const link of walk.into[node]) {
      for (let i = 0; i < n; i++) total[i] -= plant.flow[link] * walk.y[plant.from[link] * n + i];
    }
    for (let i = 0; i < n; i++) total[i] += walk.inflow[node] * walk.y[node * n + i] - walk.fed[node * n + i];
  });
}
