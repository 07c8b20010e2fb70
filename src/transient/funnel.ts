import type { Plant } from "../compile/plant.js";
import type { Duty, FeedCourse, Reported } from "../model/duty.js";
import type { Value } from "../model/value.js";
import { smooth } from "./beyond.js";
import { changes } from "./course-line.js";
import { endOf } from "./in-time.js";
import { type Look, transient } from "./transient.js";

/** How high an upset may be for how long, so that what leaves just comes to a limit: a limit curve, or funnel. */
export interface Funnel {
  /** The feed and species that are upset. */
  readonly feed: string;
  readonly species: string;
  readonly line: Reported;
  /** What is fed before, SI. */
  readonly before: number;
  /** 1: upsets upwards; -1: downwards. */
  readonly way: 1 | -1;
  readonly points: readonly FunnelPoint[];
  /** Was the answer to a step enough, since heights only scale it? */
  readonly linear: boolean;
}

export interface FunnelPoint {
  /** s */
  readonly lasting: number;
  /** What may be fed for so long, SI; undefined where no height is too much. */
  readonly level: number | undefined;
}

/** Why there is no curve. */
export type FunnelFault =
  | "no-upset"
  | "not-an-upset-of-a-feed"
  | "several-upsets"
  | "no-limit"
  | "beyond-already"
  | "stopped";

const rough = { relative: 1e-7, absolute: 1e-10, balance: false };
/** Lengths of upsets, from and to parts of the mean time, evenly in their logarithm. */
const [shortest, longest, count] = [0.01, 4, 13];
/** Heights beyond so many times what is fed are no upset any more. */
const most = 1e4;
/** How near the peak must come to the limit, as a part of how far it is. */
const near = 1e-6;

/**
 * The limit curve for the one upset of a duty and its first line `time A at product above ...`. Where answers scale with the
 * height, peak(d) = height times the largest F(t) - F(t - d), F the answer to a step; elsewhere every length is followed through the
 * whole network at the heights that a search (regula falsi) asks for.
 * @param lengths s; default: 13 from 0.01 to 4 mean times
 */
export function funnelOf(plant: Plant, duty: Duty, lengths?: readonly number[]): Funnel | FunnelFault {
  const upsets = [...duty.feeds].flatMap(([feed, { species, courses }]) =>
    [...(courses ?? [])].flatMap(([of, course]) => (course.is === "upset" ? [{ feed, of, course, species }] : [])),
  );
  if (upsets.length === 0) return changes(duty) ? "not-an-upset-of-a-feed" : "no-upset";
  if (upsets.length > 1) return "several-upsets";
  const line = duty.report.find((l) => l.what === "time-beyond" && (l.of !== "" || duty.heat !== undefined));
  if (!line?.limit) return "no-limit";
  const [{ feed, of, course, species }] = upsets;
  const before = species.get(of)?.value.of([]) ?? 0;
  const way = course.to.of([]) >= before ? 1 : -1;
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const mean = plant.volume.active / flow;
  const asked =
    lengths ?? Array.from({ length: count }, (_, k) => mean * shortest * (longest / shortest) ** (k / (count - 1)));
  const bench = benchOf(plant, duty, feed, of, line);
  const limit = line.limit.value.of([]);
  const sign = line.limit.side === "above" ? 1 : -1;
  const still = bench.run(before, undefined);
  if (!still) return "stopped";
  const base = sign * (still.last - limit);
  if (!(base < 0)) return "beyond-already";
  const unit = before > 0 ? before / 2 : Math.abs(course.to.of([]) - before);
  const [once, half] = [bench.run(before + way * unit, undefined), bench.run(before + (way * unit) / 2, undefined)];
  if (!once || !half) return "stopped";
  const linear = scales(once, half, still.last);
  const points = asked.map((lasting): FunnelPoint => {
    const cap = way > 0 ? most * Math.max(before, unit) : before;
    const gain = sign * peakOfStep(once, lasting, sign, still.last);
    const guess = gain > 0 ? (-base / gain) * unit : Number.POSITIVE_INFINITY;
    if (linear) return { lasting, level: guess <= cap ? before + way * guess : undefined };
    const over = (height: number): number => {
      const run = bench.run(before + way * height, lasting);
      return run ? sign * (peak(run, sign) - limit) : Number.NaN;
    };
    const height = search(over, base, Math.min(guess, cap), cap);
    return { lasting, level: height === undefined ? undefined : before + way * height };
  });
  return { feed, species: of, line, before, way, points, linear };
}

interface Answer {
  readonly look: Look;
  readonly end: number;
  readonly size: number;
  readonly component: number;
  readonly last: number;
}

