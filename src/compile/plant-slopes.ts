import type { BlockNumbers } from "../compartments/block.js";
import type { KindValues } from "../compartments/kind.js";
import type { ZoneTable } from "../compartments/zone-table.js";
import type { Compartment, Network } from "../model/network.js";
import { kindValues } from "./evaluate.js";
import { FlowSlopes } from "./flow-slopes.js";
import type { FlowPlan } from "./flows.js";
import type { Plant } from "./plant.js";
import { broughtToMembers } from "./spell.js";
import { type Spelled, spell } from "./spelled.js";
import type { ValueSlopes } from "./value-slopes.js";

/** How a plant changes along a direction, per unit of t; nodes and links as in the plant. */
export interface PlantSlope {
  /** Of all names, SI, one slot each. */
  readonly env: Float64Array;
  /** m3 and m3/s, by node. */
  readonly volume: Float64Array;
  readonly inflow: Float64Array;
  /** m3/s, by link. */
  readonly flow: Float64Array;
  /** By node, of blocks. */
  readonly blocks: ReadonlyMap<number, BlockNumbers>;
}

type Brought = ReturnType<typeof broughtToMembers>;

/**
 * Derivatives of a plant at one set of values, without compiling it again: values by their derivatives, flows by the same
 * linear system. What a kind makes of its values is at most bilinear (volumes shared over members, flows in proportion to the
 * through-flow), so that a wide central difference of its `spell` is exact but for rounding.
 */
export class PlantSlopes {
  private readonly flows: FlowSlopes;
  private readonly given: readonly KindValues[];
  private readonly spelled: readonly Spelled[];
  private readonly brought: Brought;

  constructor(
    private readonly network: Network,
    private readonly plant: Plant,
    plan: FlowPlan,
    private readonly values: ValueSlopes,
  ) {
    this.flows = new FlowSlopes(network, plan, plant.env, values);
    this.given = network.compartments.map((c) => kindValues(c, plant.env));
    this.brought = broughtToMembers(network, this.flows.streams);
    this.spelled = network.compartments.map((c, i) => spell(c, this.given[i], this.through(i), this.broughtTo(i)));
  }

  /**
   * @param env  how the names move, SI per unit of t, one slot each
   * @returns undefined where the plant has no derivative: a volume or flow that is just 0 begins to be there
   */
  along(env: Float64Array): PlantSlope | undefined {
    const { network, plant, spelled } = this;
    const flows = this.flows.along(env);
    if (!flows) return undefined;
    const volume = new Float64Array(plant.columns.size);
    const flow = new Float64Array(plant.flow.length);
    const brought = broughtToMembers(network, flows.streams);
    const blocks = new Map<number, BlockNumbers>();
    let node = network.feeds.length;
    let link = 0;
    for (const [i, c] of network.compartments.entries()) {
      const moved = c.zones
        ? this.zonesAlong(c.zones, i, flows.through[network.feeds.length + i], link)
        : this.spelledAlong(c, i, env, flows.through[network.feeds.length + i], brought);
      if (!moved) return undefined;
      volume.set(moved.volume, node);
      flow.set(moved.flow, link);
      let first = 0;
      for (const [k, count] of spelled[i].counts) {
        const [v, held, exchange, ...shape] = moved.blocks.slice(first, first + count);
        blocks.set(node + k, { volume: v, held, exchange, shape });
        first += count;
      }
      node += spelled[i].volume.length;
      link += spelled[i].flow.length;
    }
    for (const stream of flows.streams) flow[link++] = stream.flow;
    for (const c of network.compartments) {
      for (const e of c.exchanges) {
        const d = this.values.along(e.flow, plant.env, env);
        flow[link++] = d;
        flow[link++] = d;
      }
    }
    if (link !== flow.length) return undefined;
    const inflow = new Float64Array(volume.length);
    for (let k = 0; k < link; k++) inflow[plant.to[k]] += flow[k];
    network.feeds.forEach((_, i) => {
      inflow[i] += flows.through[i];
    });
    return { env, volume, inflow, flow, blocks };
  }

  /** A table of flows is in proportion to what enters, where it enters at one place. */
  private zonesAlong({ inlets }: ZoneTable, i: number, through: number, link: number): Spelled | undefined {
    const spelled = this.spelled[i];
    const { volume, flow } = spelled;
    if (through !== 0 && inlets.length > 1) return undefined;
    const grows = through === 0 ? 0 : through / this.through(i);
    const flows = this.plant.flow.subarray(link, link + flow.length);
    return { ...spelled, volume: volume.map(() => 0), flow: Array.from(flows, (q) => q * grows) };
  }

  private through(compartment: number): number {
    return this.flows.throughOf(this.network.feeds.length + compartment);
  }

  private broughtTo(compartment: number): ReadonlyMap<string, number> | undefined {
    return this.brought.get(this.network.feeds.length + compartment);
  }

  private spelledAlong(
    c: Compartment,
    i: number,
    env: Float64Array,
    through: number,
    moved: Brought,
  ): Spelled | undefined {
    const here = this.spelled[i];
    if (here.volume.length + here.flow.length === 0) return here;
    const given = this.given[i];
    const slopes: Record<string, number> = {};
    // As far as nothing changes its sign.
    let h = through === 0 ? Number.POSITIVE_INFINITY : Math.abs(this.through(i) / through) / 8;
    const brought = this.broughtTo(i);
    const broughtSlope = moved.get(this.network.feeds.length + i);
    for (const [suffix, d] of broughtSlope ?? []) {
      if (d !== 0) h = Math.min(h, Math.abs((brought?.get(suffix) ?? 0) / d) / 8);
    }
    for (const key in c.values) {
      slopes[key] = this.values.along(c.values[key], this.plant.env, env);
      if (slopes[key] !== 0) h = Math.min(h, Math.abs(given.values[key] / slopes[key]) / 8);
    }
    if (h === Number.POSITIVE_INFINITY) {
      const still = (all: number[]): number[] => all.map(() => 0);
      return { ...here, volume: still(here.volume), flow: still(here.flow), blocks: still(here.blocks) };
    }
    if (!(h > 0)) return undefined;
    const at = (by: number): Spelled => {
      const values: Record<string, number> = {};
      for (const key in slopes) values[key] = given.values[key] + by * slopes[key];
      const enters =
        brought && new Map([...brought].map(([s, q]) => [s, q + by * (broughtSlope?.get(s) ?? 0)] as const));
      return spell(c, { ...given, values }, this.through(i) + by * through, enters);
    };
    const [up, down] = [at(h), at(-h)];
    const same = (s: Spelled): boolean =>
      s.part.length === here.part.length &&
      s.part.every((p, k) => p === here.part[k]) &&
      s.flow.length === here.flow.length &&
      s.blocks.length === here.blocks.length;
    if (!same(up) || !same(down)) return undefined;
    const slope = (a: number[], b: number[]): number[] => a.map((x, k) => (x - b[k]) / (2 * h));
    return {
      ...here,
      volume: slope(up.volume, down.volume),
      flow: slope(up.flow, down.flow),
      blocks: slope(up.blocks, down.blocks),
    };
  }
}
