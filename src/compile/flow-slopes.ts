import type { Network } from "../model/network.js";
import { branchesOf, type FlowPlan } from "./flows.js";
import type { SolvedStream } from "./solved-stream.js";
import { type Branches, solveThrough } from "./through-flows.js";
import type { ValueSlopes } from "./value-slopes.js";

/** How the steady flows of a network change along a direction in which its names move. */
export class FlowSlopes {
  private readonly branches: Branches;
  private readonly through: Float64Array;
  /** As they are. */
  readonly streams: readonly SolvedStream[];

  /** At values for which the flows balance. */
  constructor(
    private readonly network: Network,
    private readonly plan: FlowPlan,
    private readonly env: Float64Array,
    private readonly values: ValueSlopes,
  ) {
    this.branches = branchesOf(plan, env);
    const supply = new Float64Array(plan.places.length);
    network.feeds.forEach((f, i) => {
      supply[i] = env[f.flowSlot];
    });
    const solved = solveThrough(plan, this.branches, supply);
    this.through = "through" in solved ? solved.through : new Float64Array(plan.places.length);
    const { share, fixed } = this.branches;
    this.streams = this.streamsOf(share.map((s, k) => s * this.through[plan.from[k]] + fixed[k]));
  }

  /** Through-flow of a place (feeds, compartments, outlets), exchange left out, m3/s. */
  throughOf(place: number): number {
    return this.through[place];
  }

  /** d through-flow and d stream flow, m3/s per unit of t; `names` moves along `slope`. Undefined where they cannot be told. */
  along(slope: Float64Array): { through: Float64Array; streams: readonly SolvedStream[] } | undefined {
    const { plan, branches, through } = this;
    const moved = this.movedBranches(slope);
    const source = new Float64Array(plan.places.length);
    this.network.feeds.forEach((f, i) => {
      source[i] = slope[f.flowSlot];
    });
    const own = moved.share.map((s, k) => s * through[plan.from[k]] + moved.fixed[k]);
    own.forEach((q, k) => {
      source[plan.to[k]] += q;
    });
    const solved = solveThrough(plan, { share: branches.share, fixed: new Float64Array(own.length) }, source);
    if (!("through" in solved)) return undefined;
    const flows = own.map((q, k) => q + branches.share[k] * solved.through[plan.from[k]]);
    return { through: solved.through, streams: this.streamsOf(flows) };
  }

  private streamsOf(flows: Float64Array): SolvedStream[] {
    const { streams, from, to } = this.plan;
    return streams.map((stream, k) => ({ from: from[k], to: to[k], stream, flow: flows[k] }));
  }

  private movedBranches(slope: Float64Array): Branches {
    const { network, plan, env, values } = this;
    const share = new Float64Array(plan.streams.length);
    const fixed = new Float64Array(plan.streams.length);
    let first = 0;
    for (const { streams } of [...network.feeds, ...network.compartments]) {
      let rest = -1;
      let [shares, flows] = [0, 0];
      streams.forEach(({ split }, n) => {
        if (split.is === "rest") rest = first + n;
        if (!("value" in split)) return;
        const d = values.along(split.value, env, slope);
        if (split.is === "share") {
          share[first + n] = d;
          shares += d;
        } else {
          fixed[first + n] = d;
          flows += d;
        }
      });
      if (rest >= 0) {
        share[rest] = -shares;
        fixed[rest] = -flows;
      }
      first += streams.length;
    }
    return { share, fixed };
  }
}
