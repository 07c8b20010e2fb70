import type { Plant } from "../compile/plant.js";
import { type Conserved, imbalance } from "../reaction/conserved.js";
import { passTube } from "../reaction/tube.js";
import { madeOnTheWay } from "./made.js";
import type { Run } from "./run.js";
import { Sampled } from "./sampled.js";
import type { Signal } from "./signal.js";

/** What became of everything between 0 and the end, by component; scaled concentration times m3. */
export interface Amounts {
  readonly fed: Float64Array;
  readonly left: Float64Array;
  readonly made: Float64Array;
  /** Held at 0 and at the end. */
  readonly before: Float64Array;
  readonly held: Float64Array;
}

/** Counts what was fed, what left, what is held and what reaction made. */
export function amountsOf(run: Run, plant: Plant): Amounts {
  const { scene, horizon, feeds } = run.ask;
  const { width, follow, sort, course } = scene;
  // Steady flows stay out of the integrals: amounts then add up to the last digit.
  const passed = (signal: Signal, node: number): number => {
    if (course.constant) {
      signal.integral(horizon, one);
      return course.through(node, 0);
    }
    signal.integral(horizon, one, (t, side) => course.through(node, t, side));
    return 1;
  };
  const sums = (): Float64Array => new Float64Array(width);
  const [fed, left, made, before, held, one] = [sums(), sums(), sums(), sums(), sums(), sums()];
  const add = (to: Float64Array, factor: number): void => {
    for (let i = 0; i < width; i++) to[i] += factor * one[i];
  };
  for (let k = 0; k < feeds.length; k++) add(fed, passed(feeds[k], sort.length + k));
  for (const { node, flow } of plant.outlets) {
    if (!(flow > 0)) continue;
    add(left, passed(run.signal(node), node));
  }
  // What leaves gives off what it warms feeds by.
  for (const { from, feed, gain } of scene.warmings) {
    const flow = gain * plant.feeds[feed].flow;
    run.signal(from).integral(horizon, one);
    left[width - 1] -= flow * one[width - 1];
    feeds[feed].integral(horizon, one);
    left[width - 1] += flow * one[width - 1];
  }
  for (const { stage, run: of, first } of run.stages) {
    for (let i = 0; i < width; i++) made[i] += of.made[i];
    stage.held.forEach((_, body) => {
      stage.addHeld(body, first, before);
      stage.addHeld(body, of.state, held);
    });
  }
  for (let node = 0; node < sort.length; node++) {
    const body = follow[node];
    if (body?.is !== "parcels" || sort[node] === "joint" || sort[node] === "none") continue;
    const { volume } = body;
    const inside = body.stays ? apartIn(run, node) : parcelsIn(run, node);
    for (let i = 0; i < width; i++) {
      before[i] += volume * inside.before[i];
      held[i] += volume * inside.now[i];
    }
    const onTheWay = madeOnTheWay(run, node);
    for (let i = 0; i < width; i++) made[i] += onTheWay ? onTheWay[i] : Number.NaN;
  }
  return { fed, left, made, before, held };
}

/** What a body of parcels that stay apart holds at 0 and at the end, over its volume. */
function apartIn(run: Run, node: number): { before: Float64Array; now: Float64Array } {
  const inside = (t: number): Float64Array => {
    const mixture = new Float64Array(run.ask.scene.width);
    run.inside(node, t, mixture);
    return mixture;
  };
  return { before: inside(0), now: inside(run.ask.horizon) };
}

/** What a tube holds at 0 and at the end, over its volume: every parcel by when it entered. */
function parcelsIn(run: Run, node: number): { before: Float64Array; now: Float64Array } {
  const { scene, horizon, start } = run.ask;
  const path = run.path(node);
  const kinetics = scene.at(node).tube;
  const inlet = run.entering(node);
  const inside = (at: number): Float64Array => {
    const sum = new Float64Array(scene.width);
    // From the inlet, 0, to the outlet, 1; what was there at the start has reacted since then only.
    const profile = new Sampled(
      run.basis,
      scene.width,
      {
        unit: 1,
        breaks: run.breaksWithin(node, at).map((t) => path.displaced(t, at)),
        longest: (x) => 1 - x || 1,
        evaluate(x, side, out) {
          const entered = path.entered(at, Math.min(x, 1));
          const old = entered < 0 || (side > 0 && entered <= 2e-12 * at);
          if (old && start.is === "contents") {
            out.set(start.holding(node));
            return !(at > 0) || passTube(kinetics, at, out);
          }
          inlet.read(entered, -side, out, 0);
          const age = at - entered;
          return !(age > 0) || passTube(kinetics, age, out);
        },
      },
      undefined,
    );
    profile.integral(1, sum);
    return sum;
  };
  return { before: inside(0), now: inside(horizon) };
}

/** How well amounts close, by component: as a share of the largest of them. */
export function closureOf({ fed, left, made, before, held }: Amounts): Float64Array {
  return fed.map((f, i) => {
    const size = Math.max(f + before[i], left[i] + held[i], Math.abs(made[i]));
    // What could not be counted stays unknown.
    return size === 0 ? 0 : (f + before[i] + made[i] - left[i] - held[i]) / size;
  });
}

/** The same of sums that no reaction changes. */
export const conservedClosure = (of: Conserved, { fed, left, before, held }: Amounts): number =>
  imbalance(
    of,
    fed.map((x, i) => x + before[i]),
    left.map((x, i) => x + held[i]),
  );
