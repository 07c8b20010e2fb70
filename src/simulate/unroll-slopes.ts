import { Part } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { add, type Copy, type Draft, type UnrollPlan } from "./drafts.js";
import { jointBlendSlopes } from "./joint-slopes.js";

/** How an unrolled plant moves with the plant, per unit of t. */
export interface UnrolledSlope {
  /** By state: column -> 1/s, and 1/m3. */
  readonly rows: readonly ReadonlyMap<number, number>[];
  readonly input: Float64Array;
  /** What leaves a node: as many as `outflow` has passages, in its order. */
  outflow(node: number): PassageSlope[];
}

export interface PassageSlope {
  /** s */
  readonly delay: number;
  readonly weights: ReadonlyMap<number, number>;
  readonly direct: number;
}

const none: Draft = { weights: new Map(), direct: 0 };

/**
 * The derivative of `unroll`: the same copies in the same order, every sum by the product rule.
 * @returns undefined where there is none: tracer would begin to go where it does not, or two delays that are equal part ways
 */
export function unrolledSlope(plan: UnrollPlan, moved: PlantSlope): UnrolledSlope | undefined {
  const follower = new Follower(plan, moved);
  return follower.opensWays() || !follower.follow() ? undefined : follower;
}

class Follower implements UnrolledSlope {
  readonly rows: Map<number, number>[] = [];
  readonly input: Float64Array;
  private readonly blends;
  /** By the seeds of a copy: how they move, and how its delay does. */
  private readonly seeds = new Map<Map<number, Draft>, { delay: number; seeds: Map<number, Draft> }>();
  private readonly outflows: Map<number, Draft>[] = [];

  constructor(
    private readonly plan: UnrollPlan,
    private readonly moved: PlantSlope,
  ) {
    const { plant, blends, copies } = plan;
    this.blends = jointBlendSlopes(plant, moved, blends);
    let states = 0;
    for (const c of copies) for (const i of c.reached) if (plant.nodes[i].part === Part.Cell) states++;
    this.input = new Float64Array(states);
    if (copies.length > 0) this.seeds.set(copies[0].seeds, { delay: 0, seeds: new Map() });
  }

  /** Does a flow that is 0 begin? */
  opensWays(): boolean {
    const { plant } = this.plan;
    return plant.flow.some((q, k) => q === 0 && this.moved.flow[k] !== 0);
  }

  follow(): boolean {
    return this.plan.copies.every((copy) => this.copy(copy));
  }

  outflow(node: number): PassageSlope[] {
    return this.plan.copies.flatMap((copy, c) => {
      const draft = copy.outflow.get(node) ?? copy.seeds.get(node);
      if (!draft || (draft.weights.size === 0 && draft.direct === 0)) return [];
      const own = this.seeds.get(copy.seeds) as { delay: number; seeds: Map<number, Draft> };
      const { weights, direct } = this.outflows[c].get(node) ?? own.seeds.get(node) ?? none;
      return [{ delay: own.delay, weights, direct }];
    });
  }

  private copy(copy: Copy): boolean {
    const { plant, put, blends } = this.plan;
    const { nodes } = plant;
    const { volume: dVolume, inflow: dInflow } = this.moved;
    const own = this.seeds.get(copy.seeds) as { delay: number; seeds: Map<number, Draft> };
    const first = this.outflows.length === 0;
    const outflow = new Map<number, Draft>();
    this.outflows.push(outflow);
    const source = (i: number): Draft => copy.outflow.get(i) ?? copy.seeds.get(i) ?? none;
    const slope = (i: number): Draft => outflow.get(i) ?? own.seeds.get(i) ?? none;
    for (const i of copy.reached) {
      const blend = nodes[i].part === Part.Joint ? blends[i] : undefined;
      if (!blend) continue;
      const sum: Draft = { weights: new Map(), direct: 0 };
      for (const [s, w] of blend) {
        if (nodes[s].part !== Part.Joint) add(sum, slope(s), w);
        else if (first) sum.direct -= (w * (put.get(s) ?? 0) * dInflow[s]) / nodes[s].inflow ** 2;
      }
      for (const [s, dw] of this.blends[i] ?? []) {
        if (nodes[s].part !== Part.Joint) add(sum, source(s), dw);
        else if (first) sum.direct += (dw * (put.get(s) ?? 0)) / nodes[s].inflow;
      }
      outflow.set(i, sum);
    }
    for (const i of copy.reached) {
      const { part, volume, inflow } = nodes[i];
      if (part === Part.Cell) {
        const { sum, slope: dSum } = this.entering(i, first, source, slope);
        const shrink = dVolume[i] / volume;
        const row = new Map<number, number>();
        const state = this.rows.push(row) - 1;
        row.set(state, (inflow * shrink - dInflow[i]) / volume);
        for (const [s, w] of dSum.weights) row.set(s, (row.get(s) ?? 0) + w / volume);
        for (const [s, w] of sum.weights) row.set(s, (row.get(s) ?? 0) - (w * shrink) / volume);
        this.input[state] = (dSum.direct - sum.direct * shrink) / volume;
      } else if (
        part === Part.Delay &&
        !this.passOn(copy, own.delay, i, this.entering(i, first, source, slope).slope)
      ) {
        return false;
      }
    }
    return true;
  }

  /** Sum of flow times source into a node, and how it moves. */
  private entering(i: number, first: boolean, source: (i: number) => Draft, slope: (i: number) => Draft) {
    const { plant, put } = this.plan;
    const { into } = plant.structure;
    const sum: Draft = { weights: new Map(), direct: first ? (put.get(i) ?? 0) : 0 };
    const dSum: Draft = { weights: new Map(), direct: 0 };
    for (let e = into.start[i]; e < into.start[i + 1]; e++) {
      const k = into.edges[e];
      add(sum, source(plant.from[k]), plant.flow[k]);
      add(dSum, source(plant.from[k]), this.moved.flow[k]);
      add(dSum, slope(plant.from[k]), plant.flow[k]);
    }
    return { sum, slope: dSum };
  }

  /** What enters a tube becomes a seed of a later copy. */
  private passOn(copy: Copy, copyDelay: number, tube: number, entering: Draft): boolean {
    const target = copy.goes.get(tube);
    if (!target) return true;
    const { volume, inflow } = this.plan.plant.nodes[tube];
    const { volume: dVolume, inflow: dInflow } = this.moved;
    const inlet = copy.inlets.get(tube) as Draft;
    const seed: Draft = { weights: new Map(), direct: 0 };
    add(seed, entering, 1 / inflow);
    add(seed, inlet, -dInflow[tube] / inflow);
    const delay = copyDelay + (dVolume[tube] - (volume / inflow) * dInflow[tube]) / inflow;
    const known = this.seeds.get(target);
    if (!known) this.seeds.set(target, { delay, seeds: new Map([[tube, seed]]) });
    else if (Math.abs(known.delay - delay) > 1e-9 * (Math.abs(known.delay) + Math.abs(delay))) return false;
    else {
      const same = known.seeds.get(tube);
      if (same) add(same, seed, 1);
      else known.seeds.set(tube, seed);
    }
    return true;
  }
}
