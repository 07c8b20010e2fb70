import { Part, type Plant } from "../compile/plant.js";
import { type Adjacency, adjacency, stronglyConnected } from "../numerics/graph.js";
import { bodyAt, hasInside } from "./bodies.js";
import { solveCircle } from "./circle.js";
import type { Circle } from "./circle-start.js";
import type { Conditions } from "./conditions.js";
import { type Conserved, conservedBy } from "./conserved.js";
import type { Pass } from "./dispersion.js";
import { type GroupBalance, groupBalance } from "./group.js";
import { type GroupState, groupStates, settleGroup } from "./group-search.js";
import type { NewtonResult } from "./newton.js";
import { rangeOf } from "./range.js";
import { type Mode, slowestMode } from "./stability.js";

/** Up to here nodes that feed one another are solved by elimination, above it by iteration. */
const mostEliminated = 200;
/** Where iteration fails, elimination is tried up to here. */
const mostTried = 2000;
/** Unknowns of a group up to which it is followed in time, where heat may make it ignite; and searched for several states. */
const mostFollowed = 200;
const mostSearched = 300;

/** How far the solution of many nodes that feed one another has come. */
export interface SteadyProgress {
  /** Nodes that are solved together. */
  readonly together: number;
  /** What their balances still miss, in the mean, as a share of the concentration scale. */
  readonly missing: number;
}

/** The links of a plant and some more. */
const withLinks = (
  { columns, from, to }: Plant,
  more: readonly { readonly node: number; readonly from: number }[],
): { size: number; from: Int32Array; to: Int32Array } => ({
  size: columns.size,
  from: Int32Array.of(...from, ...more.map((m) => m.from)),
  to: Int32Array.of(...to, ...more.map((m) => m.node)),
});

/** A steady state as far as it has come: filled group by group, downstream. Scaled concentrations, node by node. */
export class Walk {
  readonly y: Float64Array;
  /** m3/s, by node. */
  readonly inflow: Float64Array;
  readonly into: Adjacency;
  /** What feeds bring, concentration times flow. */
  readonly fed: Float64Array;
  readonly conserved: Conserved;
  /** Largest imbalance so far, and where. */
  residual = 0;
  worst: { node: number; species: number } | undefined;
  /** Groups of nodes that feed one another, also with heat, in flow order. */
  readonly groups: readonly Int32Array[];
  private readonly n: number;
  /** What outlets bring to feeds through exchangers: only the temperature, by as much as a flow of m3/s would. */
  private readonly warmed: readonly { readonly node: number; readonly from: number; readonly flow: number }[];
  /** Place of a node in the group at hand, -1 outside it. */
  private readonly place: Int32Array;

  constructor(
    private readonly plant: Plant,
    private readonly conditions: Conditions,
    private readonly progress: ((solved: SteadyProgress) => void) | undefined,
  ) {
    const { columns, feeds, to } = plant;
    const n = conditions.size;
    this.n = n;
    this.y = new Float64Array(columns.size * n);
    this.inflow = columns.inflow;
    this.into = adjacency(columns.size, to);
    this.fed = new Float64Array(columns.size * n);
    this.conserved = conservedBy(conditions.numbers, n, conditions.species.length);
    this.place = new Int32Array(columns.size).fill(-1);
    feeds.forEach((feed, k) => {
      for (let i = 0; i < n; i++) {
        this.fed[feed.node * n + i] += (feed.flow * conditions.feeds[k][i]) / conditions.scale[i];
      }
    });
    const exchangers = conditions.heat?.exchangers ?? [];
    this.warmed = exchangers.map(({ feed, outlet, gain }) => {
      const { node, flow } = feeds[feed];
      this.fed[node * n + n - 1] -= (gain * flow * conditions.feeds[feed][n - 1]) / conditions.scale[n - 1];
      return { node, from: plant.outlets[outlet].node, flow: gain * flow };
    });
    this.groups = this.warmed.length === 0 ? plant.groups : stronglyConnected(withLinks(plant, this.warmed));
  }

  /** Solves one group; everything upstream of it is known. */
  pass(group: Int32Array): void {
    const { inflow, n } = this;
    const nodes = group.filter((node) => inflow[node] > 0);
    for (const node of group) if (!(inflow[node] > 0)) this.y.fill(Number.NaN, node * n, (node + 1) * n);
    if (nodes.length === 0) return;
    const alone = nodes.length === 1 && !this.feedsItself(nodes[0]);
    if (alone && this.plant.columns.part[nodes[0]] !== Part.Cell) this.passAlone(nodes[0]);
    else this.passTogether(nodes);
  }

  private feedsItself(node: number): boolean {
    const { start, edges } = this.into;
    for (let e = start[node]; e < start[node + 1]; e++) if (this.plant.from[edges[e]] === node) return true;
    return false;
  }

  /** A joint or a body that does not feed itself. */
  private passAlone(node: number): void {
    const y = this.y.subarray(node * this.n, node * this.n + this.n);
    this.bring(node, y, 0);
    if (bodyAt(this.plant, node, this.conditions.reactionsAt(node))?.(y) === false) {
      this.fail(node, 0, Number.POSITIVE_INFINITY);
    }
  }

