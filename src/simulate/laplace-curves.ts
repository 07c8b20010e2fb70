import type { Plant } from "../compile/plant.js";
import { invert, type Transforms, type Wanted } from "../numerics/inversion.js";
import type { Passing } from "./laplace-gain.js";
import type { Passes } from "./laplace-passes.js";
import type { PassesSlope } from "./laplace-passes-slope.js";
import { type Channel, transformsOf } from "./laplace-transforms.js";
import { type Drive, since } from "./linear-system.js";
import type { Seen } from "./respond.js";

/** Nodes per window where the rest is tried, and nodes times copies. */
const trialNodes = 6_000;
const trialWork = 1_500_000;
/** The same where there is no other way. */
const mostNodes = 400_000;
const mostWork = 3_000_000;
/** The same where nothing was taken apart by delay: that one curve is all that is asked. */
const mostWorkWhole = 24_000_000;
/** In mean times: what is asked at the very moment of a jump is told by what it is this soon after it; a slope in time, this soon. */
const soon = 4 ** -50;
const soonSlope = 4 ** -10;
/** Two node counts of a derivative; a fit needs no more of it. */
const slopeAgreement = 1e-8;
/** 1 over mean times: where a transform shows how a curve begins. */
const beginning = 1e16;
/** Ever farther out, evenly: where a transform shows what a curve begins with, also one that begins as a small power of time. */
const farthest = [1e100, 1e120, 1e140] as const;
/** The same where it shows how large a curve is. */
const middles = [0.1, 0.5, 2, 8] as const;

/** One curve: what leaves a node (seen with a lag), or all that is held. */
export interface Curve {
  readonly node: number | undefined;
  readonly lag: number;
  readonly times: Float64Array;
  readonly integral: boolean;
}

/** A direction in which curves move: their copies, and of each curve its line (s per unit of t). */
export interface Along {
  /** Undefined where the plant stays. */
  readonly slope: PassesSlope | undefined;
  /** True where the plant has no derivative. */
  readonly gone: boolean;
  readonly delay: readonly number[];
  readonly lag: readonly number[];
  /** By curve: its derivative, to be added to. */
  readonly sums: readonly Float64Array[];
}

/** A plant whose tracer is sorted by delay. */
export interface Sorted {
  readonly plant: Plant;
  /** s */
  readonly unit: number;
  readonly passing: readonly Passing[];
  readonly sorted: Passes;
  /** Integral over all time of what leaves a node, per unit put in. */
  readonly doses: Float64Array;
}

/**
 * Adds what the copies make of a drive, or the rest behind them (the rest as a trial), and its derivatives: that of a curve
 * behind a delay d is that of the curve, and -d(delay)/dt times its slope in time; at a jump from the right.
 */
