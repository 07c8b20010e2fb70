import { extent } from "./extent.js";
import { type Hidden, hiddenAtEnd, hiddenBeside } from "./hidden-tail.js";
import { gather, type TailedRecord } from "./late-window.js";
import { roughness } from "./noise.js";
import { type SlowTail, slowTailOf } from "./slow-tail.js";
import { tailOf } from "./tail.js";

/** What lies under the signal: level + slope * (t - middle), with standard errors (independent at `middle`). SI. */
export interface Baseline {
  readonly level: number;
  readonly slope: number;
  readonly middle: number;
  readonly levelError: number;
  readonly slopeError: number;
  readonly from: "before the injection" | "after the tail" | "before and after" | "under the tail";
  /** True where a drift was asked for and only a constant could be told. */
  readonly driftUnknown: boolean;
  /** The tail that it was fitted together with. */
  readonly tail?: SlowTail;
  /** The tail that it may have taken away or that is lost in noise over it. */
  readonly hidden?: Hidden;
}

/**
 * The baseline from the points before the injection and those after the tail has settled; undefined where there are
 * neither. A constant takes the points before if there are 3, a drift a straight line through both. Where a slow tail
 * still lies over the end of a pulse's record, baseline and tail are fitted together; where none stands out, what the
 * baseline may hide of one is told.
 * @param before how many points lie before the injection
 * @param sd     scatter of one point
 */
export function baselineOf(
  t: Float64Array,
  y: Float64Array,
  before: number,
  sd: number,
  mode: "constant" | "drift",
  isPulse = true,
): Baseline | undefined {
  const plain = plainBaseline(t, y, before, sd, mode);
  if (!isPulse || t.length - before < 20) return plain;
  const late: TailedRecord = { time: t, value: y, before, peak: peakOf(y, before), mode };
  if (plain?.from === "before the injection" && mode === "constant" && isPower(t, y, before, sd, plain.level))
    return plain;
  const scatter = lateScatter(late, sd);
  const joint = slowTailOf(late, scatter);
  // Points before the injection tell a constant better than the end does under a tail that is not seen.
  const settled = plain?.from === "before the injection" && mode === "constant" && (!joint || joint.hidden);
  if (plain && (!joint || settled)) return { ...plain, ...hiddenOver(late, plain, joint, scatter) };
  if (!joint) return undefined;
  return {
    level: joint.offset,
    slope: joint.drift,
    middle: joint.middle,
    levelError: Math.sqrt(joint.covariance[0]),
    slopeError: Math.sqrt(joint.covariance[5]),
    from: "under the tail",
    driftUnknown: false,
    tail: joint,
    ...(joint.hidden ? { hidden: joint.hidden } : {}),
  };
}

/** What may be hidden over a baseline drawn as if there were no slow tail. */
function hiddenOver(
  record: TailedRecord,
  plain: Baseline,
  joint: SlowTail | undefined,
  scatter: number,
): { hidden?: Hidden } {
  const known = plain.from === "before the injection";
  const over: TailedRecord = known
    ? { ...record, mode: "nothing", value: record.value.map((y) => y - plain.level) }
    : { ...record, mode: plain.slope === 0 ? "constant" : "drift" };
  const first = joint ? record.time.findIndex((t) => t >= joint.from) : 0;
  const hidden = joint ? hiddenBeside(over, gather(over, first), joint.rates, scatter) : hiddenAtEnd(over, scatter);
  return hidden ? { hidden } : {};
}

/** A power law over a constant would be taken for slow decays and be cut off where they end. */
function isPower(t: Float64Array, y: Float64Array, before: number, sd: number, level: number): boolean {
  const value = y.subarray(before).map((v) => v - level);
  return tailOf(t.subarray(before), value, new Float64Array(value.length).fill(sd)).is === "power";
}

/** A straight line or a constant, as if nothing but noise lay over it. */
function plainBaseline(
  t: Float64Array,
  y: Float64Array,
  before: number,
  sd: number,
  mode: "constant" | "drift",
): Baseline | undefined {
  const early = range(0, before);
  const end = lastTwentieth(y, before);
  if (mode === "drift" && early.length >= 2 && end.length > 0) {
    const through = line(t, y, [...early, ...end], sd);
    if (isLevel(t, y, end, before, sd, through.slope)) return through;
  }
  const late = end.length > 0 && isLevel(t, y, end, before, sd, 0) ? end : [];
  const use = early.length >= 3 || (early.length > 0 && late.length === 0) ? early : late;
  if (use.length === 0) return undefined;
  const level = use.reduce((sum, i) => sum + y[i], 0) / use.length;
  return {
    level,
    slope: 0,
    middle: 0,
    levelError: sd / Math.sqrt(use.length),
    slopeError: 0,
    from: use === early ? "before the injection" : "after the tail",
    driftUnknown: mode === "drift",
  };
}

function peakOf(y: Float64Array, before: number): number {
  let peak = before;
  for (let i = before; i < y.length; i++) if (y[i] > y[peak]) peak = i;
  return peak;
}

/** Scatter of the last third after the peak; sharp fronts make that of a whole curve look larger. */
function lateScatter({ time, value, peak }: TailedRecord, sd: number): number {
  const from = time.length - Math.max(12, Math.floor((time.length - peak) / 3));
  return (from > peak && roughness(time.subarray(from), value.subarray(from))) || sd;
}

/** The value of a baseline at time t. */
export const baselineAt = (b: Baseline, t: number): number => b.level + b.slope * (t - b.middle);

/** The last points, 3 at least; none where the record is too short to spare them. */
function lastTwentieth(y: Float64Array, before: number): number[] {
  const n = y.length;
  const size = Math.max(3, Math.floor(n / 20));
  return n - before < 4 * size ? [] : range(n - size, n);
}

/** Does the end follow a line of this slope? From the points before it to it, the mean falls as the line does. */
function isLevel(
  t: Float64Array,
  y: Float64Array,
  end: readonly number[],
  before: number,
  sd: number,
  slope: number,
): boolean {
  const size = end.length;
  const earlier = end.map((i) => i - size);
  const mean = (values: Float64Array, use: readonly number[]): number =>
    use.reduce((sum, i) => sum + values[i], 0) / size;
  const fall = mean(y, end) - mean(y, earlier) - slope * (mean(t, end) - mean(t, earlier));
  const [low, high] = extent(y.subarray(before));
  return Math.abs(fall) <= Math.max(2 * sd * Math.sqrt(2 / size), 1e-3 * (high - low));
}

function line(t: Float64Array, y: Float64Array, use: readonly number[], sd: number): Baseline {
  const n = use.length;
  const middle = use.reduce((sum, i) => sum + t[i], 0) / n;
  const level = use.reduce((sum, i) => sum + y[i], 0) / n;
  const wide = use.reduce((sum, i) => sum + (t[i] - middle) ** 2, 0);
  const slope = use.reduce((sum, i) => sum + (t[i] - middle) * (y[i] - level), 0) / wide;
  return {
    level,
    slope,
    middle,
    levelError: sd / Math.sqrt(n),
    slopeError: sd / Math.sqrt(wide),
    from: "before and after",
    driftUnknown: false,
  };
}

const range = (from: number, to: number): number[] =>
  Array.from({ length: Math.max(0, to - from) }, (_, i) => from + i);