  private passTogether(nodes: Int32Array): void {
    const { n, place } = this;
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = p;
    const outside = new Float64Array(nodes.length * n);
    for (let p = 0; p < nodes.length; p++) this.bring(nodes[p], outside, p * n);
    // Iteration knows nothing of what an exchanger brings.
    const large = nodes.length > mostEliminated && this.warmed.length === 0;
    let solved = large ? this.iterate(nodes, outside) : undefined;
    if (!solved?.result.converged && nodes.length <= mostTried) solved = this.eliminate(nodes, outside);
    for (let p = 0; p < nodes.length; p++) {
      place[nodes[p]] = -1;
      for (let i = 0; i < n; i++) this.y[nodes[p] * n + i] = solved ? solved.y[p * n + i] : Number.NaN;
    }
    if (!solved) this.fail(nodes[0], 0, Number.POSITIVE_INFINITY);
    else {
      const { converged, worst, residual } = solved.result;
      if (!converged) this.fail(nodes[Math.floor(worst / n)], worst % n, residual);
      else this.residual = Math.max(this.residual, residual);
    }
  }

  private eliminate(nodes: Int32Array, outside: Float64Array): { y: Float64Array; result: NewtonResult } {
    const balance = this.balanceOf(nodes, outside);
    const y = this.startOf(nodes, balance, outside);
    // With heat there may be several states: the one is wanted that a vessel filled with what is fed, or told, runs into.
    const { heat, holds } = this.conditions;
    const byTime = (heat ?? holds) !== undefined && y.length <= mostFollowed;
    return { y, result: settleGroup(balance, y, byTime, () => rangeOf(this.conditions, nodes, balance, outside)) };
  }

  /** What the duty says that is inside, else what is fed before anything reacts. */
  private startOf(nodes: Int32Array, balance: GroupBalance, outside: Float64Array): Float64Array {
    const { holds } = this.conditions;
    if (!holds) return balance.mixed() ?? outside.slice();
    const y = new Float64Array(outside.length);
    for (let p = 0; p < nodes.length; p++) y.set(holds(nodes[p]), p * this.n);
    return y;
  }

  private balanceOf(nodes: Int32Array, outside: Float64Array): GroupBalance {
    const { plant, inflow, place } = this;
    const { start, edges } = this.into;
    const inlets = Array.from(nodes, (node) =>
      Array.from(edges.subarray(start[node], start[node + 1]))
        .flatMap((link) => {
          const from = place[plant.from[link]];
          return from < 0 || !(plant.flow[link] > 0) ? [] : [{ from, share: plant.flow[link] / inflow[node] }];
        })
        .concat(
          this.warmed.flatMap(({ node: to, from, flow }) =>
            to === node && place[from] >= 0
              ? [{ from: place[from], share: flow / inflow[node], only: this.n - 1 }]
              : [],
          ),
        ),
    );
    const inflows = Float64Array.from(nodes, (node) => inflow[node]);
    return groupBalance(plant, nodes, outside, inlets, inflows, this.conditions);
  }

  /**
   * All steady states of a group that a search finds, upstream being as it is; undefined where there is nothing to search: a
   * body that does not feed itself, or too many nodes.
   */
  statesOf(group: Int32Array): GroupState[] | undefined {
    const { n, place } = this;
    const nodes = group.filter((node) => this.inflow[node] > 0);
    if (!this.decides(group) || nodes.length * n > mostSearched) return undefined;
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = p;
    const outside = new Float64Array(nodes.length * n);
    for (let p = 0; p < nodes.length; p++) this.bring(nodes[p], outside, p * n);
    const balance = this.balanceOf(nodes, outside);
    const first = this.startOf(nodes, balance, outside);
    const range = rangeOf(this.conditions, nodes, balance, outside);
    const result = settleGroup(balance, first, true, () => range);
    const states = groupStates(balance, range, first, result);
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = -1;
    return states;
  }

  /** Goes on from a state of a group. */
  take(group: Int32Array, { y, residual }: Pick<GroupState, "y" | "residual">): void {
    const { n } = this;
    const nodes = group.filter((node) => this.inflow[node] > 0);
    for (const node of group) if (!(this.inflow[node] > 0)) this.y.fill(Number.NaN, node * n, (node + 1) * n);
    for (let p = 0; p < nodes.length; p++) this.y.set(y.subarray(p * n, p * n + n), nodes[p] * n);
    this.residual = Math.max(this.residual, residual);
  }

  /**
   * The balances of all that have a say in which states there are, at once: everything down to the last cell or circle. The
   * groups behind that follow.
   */
  whole(): { readonly balance: GroupBalance; readonly nodes: Int32Array; readonly behind: readonly Int32Array[] } {
    const { n, place } = this;
    const { groups } = this;
    const last = groups.findLastIndex((group) => this.decides(group));
    const nodes = Int32Array.from(groups.slice(0, last + 1).flatMap((group) => [...group])).filter(
      (node) => this.inflow[node] > 0,
    );
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = p;
    const outside = new Float64Array(nodes.length * n);
    for (let p = 0; p < nodes.length; p++) this.bring(nodes[p], outside, p * n);
    const balance = this.balanceOf(nodes, outside);
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = -1;
    return { balance, nodes, behind: groups.slice(last + 1) };
  }

