import { Part, type Plant } from "../compile/plant.js";
import { bodyAt } from "./bodies.js";
import type { Conditions } from "./conditions.js";
import type { Kinetics, Reactions } from "./kinetics.js";
import type { Port, Settled } from "./settled.js";

/** Where the heat of a plant comes from and goes to, W. */
export interface HeatBalance {
  /** Set free by reactions; negative where they take it up. */
  readonly released: number;
  /** What came in through walls, by place; negative where it went out. */
  readonly walls: readonly { readonly place: string; readonly gained: number }[];
  /** What passes from outlets to feeds through exchangers, which stays in the plant; negative where it cools the feed. */
  readonly exchanged: readonly { readonly feed: string; readonly outlet: string; readonly passed: number }[];
  /** What outlets carry away beyond what feeds bring. */
  readonly carried: number;
  /** What of it does not close, over the largest of them, or over what warms all that is fed by 1 K where that is more. */
  readonly closure: number;
}

/**
 * @param warmed what reactions and walls together warm, K m3/s
 */
export function heatBalance(
  plant: Plant,
  conditions: Conditions,
  settled: Settled,
  { feeds, outlets }: { feeds: readonly Port[]; outlets: readonly Port[] },
  warmed: number,
): HeatBalance | undefined {
  const { heat } = conditions;
  if (!heat) return undefined;
  const { capacity } = heat;
  const warmth = (ports: readonly Port[]): number =>
    ports.reduce((sum, p) => (p.flow > 0 ? sum + p.flow * (p.temperature ?? Number.NaN) : sum), 0);
  const carried = capacity * (warmth(outlets) - warmth(feeds));
  const walls = gains(plant, conditions, settled);
  const gained = walls.reduce((sum, w) => sum + w.gained, 0);
  const released = capacity * warmed - gained;
  const exchanged = heat.exchangers.map(({ feed, outlet, gain }) => {
    const hot = settled.y[plant.outlets[outlet].node * conditions.size + conditions.size - 1];
    const difference = hot * conditions.scale[conditions.size - 1] - (feeds[feed].temperature ?? Number.NaN);
    const passed = capacity * feeds[feed].flow * gain * difference;
    return { feed: feeds[feed].name, outlet: outlets[outlet].name, passed };
  });
  const oneKelvin = capacity * feeds.reduce((sum, f) => sum + Math.max(f.flow, 0), 0);
  const size = Math.max(...[released, gained, carried, oneKelvin].map(Math.abs));
  return { released, walls, exchanged, carried, closure: (released + gained - carried) / size };
}

/** What comes in through the wall of each place. */
function gains(plant: Plant, conditions: Conditions, settled: Settled): HeatBalance["walls"] {
  const { heat, size, scale } = conditions;
  const found = new Map<string, number>();
  const { part, volume } = plant.columns;
  for (let node = 0; heat && node < plant.columns.size; node++) {
    const wall = heat.wallAt(node);
    if (!wall || !(settled.inflow[node] > 0)) continue;
    const cold = wall.outside - settled.y[node * size + size - 1] * scale[size - 1];
    const gained =
      part[node] === Part.Cell
        ? wall.perVolume * volume[node] * cold
        : heat.capacity * settled.inflow[node] * scale[size - 1] * gainedInside(plant, conditions, settled, node);
    found.set(wall.place, (found.get(wall.place) ?? 0) + gained);
  }
  return [...found].map(([place, gained]) => ({ place, gained }));
}

/** What a body with a wall gained per its flow, scaled: followed along with the mixture that passes it. */
function gainedInside(plant: Plant, conditions: Conditions, settled: Settled, node: number): number {
  const { size, heat, scale } = conditions;
  const { start, edges } = settled.into;
  const wall = heat?.wallAt(node);
  if (!heat || !wall) return 0;
  const y = new Float64Array(size + 1);
  for (let i = 0; i < size; i++) y[i] = settled.fed[node * size + i];
  for (let e = start[node]; e < start[node + 1]; e++) {
    const from = plant.from[edges[e]];
    const flow = plant.flow[edges[e]];
    if (flow > 0) for (let i = 0; i < size; i++) y[i] += flow * settled.y[from * size + i];
  }
  for (let i = 0; i < size; i++) y[i] /= settled.inflow[node];
  // Far enough from zero that what is lost through the wall never reaches it.
  const offset = 16;
  y[size] = offset;
  const counted = counting(
    conditions.reactionsAt(node),
    wall.perVolume / heat.capacity,
    wall.outside / scale[size - 1],
  );
  return bodyAt(plant, node, counted)?.(y) ? y[size] - offset : Number.NaN;
}

/** With one more component: what came in through the wall. */
function counting({ cell, tube, pocket }: Reactions, rate: number, outside: number): Reactions {
  return {
    cell: counted(cell, rate, outside),
    tube: counted(tube, rate, outside),
    pocket: counted(pocket, 0, outside),
  };
}

function counted(inside: Kinetics, rate: number, outside: number): Kinetics {
  const n = inside.size;
  const m = n + 1;
  const slope = new Float64Array(n * n);
  return {
    size: m,
    thermal: false,
    endures: inside.endures,
    scale: Float64Array.of(...inside.scale, 1),
    numbers: [],
    production(y, at, out, to) {
      inside.production(y, at, out, to);
      out[to + n] = rate * (outside - y[at + n - 1]);
    },
    jacobian(y, at, out, to) {
      inside.jacobian(y, at, slope, 0);
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) out[to + i * m + j] = slope[i * n + j];
        out[to + i * m + n] = 0;
      }
      for (let j = 0; j < m; j++) out[to + n * m + j] = j === n - 1 ? -rate : 0;
    },
  };
}
