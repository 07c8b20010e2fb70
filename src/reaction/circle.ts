import { Part } from "../compile/plant.js";
import { FlowBlocks } from "../numerics/flow-blocks.js";
import { flowRows } from "../numerics/flow-rows.js";
import { solveSmall } from "../numerics/small-dense.js";
import { roomFor, Workspace } from "../numerics/wasm/workspace.js";
import { CircleLoops, writtenLaws } from "./circle-loops.js";
import { type Circle, mixtures, startOf } from "./circle-start.js";
import type { Conserved } from "./conserved.js";
import type { Pass } from "./dispersion.js";
import type { Kinetics, Reactions } from "./kinetics.js";
import { type NewtonResult, type System, solveInexactNewton } from "./newton.js";

const mostSteps = 2000;

/**
 * The steady state of a large circle: species that follow from others are left out, since what no reaction changes only mixes;
 * then, from what one tank would make, a sweep in flow order, and Newton's method with BiCGStab behind block-wise incomplete LU. Memory linear in nodes and
 * links.
 * @param watch told the norm of what balances miss, step by step
 * @returns all species, node by node, and how the method ended; undefined where the flows admit no mixture
 */
export function solveCircle(
  circle: Circle,
  reactions: Reactions,
  conserved: Conserved,
  watch?: (norm: number) => void,
): { y: Float64Array; result: NewtonResult } | undefined {
  const rows = flowRows(circle.graph, circle.share);
  const mixed = mixtures(circle, reactions.cell.size);
  if (!mixed) return undefined;
  const state = new CircleState(circle, rows, reactions, conserved, mixed, startOf(circle, reactions), watch);
  state.sweep();
  const result = solveInexactNewton(state, state.x);
  const worst = state.fullIndex(result.worst);
  return { y: state.full(), result: { ...result, worst } };
}

/** The balances in the species that move freely, by place in flow order. */
class CircleState implements System {
  readonly length: number;
  readonly size: number;
  readonly memory: Float64Array;
  readonly fall = 0.01;
  readonly x: Float64Array;
  readonly vector: () => Float64Array;
  private readonly n: number;
  /** The same loops compiled, where the laws are plain arithmetic and all that reacts are cells alike. */
  private readonly loops: CircleLoops | undefined;
  private readonly blocks: FlowBlocks;
  /** By place: what of each dependent species no reaction changes. */
  private readonly fixed: Float64Array;
  private readonly outside: Float64Array;
  private readonly mix: Float64Array;
  private readonly local: Float64Array;
  private readonly all: Float64Array;
  private readonly made: Float64Array;
  private readonly slope: Float64Array;
  private readonly reduced: Float64Array;
  /** What reacts everywhere, or by place in flow order. */
  private readonly cell: Kinetics;
  private readonly cells: readonly Kinetics[] | undefined;

  constructor(
    private readonly circle: Circle,
    private readonly rows: ReturnType<typeof flowRows>,
    reactions: Reactions,
    private readonly conserved: Conserved,
    mixed: Float64Array,
    start: Float64Array,
    readonly watch: ((norm: number) => void) | undefined,
  ) {
    const n = reactions.cell.size;
    const { free, dependent, follows } = conserved;
    const [r, d] = [free.length, dependent.length];
    const { size: count, order } = rows;
    this.cell = reactions.cell;
    this.cells = circle.cells && Array.from(order, (node) => circle.cells?.[node] ?? reactions.cell);
    this.n = n;
    this.size = r;
    this.length = count * r;
    const alike = this.cells === undefined && circle.bodies.size === 0;
    const laws = alike ? writtenLaws(reactions.cell, conserved, this.fall) : undefined;
    const vectors = new Array<number>(6).fill(count * r);
    const room = roomFor({ floats: [...vectors, count, count * d] });
    const workspace = new Workspace(FlowBlocks.room(rows, r) + room + (laws ? CircleLoops.room(rows, laws) : 0));
    this.blocks = new FlowBlocks(rows, r, workspace);
    this.vector = () => workspace.floats(count * r);
    this.memory = workspace.floats(count);
    this.x = this.vector();
    this.outside = this.vector();
    this.fixed = workspace.floats(count * d);
    this.loops = laws && new CircleLoops(rows, laws, workspace, this.memory, this.outside, this.fixed);
    for (let p = 0; p < count; p++) {
      const node = order[p];
      if (circle.part[node] === Part.Cell) this.memory[p] = circle.tau[node];
      for (let k = 0; k < r; k++) {
        this.x[p * r + k] = mixed[node * n + free[k]];
        this.outside[p * r + k] = circle.outside[node * n + free[k]];
      }
      for (let j = 0; j < d; j++) {
        let value = mixed[node * n + dependent[j]];
        for (let k = 0; k < r; k++) value -= follows[j * r + k] * this.x[p * r + k];
        this.fixed[p * d + j] = value;
      }
      for (let k = 0; k < r; k++) this.x[p * r + k] *= start[free[k]];
    }
    this.mix = new Float64Array(r);
    this.local = new Float64Array(r);
    this.all = new Float64Array(n);
    this.made = new Float64Array(n);
    this.slope = new Float64Array(n * n);
    this.reduced = new Float64Array(r * r);
  }

