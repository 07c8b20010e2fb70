import { requireCarried } from "../compile/carried.js";
import { Part, type Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { isClosed } from "../model/network.js";
import type { Adjacency } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import { sparseRows } from "../numerics/sparse.js";
import { add, type Copy, type Draft, type UnrollPlan } from "./drafts.js";
import { type Entry, partsOf } from "./entry.js";
import { type Blend, jointBlends } from "./joints.js";
import { type LinearSystem, type Passage, sameTime } from "./linear-system.js";
import { type UnrolledSlope, unrolledSlope } from "./unroll-slopes.js";

/**
 * A plant with its tubes unrolled: tracer that has passed tubes of total delay d lives in a copy of the network with a
 * clock of its own, u = t - d, so that what is left is a linear system without delays, exact, with no front smeared.
 * A tube in a recycle loop gives one copy per pass, until a pass is later than the horizon or carries less than 1e-12.
 */
export interface Unrolled {
  /** Concentration leaving a node, one passage per delay; empty where no tracer gets. */
  outflow(node: number): Passage[];
  /** Concentration entering a tube. */
  inlet(node: number): Passage[];
  system(): LinearSystem;
  /** Balances of the states as rows, column -> 1/s; they are the system's own, not to be changed. */
  readonly rows: readonly ReadonlyMap<number, number>[];
  readonly input: readonly number[];
  /** How all of it moves with the plant; undefined where that has no derivative. */
  slope(plant: PlantSlope): UnrolledSlope | undefined;
  /** s; passes later than this were given up because there were too many. Infinity where all were followed. */
  readonly complete: number;
}

const nothing: Draft = { weights: new Map(), direct: 0 };
const mostStates = 50_000;
/** Copies in all where they hold cells or nothing ever leaves, and elsewhere where they hold none: those cost little. */
const mostCopies = 10_000;
const mostBare = 100_000;
const smallestPass = 1e-12;

/**
 * @param entry   where a unit of tracer is put in: a joint (a feed), a cell, or a tube's inlet end
 * @param horizon s; passes later than this are left out
 * @throws RefusedError where a body is none of cells, delays and joints
 */
export function unroll(plant: Plant, entry: Entry, horizon: number): Unrolled {
  requireCarried(plant);
  const builder = new Unroller(plant, entry);
  const complete = builder.build(horizon);
  return {
    complete,
    outflow: (i) => builder.copies.flatMap((c) => passage(c.delay, c.outflow.get(i) ?? c.seeds.get(i))),
    inlet: (i) => builder.copies.flatMap((c) => passage(c.delay, c.inlets.get(i))),
    rows: builder.rows,
    input: builder.input,
    slope: (moved) => unrolledSlope(builder.plan, moved),
    system: () => ({ rates: sparseRows(builder.rows), input: Float64Array.from(builder.input) }),
  };
}

function passage(delay: number, draft: Draft | undefined): Passage[] {
  if (!draft || (draft.weights.size === 0 && draft.direct === 0)) return [];
  const states = Int32Array.from(draft.weights.keys());
  return [{ delay, states, weights: Float64Array.from(draft.weights.values()), direct: draft.direct }];
}

class Unroller {
  readonly copies: Copy[] = [];
  readonly rows: Map<number, number>[] = [];
  readonly input: number[] = [];
  private readonly blends: (Blend | undefined)[];
  private readonly out: Adjacency;
  private readonly into: Adjacency;
  private readonly put: ReadonlyMap<number, number>;
  private readonly loops: boolean;
  /** Integral over all time of each state for a unit of tracer; kept only where a loop holds a tube. */
  private readonly dose: number[] = [];

  constructor(
    private readonly plant: Plant,
    entry: Entry,
  ) {
    this.put = partsOf(entry);
    this.blends = jointBlends(plant);
    this.out = plant.structure.out;
    this.into = plant.structure.into;
    // In a closed vessel no pass carries less than the one before: only the horizon ends them.
    this.loops = !isClosed(plant) && plant.structure.tubeInLoop;
  }

  /** What was decided, for whoever follows the same way again. */
  get plan(): UnrollPlan {
    const { plant, put, blends, copies } = this;
    return { plant, put, blends, copies };
  }

  /** Returns the time up to which all passes are there, s. */
  build(horizon: number): number {
    const waiting: { delay: number; seeds: Map<number, Draft> }[] = [{ delay: 0, seeds: new Map() }];
    while (waiting.length > 0) {
      const next = waiting.shift() as (typeof waiting)[number];
      const copy = this.copy(next.delay, next.seeds, this.copies.length === 0);
      this.copies.push(copy);
      for (const [tube, draft] of copy.inlets) {
        const delay = next.delay + this.plant.nodes[tube].volume / this.plant.nodes[tube].inflow;
        if (delay > horizon * (1 + sameTime) || (this.loops && Math.abs(this.passed(tube, draft)) < smallestPass))
          continue;
        const at = waiting.findIndex((w) => w.delay >= delay * (1 - 1e-12));
        if (at >= 0 && Math.abs(waiting[at].delay - delay) <= 1e-12 * delay) {
          const same = waiting[at].seeds.get(tube);
          if (same) add(same, draft, 1);
          else waiting[at].seeds.set(tube, draft);
          copy.goes.set(tube, waiting[at].seeds);
        } else {
          const seeds = new Map([[tube, draft]]);
          waiting.splice(at < 0 ? waiting.length : at, 0, { delay, seeds });
          copy.goes.set(tube, seeds);
        }
      }
      const most = this.rows.length > 0 || isClosed(this.plant) ? mostCopies : mostBare;
      if (waiting.length > 0 && (this.rows.length > mostStates || this.copies.length > most)) return waiting[0].delay;
    }
    return Number.POSITIVE_INFINITY;
  }

  private copy(delay: number, seeds: Map<number, Draft>, first: boolean): Copy {
    const { nodes, from, flow } = this.plant;
    const reached = this.reach(seeds, first);
    const outflow = new Map<number, Draft>();
    const inlets = new Map<number, Draft>();
    const states: number[] = [];
    for (const i of reached) {
      if (nodes[i].part !== Part.Cell) continue;
      outflow.set(i, { weights: new Map([[this.rows.length, 1]]), direct: 0 });
      states.push(i);
      this.rows.push(new Map());
      this.input.push(0);
    }
    const source = (i: number): Draft => outflow.get(i) ?? seeds.get(i) ?? nothing;
    for (const i of reached) {
      const blend = nodes[i].part === Part.Joint ? this.blends[i] : undefined;
      if (!blend) continue;
      const sum: Draft = { weights: new Map(), direct: 0 };
      for (const [s, w] of blend) {
        if (nodes[s].part === Part.Joint) {
          if (first) sum.direct += (w * (this.put.get(s) ?? 0)) / nodes[s].inflow;
        } else add(sum, source(s), w);
      }
      outflow.set(i, sum);
    }
    const entering = (i: number): Draft => {
      const sum: Draft = { weights: new Map(), direct: first ? (this.put.get(i) ?? 0) : 0 };
      for (let e = this.into.start[i]; e < this.into.start[i + 1]; e++) {
        const k = this.into.edges[e];
        add(sum, source(from[k]), flow[k]);
      }
      return sum;
    };
    for (const i of states) {
      const [state] = (outflow.get(i) as Draft).weights.keys();
      const { volume, inflow } = nodes[i];
      const inward = entering(i);
      const row = this.rows[state];
      row.set(state, -inflow / volume);
      for (const [s, w] of inward.weights) row.set(s, (row.get(s) ?? 0) + w / volume);
      this.input[state] = inward.direct / volume;
    }
    if (this.loops) this.doses(states.map((i) => [...(outflow.get(i) as Draft).weights.keys()][0]));
    for (const i of reached) {
      if (nodes[i].part !== Part.Delay) continue;
      const inward = entering(i);
      const inlet: Draft = { weights: new Map(), direct: inward.direct / nodes[i].inflow };
      add(inlet, { weights: inward.weights, direct: 0 }, 1 / nodes[i].inflow);
      inlets.set(i, inlet);
    }
    return { delay, seeds, outflow, inlets, reached, goes: new Map() };
  }

  /** Nodes that tracer gets to without passing another tube; tubes are reached at their inlet. */
  private reach(seeds: ReadonlyMap<number, Draft>, first: boolean): number[] {
    const { nodes, to, flow } = this.plant;
    const seen = new Set<number>();
    const queue: number[] = [];
    const visit = (i: number) => {
      // What is put into a cell that nothing flows through stays there.
      const still = nodes[i].inflow === 0 && !(nodes[i].part === Part.Cell && this.put.has(i));
      if (seen.has(i) || still) return;
      seen.add(i);
      if (nodes[i].part !== Part.Delay) queue.push(i);
    };
    const follow = (i: number) => {
      for (let e = this.out.start[i]; e < this.out.start[i + 1]; e++) {
        if (flow[this.out.edges[e]] > 0) visit(to[this.out.edges[e]]);
      }
    };
    if (first) for (const node of this.put.keys()) visit(node);
    for (const tube of seeds.keys()) follow(tube);
    for (let i = queue.pop(); i !== undefined; i = queue.pop()) follow(i);
    return [...seen].sort((a, b) => a - b);
  }

  /** Integrals of the new states over all time: -A X = input, the older states known. */
  private doses(states: readonly number[]): void {
    const n = states.length;
    const local = new Map(states.map((s, i) => [s, i]));
    const matrix = new Float64Array(n * n);
    const rhs = new Float64Array(n);
    states.forEach((s, i) => {
      rhs[i] = this.input[s];
      for (const [column, rate] of this.rows[s]) {
        const j = local.get(column);
        if (j === undefined) rhs[i] += rate * this.dose[column];
        else matrix[i * n + j] -= rate;
      }
    });
    const lu = factor(matrix, n);
    if (lu !== "singular") solve(lu, rhs);
    states.forEach((s, i) => {
      this.dose[s] = rhs[i];
    });
  }

  /** Share of the tracer that goes through a tube in this pass. */
  private passed(tube: number, inlet: Draft): number {
    let sum = inlet.direct;
    for (const [s, w] of inlet.weights) sum += w * this.dose[s];
    return sum * this.plant.nodes[tube].inflow;
  }
}