export function addParts(
  { plant, unit, passing, sorted, doses }: Sorted,
  seen: readonly Seen[],
  drive: Drive,
  curves: readonly Curve[],
  behind: boolean,
  moves: readonly Along[],
): { difference: number; settled: boolean } {
  const { copies, rest } = sorted;
  const impulses = impulsesOf(drive);
  const channels: Channel[] = [];
  curves.forEach(({ node, lag }) => {
    for (const copy of behind ? [copies.length] : copies.keys()) channels.push({ copy, node, lag });
  });
  const perCurve = behind ? 1 : copies.length;
  const curveOf = channels.map((_, p) => Math.floor(p / perCurve));
  const along = moves.map(({ slope, lag }) => ({ slope, lag: curveOf.map((c) => lag[c]) }));
  const bare = transformsOf(plant, passing, sorted, channels, along);
  const delays = moves.map(({ slope, delay }) =>
    channels.map(({ copy }, p) => (slope?.delays[copy] ?? 0) + delay[curveOf[p]]),
  );
  const late = impulses.some(({ power }) => power === 0) && delays.some((d) => d.some((x) => x !== 0));
  const transforms = late ? withSlopes(bare, channels.length, beginning / unit) : bare;
  const sizes = moves.length > 0 ? sizesOf(bare, channels, curveOf, unit) : undefined;
  const begun = begins(bare, channels.length, unit);
  const wanted: Wanted[] = [];
  const add: ((values: Float64Array) => void)[] = [];
  channels.forEach(({ copy, node, lag }, p) => {
    const c = curveOf[p];
    const { times, integral } = curves[c];
    const dose = node === undefined ? unit : doses[node];
    const { delay } = copies[copy] ?? rest[0];
    const direct = node === undefined ? 0 : (copies[copy]?.direct[node] ?? 0);
    const smooth =
      node === undefined || copy === copies.length || copies[copy].smooth[node] > 0 || (lag > 0 && direct > 0);
    for (const { power, shift, factor } of impulses) {
      const after = times.map((t) => since(t, delay + shift));
      const due = [...after.keys()].filter((i) => after[i] >= 0);
      const ask = (transform: number, order: number, scale: number, group: number, take: Take) => {
        if (!smooth || due.length === 0) return;
        wanted.push({
          transform,
          power: order,
          times: Float64Array.from(due, (i) => Math.max(after[i], (group === slopesInTime ? soonSlope : soon) * unit)),
          scale,
          group: 8 * (curves.length * group + c) + order,
          ...(group === 0 ? {} : { agreement: slopeAgreement }),
        });
        add.push((values) => {
          due.forEach((i, k) => {
            const first = group === 0 && order === 0 && after[i] <= soon * unit ? begun()[transform] : undefined;
            take(i, factor * (first ?? values[k]));
          });
        });
      };
      const into =
        (sum: Float64Array): Take =>
        (i, v) => {
          sum[i] += v;
        };
      const usual = (order: number): number => (dose / unit) * unit ** order * (order === 0 ? 0.1 : 1);
      for (const more of integral ? [0, 1] : [0]) {
        const order = power + more;
        const sum = more === 0 ? seen[c].value : seen[c].integral;
        if (lag === 0 && direct > 0 && order > 0) {
          for (const i of due) sum[i] += factor * direct * risen(order, after[i]);
        }
        ask(p, order, usual(order), 0, into(sum));
      }
      moves.forEach(({ slope, sums }, d) => {
        const own = slope?.direct[copy]?.[node ?? 0] ?? 0;
        const later = delays[d][p];
        if (lag === 0 && power > 0) {
          for (const i of due)
            sums[c][i] += factor * (own * risen(power, after[i]) - later * direct * risen(power - 1, after[i]));
        }
        const size = (sizes?.[d][c] ?? 0) * usual(power);
        if (size > 0) ask((1 + d) * channels.length + p, power, size, 2 + d, into(sums[c]));
      });
      if (!delays.some((d) => d[p] !== 0)) continue;
      const moveLater = (i: number, v: number): void => {
        for (let d = 0; d < moves.length; d++) moves[d].sums[c][i] -= delays[d][p] * v;
      };
      // Of an instant amount, the slope's transform is s G less what G begins with.
      if (power > 0) ask(p, power - 1, usual(power - 1), slopesInTime, moveLater);
      else ask((1 + moves.length) * channels.length + p, 0, usual(0) / unit, slopesInTime, moveLater);
    }
  });
  const work = copies.length === 1 ? mostWorkWhole : mostWork;
  const most = behind
    ? Math.max(600, Math.min(trialNodes, trialWork / copies.length))
    : Math.max(6_000, Math.min(mostNodes, work / (copies.length * plant.nodes.length)));
  const { values, difference, settled } = invert(transforms, wanted, unit, most, behind);
  values.forEach((v, w) => {
    add[w](v);
  });
  return { difference, settled };
}

/** What becomes of a value, by the index of its time. */
type Take = (i: number, value: number) => void;

/** The group of slopes in time; values are group 0, derivatives follow from 2 on. */
const slopesInTime = 1;

/** A step, a ramp: the integral of so many orders of an instant amount, after it. */
const risen = (order: number, u: number): number => (order === 0 ? 0 : order === 1 ? 1 : order === 2 ? u : (u * u) / 2);

