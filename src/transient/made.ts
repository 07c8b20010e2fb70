import { gaussLegendre } from "../numerics/gauss-legendre.js";
import type { Kinetics } from "../reaction/kinetics.js";
import { staysBeyond } from "./parcels.js";
import type { Path } from "./path.js";
import type { Pieces } from "./pieces.js";
import type { Run } from "./run.js";
import { Sampled } from "./sampled.js";
import { trajectories } from "./trajectory.js";

const { point, weight } = gaussLegendre(12);

/**
 * What reaction makes in a body of parcels from 0 to the end of a run, by component (scaled concentration times m3): the rates
 * along the way of every parcel, by what of it is still inside. It asks nothing of what leaves or is held, so that a balance with
 * it can fail. Undefined where a parcel could not be followed.
 */
export function madeOnTheWay(run: Run, node: number): Float64Array | undefined {
  const { scene, horizon, start } = run.ask;
  const { width } = scene;
  const { cell } = scene.at(node);
  const sum = new Float64Array(width);
  if (cell.numbers.length === 0) return sum;
  const body = scene.follow[node];
  const stays = body?.is === "parcels" ? body.stays : undefined;
  const path = run.path(node);
  /** Share of what entered that is still inside once x volumes have been displaced. */
  const inside = (x: number): number => (!stays ? (x < 1 ? 1 : 0) : x < stays.from ? 1 : stays.washout(x));
  const marks = stays ? [...(stays.from > 0 ? [stays.from] : []), ...stays.marks] : [1];
  const follow = trajectories(cell, run.basis);
  const rates = ratesAlong(cell);
  const counting: Counting = { path, marks, inside, horizon, rates, width };
  const inlet = run.entering(node);
  const mixture = new Float64Array(width);
  let last: { mixture: Float64Array; way: Pieces } | undefined;
  const wayOf = (entering: Float64Array, until: number): Pieces | undefined => {
    if (last && last.way.end >= until && last.mixture.every((x, i) => x === entering[i])) return last.way;
    const way = follow(entering, until);
    last = way && { mixture: entering.slice(), way };
    return way;
  };
  // What enters meanwhile, by when it does.
  // It leaves at an end, or where flows turn, if it entered then.
  const turns = [...scene.course.knots, horizon].map((t) => path.entered(t, marks[0]));
  const breaks = [...run.entries(node), ...turns].filter((t) => t >= 0);
  let good = true;
  const entered = new Sampled(
    run.basis,
    width,
    {
      unit: path.mean,
      breaks: breaks.sort((a, b) => a - b),
      longest: (t) => Math.max(1e-6 * path.mean, Math.min(inlet.pace(t, 4) - t, Math.max(path.mean / 4, t / 4))),
      evaluate(t, side, out) {
        out.fill(0);
        if (!(t < horizon)) return true;
        inlet.read(t, side, mixture, 0);
        const until = Math.min(horizon, path.leaves(t, marks[marks.length - 1])) - t;
        const way = wayOf(mixture, until);
        if (!way) {
          good = false;
          return false;
        }
        along(counting, way, t, until, out);
        return true;
      },
    },
    undefined,
  );
  entered.integral(horizon, sum, (t, side) => path.flow(t, side));
  // What was there at 0.
  const before = new Float64Array(width);
  if (start.is === "contents") {
    const way = follow(start.holding(node), horizon);
    if (!way) return undefined;
    const rest = (t: number): number => {
      const x = path.displaced(0, t);
      return stays ? staysBeyond(stays, x) : Math.max(0, 1 - x);
    };
    const stops = [0, ...marks.map((x) => path.leaves(0, x)), ...scene.course.knots, horizon];
    over(cut(stops, way, 0, horizon), (t, w) => rates(way, t, w * rest(t), before));
  } else {
    const oldest = marks[marks.length - 1];
    const way = follow(run.enteringBefore(node), horizon - path.entered(0, oldest));
    if (!way) return undefined;
    addOlder(counting, way, before);
  }
  for (let i = 0; i < width; i++) sum[i] += path.volume * before[i];
  return good ? sum : undefined;
}

interface Counting {
  readonly path: Path;
  readonly marks: readonly number[];
  readonly inside: (x: number) => number;
  readonly horizon: number;
  readonly rates: (way: Pieces, age: number, factor: number, sum: Float64Array) => void;
  readonly width: number;
}

/** Adds, per m3 that entered at a time, what becomes of it up to an age. */
function along(
  { path, marks, inside, rates }: Counting,
  way: Pieces,
  t: number,
  until: number,
  sum: Float64Array,
): void {
  const kinks = path.course.knots.length > 0 ? Array.from(path.course.knots, (k) => k - t) : [];
  const stops = [0, ...marks.map((x) => path.leaves(t, x) - t), ...kinks, until];
  over(cut(stops, way, 0, until), (age, w) => {
    const share = inside(path.displaced(t, t + age));
    if (share > 0) rates(way, age, w * share, sum);
  });
}

/** Adds what is made of what had entered before 0, all alike, over the volume: place by place, x volumes behind the inlet at 0. */
function addOlder({ path, marks, inside, horizon, rates }: Counting, way: Pieces, sum: Float64Array): void {
  const most = path.displaced(0, horizon);
  const turns = [...path.course.knots].map((t) => marks[0] - path.displaced(0, t));
  const ends = [0, ...marks, ...turns, ...marks.map((x) => x - most), ...(marks.length > 1 ? fineBelow(marks[0]) : [])];
  const last = marks[marks.length - 1];
  over(cut(ends, undefined, 0, last), (x, w) => {
    const old = -path.entered(0, x);
    const stops = [0, ...marks.map((m) => path.leaves(0, Math.max(0, m - x))), ...path.course.knots, horizon];
    over(cut(stops, way, old, horizon), (t, v) => {
      const share = inside(x + path.displaced(0, t));
      if (share > 0) rates(way, old + t, w * v * share, sum);
    });
  });
}

const fineBelow = (x: number): number[] => Array.from({ length: 14 }, (_, k) => x * 4 ** -(k + 1));

/** Stretches from 0 to an end without a kink inside: between the stops, and between the pieces of a way from an age on. */
function cut(stops: readonly number[], way: Pieces | undefined, from: number, to: number): number[] {
  const all = [...stops];
  if (way)
    for (let t = from; t < from + to; ) {
      t = way.pace(t, 1);
      all.push(t - from);
    }
  const inside = all.filter((t) => t >= 0 && t <= to).sort((a, b) => a - b);
  return inside.filter((t, k) => k === 0 || t - inside[k - 1] > 1e-14 * to);
}

function over(cuts: readonly number[], at: (x: number, w: number) => void): void {
  for (let c = 1; c < cuts.length; c++) {
    const half = (cuts[c] - cuts[c - 1]) / 2;
    for (let g = 0; g < point.length; g++) at(cuts[c - 1] + half * (1 + point[g]), half * weight[g]);
  }
}

function ratesAlong(kinetics: Kinetics): Counting["rates"] {
  const y = new Float64Array(kinetics.size);
  const made = new Float64Array(kinetics.size);
  return (way, age, factor, sum) => {
    way.read(age, 1, y, 0);
    kinetics.production(y, 0, made, 0);
    for (let i = 0; i < sum.length; i++) sum[i] += factor * made[i];
  };
}