/** Runs the duty with the upset at any height and length. */
function benchOf(plant: Plant, duty: Duty, feed: string, of: string, line: Reported) {
  return {
    run(level: number, lasting: number | undefined): Answer | undefined {
      const course: FeedCourse = { is: "upset", to: constant(duty, feed, of, level), start: 0, lasting };
      const own = duty.feeds.get(feed);
      if (!own) return undefined;
      const courses = new Map([[of, course]]);
      const upset = { ...duty, feeds: new Map([...duty.feeds, [feed, { ...own, courses }]]) };
      const end = endOf(plant, upset);
      const run = transient(plant, duty.chemistry, upset, [0, end], { ...rough, at: [line.at ?? ""] });
      if (run.stopped) return undefined;
      const component = line.of === "" ? run.species.length : run.species.indexOf(line.of);
      const look = run.look(line.at ?? "");
      const row = new Float64Array(run.species.length + 1);
      look.at(end, row, -1);
      return { look, end, size: row.length, component, last: row[component] };
    },
  };
}

function constant(duty: Duty, feed: string, of: string, level: number): Value {
  const now = duty.feeds.get(feed)?.species.get(of)?.value as Value;
  return { ...now, of: () => level, uses: [], sd: undefined };
}

/** The largest (sign 1) or smallest value that comes. */
function peak({ look, end, size, component }: Answer, sign: number): number {
  const row = new Float64Array(size);
  const at = (t: number, side: number): number => {
    look.at(t, row, side);
    return sign * row[component];
  };
  return sign * largest(smooth(look, end), at);
}

/** The same of the answer to a step, that begins at 0 and is taken back after a time; less what there was before. */
function peakOfStep({ look, end, size, component }: Answer, lasting: number, sign: number, base: number): number {
  const row = new Float64Array(size);
  const step = (t: number, side: number): number => {
    if (t < 0) return 0;
    look.at(Math.min(t, end), row, side);
    return row[component] - base;
  };
  const marks = smooth(look, end).flatMap(({ from, to }) => [from, to, from + lasting, to + lasting]);
  const all = [...new Set(marks)].sort((a, b) => a - b);
  const pieces = all.slice(1).map((to, k) => ({ from: all[k], to }));
  return sign * largest(pieces, (t, side) => sign * (step(t, side) - step(t - lasting, side)));
}

const parts = 8;

/** The largest value over smooth pieces: sampled, then narrowed down about the best. */
function largest(
  pieces: readonly { readonly from: number; readonly to: number }[],
  at: (t: number, side: number) => number,
): number {
  let best = Number.NEGATIVE_INFINITY;
  let [low, high] = [0, 0];
  for (const { from, to } of pieces) {
    for (let k = 0; k <= parts; k++) {
      const t = k === parts ? to : from + ((to - from) * k) / parts;
      const value = at(t, k === parts ? -1 : 1);
      if (!(value > best)) continue;
      best = value;
      low = Math.max(from, t - (to - from) / parts);
      high = Math.min(to, t + (to - from) / parts);
    }
  }
  for (let k = 0; k < 40 && high - low > 1e-12 * high; k++) {
    const [a, b] = [low + 0.382 * (high - low), low + 0.618 * (high - low)];
    const [fa, fb] = [at(a, 1), at(b, 1)];
    best = Math.max(best, fa, fb);
    if (fa > fb) high = b;
    else low = a;
  }
  return best;
}

/** Is the answer to half the step half the answer? */
function scales(once: Answer, half: Answer, base: number): boolean {
  const [a, b] = [new Float64Array(once.size), new Float64Array(half.size)];
  let [size, apart] = [0, 0];
  for (let k = 0; k <= 40; k++) {
    const t = (once.end * k) / 40;
    once.look.at(t, a);
    half.look.at(t, b);
    const [whole, part] = [a[once.component] - base, b[half.component] - base];
    size = Math.max(size, Math.abs(whole));
    apart = Math.max(apart, Math.abs(whole - 2 * part));
  }
  return apart <= 1e-6 * size;
}

/** Where what is over a limit crosses 0, from below at 0; undefined where it does not up to `cap`. */
function search(over: (height: number) => number, base: number, guess: number, cap: number): number | undefined {
  let [low, fLow] = [0, base];
  let high = guess;
  let fHigh = over(high);
  while (fHigh < 0 && high < cap) {
    [low, fLow] = [high, fHigh];
    high = Math.min(cap, 3 * high);
    fHigh = over(high);
  }
  if (!(fHigh >= 0)) return undefined;
  for (let k = 0; k < 40 && Math.abs(fHigh) > near * Math.abs(base); k++) {
    const next = low - (fLow * (high - low)) / (fHigh - fLow);
    const f = over(next);
    if (!Number.isFinite(f)) return undefined;
    if (Math.abs(f) <= near * Math.abs(base)) return next;
    // Illinois: the end that stays counts half.
    if (f < 0) {
      [low, fLow] = [next, f];
      fHigh /= 2;
    } else {
      [high, fHigh] = [next, f];
      fLow /= 2;
    }
  }
  return high;
}
