import type { Plant } from "../compile/plant.js";
import { entryPattern } from "../numerics/entry-pattern.js";
import { type Adjacency, adjacency } from "../numerics/graph.js";
import type { ComplexLinearSolver } from "../numerics/linear-solver.js";
import { sparseComplexSolver } from "../numerics/sparse-lu-complex.js";

/** Nodes that feed one another, with the links between them; without `circle`, one node that does not feed itself. */
interface Group {
  readonly nodes: Int32Array;
  readonly links: Int32Array;
  readonly circle: Circle | undefined;
}

/** The equations of a group: entries, where links and diagonal are in them, and their solver. */
interface Circle {
  readonly re: Float64Array;
  readonly im: Float64Array;
  readonly at: Int32Array;
  readonly diagonal: Int32Array;
  readonly solver: ComplexLinearSolver;
}

function circleOf(size: number, row: Int32Array, column: Int32Array): Circle {
  const { pattern, at, diagonal } = entryPattern(size, row, column);
  const [re, im] = [new Float64Array(pattern.column.length), new Float64Array(pattern.column.length)];
  return { re, im, at, diagonal, solver: sparseComplexSolver(pattern, { tiny: 0, onDiagonal: true }) };
}

/**
 * The node equations of a plant, c_i - G_i sum_j (q_ij / Q_i) c_j = b_i, for any gains G: what leaves a node is its gain times
 * the mean of what enters. Solved group by group in flow order, circles by sparse elimination; made once for many gains.
 */
export class NodeEquations {
  /** Gain of every node; set these, then `factor`. */
  readonly gainRe: Float64Array;
  readonly gainIm: Float64Array;
  private readonly groups: readonly Group[];
  private readonly into: Adjacency;
  /** q_ij / Q_i per link. */
  private readonly weight: Float64Array;
  private readonly groupOf: Int32Array;
  private readonly work: { re: Float64Array; im: Float64Array };

  constructor(private readonly plant: Plant) {
    const { columns, from, to, flow } = plant;
    const { size: n, inflow } = columns;
    this.gainRe = new Float64Array(n);
    this.gainIm = new Float64Array(n);
    this.work = { re: new Float64Array(n), im: new Float64Array(n) };
    this.into = adjacency(n, to);
    this.weight = flow.map((q, k) => (inflow[to[k]] > 0 ? q / inflow[to[k]] : 0));
    this.groupOf = new Int32Array(n);
    plant.groups.forEach((group, g) => {
      for (const i of group) this.groupOf[i] = g;
    });
    const inner: number[][] = plant.groups.map(() => []);
    for (let k = 0; k < flow.length; k++) {
      if (this.groupOf[from[k]] === this.groupOf[to[k]]) inner[this.groupOf[to[k]]].push(k);
    }
    const place = new Int32Array(n);
    this.groups = plant.groups.map((group, g): Group => {
      group.forEach((i, p) => {
        place[i] = p;
      });
      const links = Int32Array.from(inner[g]);
      const row = links.map((k) => place[to[k]]);
      const column = links.map((k) => place[from[k]]);
      return { nodes: group, links, circle: links.length > 0 ? circleOf(group.length, row, column) : undefined };
    });
  }

  /** Takes over the gains. False where the equations have no one solution. */
  factor(): boolean {
    const { to } = this.plant;
    for (const { nodes, links, circle } of this.groups) {
      if (!circle) continue;
      circle.re.fill(0);
      circle.im.fill(0);
      for (let p = 0; p < nodes.length; p++) circle.re[circle.diagonal[p]] = 1;
      for (let e = 0; e < links.length; e++) {
        const k = links[e];
        circle.re[circle.at[e]] -= this.gainRe[to[k]] * this.weight[k];
        circle.im[circle.at[e]] -= this.gainIm[to[k]] * this.weight[k];
      }
      if (!circle.solver.factor(circle.re, circle.im)) return false;
    }
    return true;
  }

  /** Turns b into c, in place. */
  solve(re: Float64Array, im: Float64Array): void {
    for (let g = 0; g < this.groups.length; g++) {
      const { nodes, circle } = this.groups[g];
      for (const i of nodes) this.addBrought(i, g, re, im);
      if (!circle) continue;
      const { re: wRe, im: wIm } = this.work;
      for (let p = 0; p < nodes.length; p++) {
        wRe[p] = re[nodes[p]];
        wIm[p] = im[nodes[p]];
      }
      circle.solver.solve(wRe, wIm);
      for (let p = 0; p < nodes.length; p++) {
        re[nodes[p]] = wRe[p];
        im[nodes[p]] = wIm[p];
      }
    }
  }

  /** Mean of what links bring to every node, for the given outflows (real): sum_j (q_ij / Q_i) c_j. */
  entering(c: Float64Array): Float64Array {
    const { from, to } = this.plant;
    const mean = new Float64Array(c.length);
    for (let k = 0; k < from.length; k++) mean[to[k]] += this.weight[k] * c[from[k]];
    return mean;
  }

  /** Adds to b_i what comes from earlier groups. */
  private addBrought(i: number, g: number, re: Float64Array, im: Float64Array): void {
    let sumRe = 0;
    let sumIm = 0;
    for (let e = this.into.start[i]; e < this.into.start[i + 1]; e++) {
      const k = this.into.edges[e];
      const j = this.plant.from[k];
      if (this.groupOf[j] === g) continue;
      sumRe += this.weight[k] * re[j];
      sumIm += this.weight[k] * im[j];
    }
    re[i] += this.gainRe[i] * sumRe - this.gainIm[i] * sumIm;
    im[i] += this.gainRe[i] * sumIm + this.gainIm[i] * sumRe;
  }
}
