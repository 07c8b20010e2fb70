import type { Plant } from "../compile/plant.js";
import { type BalanceSolver, balanceSolver } from "../numerics/balance-solver.js";
import { adjacency } from "../numerics/graph.js";
import { gth } from "../numerics/gth.js";
import { plainCircle } from "./plain-circle.js";

/** Up to here a circle is solved by elimination, above it by iteration. */
const mostDense = 300;

const unsolvable: BalanceSolver = { solve: () => false };

/** Nodes that feed one another: a stretch of `members`, solved together. */
interface Circle {
  readonly first: number;
  readonly size: number;
  readonly solver: BalanceSolver;
}

/**
 * The node equations at s = 0, c_i - sum_j (q_ij / Q_i) c_j = b_i, for plants of any size: group by group in flow order,
 * small circles by elimination, large ones by iteration to round-off. Memory linear in nodes and links.
 */
export class SteadyEquations {
  /** Nodes in flow order, group by group. */
  private readonly members: Int32Array;
  private readonly circles: readonly Circle[];
  /** q_ij / Q_i per link. */
  private readonly weight: Float64Array;
  private readonly into: ReturnType<typeof adjacency>;
  private readonly groupOf: Int32Array;
  private readonly from: Int32Array;
  private readonly to: Int32Array;
  /** Parts that enter a node do not make 1: of a substance that divides otherwise than the liquid. */
  private readonly unlike: boolean;

  /** @param backward the same for links turned round: b travels upstream, shares being of what leaves a node */
  constructor(plant: Plant, backward = false) {
    const { size, inflow } = plant.columns;
    const { flow } = plant;
    this.unlike = plant.follows !== undefined;
    this.from = backward ? plant.to : plant.from;
    this.to = backward ? plant.from : plant.to;
    const { to } = this;
    this.into = adjacency(size, to);
    this.weight = flow.map((q, k) => (inflow[to[k]] > 0 ? q / inflow[to[k]] : 0));
    this.members = new Int32Array(size);
    this.groupOf = new Int32Array(size);
    const place = new Int32Array(size);
    const circles: Circle[] = [];
    let first = 0;
    plant.groups.forEach((_, n) => {
      const g = backward ? plant.groups.length - 1 - n : n;
      const group = plant.groups[g];
      this.members.set(group, first);
      group.forEach((i, p) => {
        this.groupOf[i] = g;
        place[i] = p;
      });
      const solver = this.solverOf(group, g, place, inflow);
      if (solver) circles.push({ first, size: group.length, solver });
      first += group.length;
    });
    this.circles = circles;
  }

  /** Turns b into c, in place. False where a circle could not be solved. */
  solve(c: Float64Array): boolean {
    const { members } = this;
    let good = true;
    let next = 0;
    for (const { first, size, solver } of this.circles) {
      for (; next < first; next++) c[members[next]] += this.brought(members[next], c);
      const b = new Float64Array(size);
      for (let p = 0; p < size; p++) b[p] = c[members[first + p]] + this.brought(members[first + p], c);
      good = solver.solve(b) && good;
      for (let p = 0; p < size; p++) c[members[first + p]] = b[p];
      next = first + size;
    }
    for (; next < members.length; next++) c[members[next]] += this.brought(members[next], c);
    return good;
  }

  /** Mean of what links bring to every node, for the given outflows: sum_j (q_ij / Q_i) c_j. */
  entering(c: Float64Array): Float64Array {
    const { from, to, weight } = this;
    const mean = new Float64Array(c.length);
    for (let k = 0; k < from.length; k++) mean[to[k]] += weight[k] * c[from[k]];
    return mean;
  }

  /** The part of what enters a node that other groups bring. */
  private fromOutside(i: number): number {
    const { start, edges } = this.into;
    let sum = 0;
    for (let e = start[i]; e < start[i + 1]; e++) {
      if (this.groupOf[this.from[edges[e]]] !== this.groupOf[i]) sum += this.weight[edges[e]];
    }
    return sum;
  }

  /** What earlier groups bring. */
  private brought(i: number, c: Float64Array): number {
    const { start, edges } = this.into;
    let sum = 0;
    for (let e = start[i]; e < start[i + 1]; e++) {
      const j = this.from[edges[e]];
      if (this.groupOf[j] !== this.groupOf[i]) sum += this.weight[edges[e]] * c[j];
    }
    return sum;
  }

  /** Of a group whose nodes are numbered by `place`; undefined for one node that does not feed itself. */
  private solverOf(group: Int32Array, g: number, place: Int32Array, inflow: Float64Array): BalanceSolver | undefined {
    const links = this.linksWithin(group, g);
    const size = group.length;
    if (links.length === 0 || inflow[group[0]] === 0) return undefined;
    if (this.unlike) {
      const { from, to, part } = this.placed(links, place);
      return plainCircle(size, to, from, part) ?? unsolvable;
    }
    const excess = Float64Array.from(group, (i) => this.fromOutside(i));
    if (size <= mostDense) {
      const matrix = new Float64Array(size * size);
      for (const k of links) matrix[place[this.to[k]] * size + place[this.from[k]]] += this.weight[k];
      const factors = gth(matrix, excess);
      if (factors === "singular") return unsolvable;
      return {
        solve(b) {
          factors.solve(b);
          return true;
        },
      };
    }
    const { from, to, part } = this.placed(links, place);
    return balanceSolver({ size, from, to }, part, excess) ?? unsolvable;
  }

  /** Links among the nodes of a group; of one node alone those to itself. */
  private linksWithin(group: Int32Array, g: number): Int32Array {
    const { start, edges } = this.into;
    let count = 0;
    for (let p = 0; p < group.length; p++) count += start[group[p] + 1] - start[group[p]];
    const links = new Int32Array(count);
    count = 0;
    for (let p = 0; p < group.length; p++) {
      const i = group[p];
      for (let e = start[i]; e < start[i + 1]; e++) {
        const j = this.from[edges[e]];
        if (this.groupOf[j] === g && (group.length > 1 || j === i)) links[count++] = edges[e];
      }
    }
    return links.subarray(0, count);
  }

  /** Their ends by place in the group, and what they bring. */
  private placed(links: Int32Array, place: Int32Array): { from: Int32Array; to: Int32Array; part: Float64Array } {
    const [from, to] = [new Int32Array(links.length), new Int32Array(links.length)];
    const part = new Float64Array(links.length);
    for (let k = 0; k < links.length; k++) {
      from[k] = place[this.from[links[k]]];
      to[k] = place[this.to[links[k]]];
      part[k] = this.weight[links[k]];
    }
    return { from, to, part };
  }
}