  /** All species, node by node as the circle has them. */
  full(): Float64Array {
    const { n, rows, all } = this;
    const y = new Float64Array(rows.size * n);
    for (let p = 0; p < rows.size; p++) {
      this.expand(p, this.x, p * this.size);
      for (let i = 0; i < n; i++) y[rows.order[p] * n + i] = Math.max(all[i], 0);
    }
    return y;
  }

  /** Place of a component of x in `full`. */
  fullIndex(k: number): number {
    return this.rows.order[Math.floor(k / this.size)] * this.n + this.conserved.free[k % this.size];
  }

  residual(y: Float64Array, f: Float64Array): boolean {
    if (this.loops) {
      this.loops.residual(y, f);
      return true;
    }
    for (let p = 0; p < this.rows.size; p++) if (!this.miss(p, y, f)) return false;
    return true;
  }

  step(y: Float64Array, f: Float64Array, rate: number, relative: number, out: Float64Array): boolean {
    if (this.loops) this.loops.linearize(y, this.blocks.diagonal, rate);
    else for (let p = 0; p < this.rows.size; p++) if (!this.linearize(p, y, rate)) return false;
    if (!this.blocks.factor()) return false;
    const { residual } = this.blocks.solve(f, out, { relative, most: mostSteps, rough: true });
    // A step that is not quite what was asked may still be a good one: the residual decides.
    return residual < 0.9 && Number.isFinite(out[0]);
  }

  /** What the balance at a place misses. */
  private miss(p: number, y: Float64Array, f: Float64Array): boolean {
    const { size: r, mix } = this;
    const tau = this.memory[p];
    this.enter(p, y);
    const body = tau > 0 ? undefined : this.bodyAt(p);
    if (body && !this.through(p, body)) return false;
    for (let k = 0; k < r; k++) f[p * r + k] = mix[k] - y[p * r + k];
    if (tau === 0) return true;
    const { made, conserved } = this;
    this.expand(p, y, p * r);
    this.cellAt(p).production(this.all, 0, made, 0);
    for (let k = 0; k < r; k++) f[p * r + k] += tau * made[conserved.free[k]];
    return true;
  }

  /** Sets the matrix of -dF/dy at a place, with what slows down in pseudo-time. */
  private linearize(p: number, y: Float64Array, rate: number): boolean {
    const { size: r, reduced, blocks } = this;
    const rr = r * r;
    const tau = this.memory[p];
    const own = this.rows.own[p];
    const body = tau > 0 ? undefined : this.bodyAt(p);
    for (let e = 0; e < rr; e++) reduced[e] = 0;
    if (tau > 0) {
      this.expand(p, y, p * r);
      this.cellAt(p).jacobian(this.all, 0, this.slope, 0);
      this.reduce();
      for (let e = 0; e < rr; e++) reduced[e] *= -tau;
      for (let k = 0; k < r; k++) reduced[k * r + k] += 1 + tau * rate - own;
    } else if (body) {
      this.enter(p, y);
      if (!this.through(p, body, this.slope)) return false;
      this.reduce();
      blocks.through.set(p, reduced.slice());
      for (let e = 0; e < rr; e++) reduced[e] *= -own;
      for (let k = 0; k < r; k++) reduced[k * r + k] += 1;
    } else for (let k = 0; k < r; k++) reduced[k * r + k] = 1 - own;
    for (let e = 0; e < rr; e++) blocks.diagonal[p * rr + e] = reduced[e];
    return true;
  }