  /** A cell, or nodes that feed one another: what may have several states. */
  private decides(group: Int32Array): boolean {
    const nodes = group.filter((node) => this.inflow[node] > 0);
    if (nodes.length === 0) return false;
    return nodes.length > 1 || this.feedsItself(nodes[0]) || this.plant.columns.part[nodes[0]] === Part.Cell;
  }

  /** Whether a small disturbance of a group grows, all nodes being in their states; undefined where it was not judged. */
  modeOf(group: Int32Array): Mode | "settled" | undefined {
    if (!this.decides(group)) {
      const inside = [...group].some((node) => this.inflow[node] > 0 && hasInside(this.plant, node));
      return inside ? undefined : "settled";
    }
    const { n, place } = this;
    const nodes = group.filter((node) => this.inflow[node] > 0);
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = p;
    const outside = new Float64Array(nodes.length * n);
    for (let p = 0; p < nodes.length; p++) this.bring(nodes[p], outside, p * n);
    const balance = this.balanceOf(nodes, outside);
    for (let p = 0; p < nodes.length; p++) place[nodes[p]] = -1;
    const own = new Float64Array(nodes.length * n);
    for (let p = 0; p < nodes.length; p++) own.set(this.y.subarray(nodes[p] * n, nodes[p] * n + n), p * n);
    return slowestMode(balance, own, false);
  }

  /** A walk that has come as far as this one and goes on by itself. */
  fork(): Walk {
    const other = new Walk(this.plant, this.conditions, this.progress);
    other.y.set(this.y);
    other.residual = this.residual;
    other.worst = this.worst;
    return other;
  }

  private iterate(nodes: Int32Array, outside: Float64Array): ReturnType<typeof solveCircle> {
    const { plant, inflow, place } = this;
    const { volume, part } = plant.columns;
    const { start, edges } = this.into;
    let count = 0;
    for (const node of nodes) count += start[node + 1] - start[node];
    const [from, to] = [new Int32Array(count), new Int32Array(count)];
    const share = new Float64Array(count);
    const excess = new Float64Array(nodes.length);
    const bodies = new Map<number, Pass>();
    let k = 0;
    for (let p = 0; p < nodes.length; p++) {
      const node = nodes[p];
      for (let e = start[node]; e < start[node + 1]; e++) {
        const source = place[plant.from[edges[e]]];
        const flow = plant.flow[edges[e]];
        if (!(flow > 0)) continue;
        if (source < 0) excess[p] += flow / inflow[node];
        else {
          from[k] = source;
          to[k] = p;
          share[k++] = flow / inflow[node];
        }
      }
    }
    for (const { node, flow } of plant.feeds) if (place[node] >= 0) excess[place[node]] += flow / inflow[node];
    for (let p = 0; p < nodes.length; p++) {
      const body = bodyAt(plant, nodes[p], this.conditions.reactionsAt(nodes[p]));
      if (body) bodies.set(p, body);
    }
    const circle: Circle = {
      graph: { size: nodes.length, from: from.subarray(0, k), to: to.subarray(0, k) },
      share: share.subarray(0, k),
      outside,
      excess,
      inflow: Float64Array.from(nodes, (node) => inflow[node]),
      tau: Float64Array.from(nodes, (node) => volume[node] / inflow[node]),
      part: Uint8Array.from(nodes, (node) => part[node]),
      bodies,
      cells: this.conditions.varied ? Array.from(nodes, (node) => this.conditions.reactionsAt(node).cell) : undefined,
    };
    const watch =
      this.progress &&
      ((norm: number) => this.progress?.({ together: nodes.length, missing: norm / Math.sqrt(nodes.length) }));
    return solveCircle(circle, this.conditions.reactions, this.conserved, watch);
  }

  /** Writes the mean concentration that reaches a node from outside the group at hand into mix[at ...], in units of its whole inflow. */
  private bring(node: number, mix: Float64Array, at: number): void {
    const { plant, n, place, inflow } = this;
    const { start, edges } = this.into;
    for (let i = 0; i < n; i++) mix[at + i] = this.fed[node * n + i];
    for (let e = start[node]; e < start[node + 1]; e++) {
      const from = plant.from[edges[e]];
      const flow = plant.flow[edges[e]];
      if (place[from] >= 0 || !(flow > 0)) continue;
      for (let i = 0; i < n; i++) mix[at + i] += flow * this.y[from * n + i];
    }
    for (const { node: to, from, flow } of this.warmed) {
      if (to === node && place[from] < 0) mix[at + n - 1] += flow * this.y[from * n + n - 1];
    }
    for (let i = 0; i < n; i++) mix[at + i] /= inflow[node];
  }

  private fail(node: number, species: number, residual: number): void {
    if (residual >= this.residual || !this.worst) this.worst = { node, species };
    this.residual = Math.max(this.residual, residual);
  }
}
