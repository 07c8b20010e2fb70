import type { Plant } from "../compile/plant.js";
import { isClosed } from "../model/network.js";
import { type Complex, complex } from "../numerics/complex.js";
import { type Adjacency, adjacency } from "../numerics/graph.js";
import { NodeEquations } from "../transfer/node-equations.js";
import type { Entry } from "./entry.js";
import type { Passing } from "./laplace-gain.js";
import { sameTime } from "./linear-system.js";
import { putIn } from "./moments.js";

/** Tracer on its way into a copy: what left a delayed node; `slot` numbers it. */
export interface Seed {
  readonly node: number;
  readonly slot: number;
  /** s, since the injection. */
  readonly delay: number;
}

/** All tracer that has passed the same total delay. */
export interface Copy {
  readonly delay: number;
  readonly seeds: readonly Seed[];
  /** Delayed nodes that it enters here, with the slots that they leave by; none where it comes too late to matter. */
  readonly exits: readonly { readonly node: number; readonly slot: number | undefined }[];
  /** Undispersed part, by node: of what leaves (1/m3 per unit of amount) and of what enters. */
  readonly direct: Float64Array;
  readonly enteringDirect: Float64Array;
  /** Integral over all time of what leaves a node smoothly: where it is 0, nothing smooth does. */
  readonly smooth: Float64Array;
}

/** A unit of tracer put in at one node, sorted by the delay it has passed. */
export interface Passes {
  readonly copies: readonly Copy[];
  /** What is still to come: it is taken together, with its delays in it. */
  readonly rest: readonly Seed[];
  readonly slots: number;
  /** True where passes were given up because there were too many. */
  readonly truncated: boolean;
  /** s; what passes later is missing where they were too many. */
  readonly complete: number;
}

const smallest = 1e-12;
const mostCopies = 10_000;

/**
 * Sorts tracer by the delay it has passed: one copy of the network per total delay, delayed nodes cut open.
 * @param horizon s; what comes later is left out
 * @param rough   part of the tracer: on its way through a delay, what is not less than this at `height` is taken apart, and so is
 *                what is undispersed; the others make the rest
 * @param height  1/s, far from 0: where smooth tracer has died out
 */
export function passes(
  plant: Plant,
  passing: readonly Passing[],
  entry: Entry,
  horizon: number,
  rough: number,
  height: Complex,
): Passes {
  const n = passing.length;
  const into = adjacency(n, plant.to);
  const equations = cutEquations(plant, passing);
  const late = passing.flatMap(({ delay }, i) => (delay > 0 ? [i] : []));
  const copies: Copy[] = [];
  let slots = 0;
  const slotDirect: number[] = [];
  const slotSmooth: number[] = [];
  const rest: Seed[] = [];
  const spread = spreading(plant, passing, into, height);
  const waiting: { delay: number; seeds: Seed[] }[] = [{ delay: 0, seeds: [] }];
  while (waiting.length > 0) {
    if (copies.length >= mostCopies) return { copies, rest, slots, truncated: true, complete: waiting[0].delay };
    const { delay, seeds: all } = waiting.shift() as (typeof waiting)[number];
    const seeds: Seed[] = [];
    for (const seed of all) {
      const through = plant.nodes[seed.node].inflow;
      const split = slotDirect[seed.slot] * through > smallest || spread.size(seed.slot) * through >= rough;
      (split ? seeds : rest).push(seed);
    }
    if (copies.length > 0 && seeds.length === 0) continue;
    const put = copies.length === 0 ? putIn(plant.columns.inflow, entry) : [];
    const direct = new Float64Array(n);
    const smooth = new Float64Array(n);
    for (const [node, c] of put) if (passing[node].delay === 0) direct[node] += c * passing[node].direct;
    for (const { node, slot } of seeds) direct[node] += slotDirect[slot];
    equations.direct(direct);
    const enteringDirect = entering(plant, into, direct);
    for (const [node, c] of put) enteringDirect[node] += c;
    for (let i = 0; i < n; i++) {
      if (passing[i].delay === 0)
        smooth[i] += enteringDirect[i] * (plant.nodes[i].inflow > 0 ? 1 - passing[i].direct : 0);
    }
    for (const { node, slot } of seeds) smooth[node] += slotSmooth[slot];
    equations.all(smooth);
    const enteringSmooth = entering(plant, into, smooth);
    spread.copy(seeds, enteringDirect);
    const exits: { node: number; slot: number | undefined }[] = [];
    for (const node of late) {
      const through = (enteringDirect[node] + enteringSmooth[node]) * plant.nodes[node].inflow;
      if (through === 0) continue;
      const then = delay + passing[node].delay;
      if (then > horizon * (1 + sameTime) || through < smallest) {
        exits.push({ node, slot: undefined });
        continue;
      }
      const seed = arrive(waiting, then, node, slots);
      if (seed.slot === slots) {
        slots++;
        slotDirect.push(0);
        slotSmooth.push(0);
      }
      exits.push({ node, slot: seed.slot });
      const { direct: share } = passing[node];
      slotDirect[seed.slot] += enteringDirect[node] * share;
      spread.leave(node, seed.slot, enteringDirect[node]);
      slotSmooth[seed.slot] += enteringSmooth[node] + enteringDirect[node] * (1 - share);
    }
    copies.push({ delay, seeds, exits, direct, enteringDirect, smooth });
  }
  return { copies, rest, slots, truncated: false, complete: Number.POSITIVE_INFINITY };
}