  private cellAt(p: number): Kinetics {
    return this.cells === undefined ? this.cell : this.cells[p];
  }

  private bodyAt(p: number): Pass | undefined {
    const { bodies } = this.circle;
    return bodies.size > 0 ? bodies.get(this.rows.order[p]) : undefined;
  }

  /** Solves every node by itself, one after the other downstream, each with what the others are at that moment. */
  sweep(): void {
    if (this.loops) {
      this.loops.settle(this.x);
      return;
    }
    const { size: r, rows, mix, x, memory } = this;
    for (let p = 0; p < rows.size; p++) {
      this.enter(p, x);
      const body = memory[p] > 0 ? undefined : this.bodyAt(p);
      if (memory[p] > 0) this.settleCell(p);
      else if (!body || this.through(p, body)) x.set(mix, p * r);
    }
  }

  /** One Newton step for one cell: what enters from itself and others stays as it is. */
  private settleCell(p: number): void {
    const { size: r, x, mix, made, reduced, memory, conserved, local: step } = this;
    const at = p * r;
    this.expand(p, x, at);
    this.cellAt(p).production(this.all, 0, made, 0);
    this.cellAt(p).jacobian(this.all, 0, this.slope, 0);
    this.reduce();
    for (let e = 0; e < r * r; e++) reduced[e] *= -memory[p];
    for (let k = 0; k < r; k++) {
      reduced[k * r + k] += 1;
      step[k] = mix[k] - x[at + k] + memory[p] * made[conserved.free[k]];
    }
    if (!solveSmall(reduced, 0, r, step, 0, 1)) return;
    for (let k = 0; k < r; k++) x[at + k] = Math.max(x[at + k] + step[k], this.fall * x[at + k]);
  }

  /** What enters at a place, into `mix`. */
  private enter(p: number, y: Float64Array): void {
    const { size: r, rows, mix, outside } = this;
    const { start, column, share, own } = rows;
    for (let k = 0; k < r; k++) mix[k] = outside[p * r + k] + own[p] * y[p * r + k];
    for (let e = start[p]; e < start[p + 1]; e++) {
      const from = column[e] * r;
      for (let k = 0; k < r; k++) mix[k] += share[e] * y[from + k];
    }
  }

  /** All species at a place, into `all`, from those that move freely at y[at ...]. */
  private expand(p: number, y: Float64Array, at: number): void {
    const { size: r, all, fixed, conserved } = this;
    const { free, dependent, follows } = conserved;
    const d = dependent.length;
    for (let k = 0; k < r; k++) all[free[k]] = y[at + k];
    for (let j = 0; j < d; j++) {
      let value = fixed[p * d + j];
      for (let k = 0; k < r; k++) value += follows[j * r + k] * y[at + k];
      all[dependent[j]] = value;
    }
  }

  /** Sends `mix` through a body: what leaves is then in `mix`. */
  private through(p: number, body: Pass, slope?: Float64Array): boolean {
    const { size: r, all, mix, conserved } = this;
    this.expand(p, mix, 0);
    for (let i = 0; i < this.n; i++) all[i] = Math.max(all[i], 0);
    if (!body(all, slope)) return false;
    for (let k = 0; k < r; k++) mix[k] = all[conserved.free[k]];
    return true;
  }

  /** From `slope` over all species to `reduced` over those that move freely. */
  private reduce(): void {
    const { size: r, n, slope, reduced, conserved } = this;
    const { free, dependent, follows } = conserved;
    for (let i = 0; i < r; i++) {
      const row = free[i] * n;
      for (let k = 0; k < r; k++) {
        let value = slope[row + free[k]];
        for (let j = 0; j < dependent.length; j++) value += slope[row + dependent[j]] * follows[j * r + k];
        reduced[i * r + k] = value;
      }
    }
  }
}