/** Transforms, and behind them s G - lim s G of the first of them: the slopes of what they stand for, after it has begun. */
function withSlopes(of: Transforms, parts: number, large: number): Transforms {
  const { count, at, bound } = of;
  const [re, im] = [new Float64Array(count), new Float64Array(count)];
  at(large, 0, re, im);
  const first = Float64Array.from({ length: parts }, (_, p) => large * re[p]);
  return {
    count: count + parts,
    at(sRe, sIm, re, im) {
      at(sRe, sIm, re, im);
      for (let p = 0; p < parts; p++) {
        re[count + p] = sRe * re[p] - sIm * im[p] - first[p];
        im[count + p] = sRe * im[p] + sIm * re[p];
      }
    },
    ...(bound
      ? {
          bound(damping, sIm, sizes) {
            if (!bound(damping, sIm, sizes)) return false;
            for (let p = 0; p < parts; p++) sizes[count + p] = Math.hypot(damping, sIm) * sizes[p] + first[p];
            return true;
          },
        }
      : {}),
  };
}

/**
 * What the first transforms begin with in time, lim s G, found once when asked for: Aitken's extrapolation of three values is exact
 * where s G falls as a power of s. Undefined where a body cannot tell so far out.
 */
function begins(of: Transforms, parts: number, unit: number): () => readonly (number | undefined)[] {
  let known: (number | undefined)[] | undefined;
  return () => {
    if (known) return known;
    const [a, b, c] = farthest.map((s) => {
      const [re, im] = [new Float64Array(of.count), new Float64Array(of.count)];
      of.at(s / unit, 0, re, im);
      return re.map((g) => (s / unit) * g);
    });
    known = Array.from({ length: parts }, (_, p) => {
      const [before, last] = [b[p] - a[p], c[p] - b[p]];
      const ratio = last / before;
      const more = Math.abs(last) > 1e-12 * Math.abs(c[p]) && ratio > 0 && ratio < 1 ? last / (1 / ratio - 1) : 0;
      const start = c[p] + more;
      if (!Number.isFinite(start)) return undefined;
      return Math.abs(start) > 1e-12 * Math.abs(a[p]) ? start : 0; // what is left of nothing is rounding
    });
    return known;
  };
}

/** By direction and curve: how large its derivative is beside the curve, told by their transforms. */
function sizesOf(
  of: Transforms,
  channels: readonly Channel[],
  curveOf: readonly number[],
  unit: number,
): Float64Array[] {
  const parts = channels.length;
  const curves = (curveOf[parts - 1] ?? -1) + 1;
  const sizes = Array.from({ length: of.count / Math.max(1, parts) - 1 }, () => new Float64Array(curves));
  const [re, im] = [new Float64Array(of.count), new Float64Array(of.count)];
  for (const s of middles) {
    of.at(s / unit, 0, re, im);
    const values = new Float64Array(curves);
    for (let p = 0; p < parts; p++) values[curveOf[p]] += Math.abs(re[p]);
    sizes.forEach((own, d) => {
      const moved = new Float64Array(curves);
      for (let p = 0; p < parts; p++) moved[curveOf[p]] += Math.abs(re[(1 + d) * parts + p]);
      for (let c = 0; c < curves; c++) if (values[c] > 0) own[c] = Math.max(own[c], moved[c] / values[c]);
    });
  }
  return sizes;
}

/** A drive as a sum of instant amounts (power 0), steps (1) and ramps (2), each from a time on. */
function impulsesOf({ amount, times, level, slope }: Drive): { power: number; shift: number; factor: number }[] {
  const impulses = amount === 0 ? [] : [{ power: 0, shift: 0, factor: amount }];
  let [lastLevel, lastSlope] = [0, 0];
  times.forEach((shift, i) => {
    if (i > 0) lastLevel += lastSlope * (shift - times[i - 1]);
    impulses.push({ power: 1, shift, factor: level[i] - lastLevel }, { power: 2, shift, factor: slope[i] - lastSlope });
    [lastLevel, lastSlope] = [level[i], slope[i]];
  });
  return impulses.filter(({ factor }) => factor !== 0);
}