/** What the dispersed part of every slot is at one s, found along with the copies. */
function spreading(plant: Plant, passing: readonly Passing[], into: Adjacency, s: Complex) {
  const n = passing.length;
  const gains = passing.map((p) => p.spread(s));
  const equations = new NodeEquations(plant);
  for (let i = 0; i < n; i++) {
    equations.gainRe[i] = passing[i].delay > 0 ? 0 : gains[i].re + passing[i].direct;
    equations.gainIm[i] = passing[i].delay > 0 ? 0 : gains[i].im;
  }
  equations.factor();
  const slots: Complex[] = [];
  let enterRe: Float64Array = new Float64Array(n);
  let enterIm: Float64Array = new Float64Array(n);
  return {
    size: (slot: number): number => complex.size(slots[slot] ?? complex.of(0)),
    copy(seeds: readonly Seed[], enteringDirect: Float64Array): void {
      const [re, im] = [new Float64Array(n), new Float64Array(n)];
      for (let i = 0; i < n; i++) {
        if (passing[i].delay > 0) continue;
        re[i] = gains[i].re * enteringDirect[i];
        im[i] = gains[i].im * enteringDirect[i];
      }
      for (const { node, slot } of seeds) {
        re[node] += slots[slot].re;
        im[node] += slots[slot].im;
      }
      equations.solve(re, im);
      enterRe = entering(plant, into, re);
      enterIm = entering(plant, into, im);
    },
    /** What leaves a delayed node by a slot, from what the copy brings to it. */
    leave(node: number, slot: number, direct: number): void {
      const mean = { re: enterRe[node], im: enterIm[node] };
      const gain = { re: gains[node].re + passing[node].direct, im: gains[node].im };
      const through = complex.add(complex.multiply(gain, mean), complex.scale(gains[node], direct));
      slots[slot] = complex.add(slots[slot] ?? complex.of(0), through);
    },
  };
}

/** The seed of a node at a time, made where there is none; equal times are one. */
function arrive(waiting: { delay: number; seeds: Seed[] }[], delay: number, node: number, slot: number): Seed {
  const near = 1e-12 * delay;
  let at = waiting.findIndex((w) => w.delay >= delay - near);
  if (at < 0) at = waiting.length;
  if (at === waiting.length || waiting[at].delay > delay + near) waiting.splice(at, 0, { delay, seeds: [] });
  const group = waiting[at];
  const known = group.seeds.find((s) => s.node === node);
  if (known) return known;
  const seed = { node, slot, delay: group.delay };
  group.seeds.push(seed);
  return seed;
}

/** The node equations with delayed nodes cut open, for the undispersed part and for all (s = 0), both real. */
function cutEquations(plant: Plant, passing: readonly Passing[]) {
  const imaginary = new Float64Array(passing.length);
  const make = (gainOf: (i: number) => number) => {
    const equations = new NodeEquations(plant);
    for (let i = 0; i < passing.length; i++) equations.gainRe[i] = passing[i].delay > 0 ? 0 : gainOf(i);
    equations.factor();
    return (c: Float64Array): void => equations.solve(c, imaginary.fill(0));
  };
  // Circles of a closed vessel have no end: a slight leak leaves every sum finite, and what is 0 stays 0.
  const passed = isClosed(plant) ? 1 - 1e-6 : 1;
  return { direct: make((i) => passing[i].direct), all: make((i) => (plant.nodes[i].inflow > 0 ? passed : 0)) };
}

/** Mean of what links bring to every node. */
function entering({ from, flow, nodes }: Plant, into: Adjacency, c: Float64Array): Float64Array {
  return c.map((_, i) => {
    let sum = 0;
    for (let e = into.start[i]; e < into.start[i + 1]; e++) sum += flow[into.edges[e]] * c[from[into.edges[e]]];
    return nodes[i].inflow > 0 ? sum / nodes[i].inflow : 0;
  });
}
