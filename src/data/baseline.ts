import { extent } from "./extent.js";
import { roughness } from "./noise.js";
import { hiddenLevel, type SlowTail, slowTailOf, type TailedRecord } from "./slow-tail.js";
import { decayMoments, type RawFour } from "./tail.js";

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
  /** The tail that it may have taken away, where it was drawn through the end of the record. */
  readonly hidden?: Hidden;
}

/** A decay with the time constant of the whole record that a baseline would hide. */
export interface Hidden {
  /** At the end, one standard error. */
  readonly level: number;
  /** What was drawn through the end: with the decay it would have taken so much away before it. */
  readonly as: "constant" | "drift";
}

/** Raw moments of what would be missing: beyond the end, and what the baseline took away up to it (from time 0 on). */
export function hiddenMoments({ level, as }: Hidden, end: number): RawFour {
  const beyond = decayMoments(level, 1 / end, end);
  const under = (k: number): number => (level * end ** (k + 1)) / (k + (as === "drift" ? 2 : 1));
  return beyond.map((m, k) => m + under(k)) as unknown as RawFour;
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
  const early = range(0, before);
  const record = isPulse && t.length - before >= 20 && (mode === "drift" || early.length < 3);
  const late: TailedRecord = { time: t, value: y, before, peak: peakOf(y, before), mode };
  const scatter = record ? lateScatter(late, sd) : sd;
  const joint = record ? slowTailOf(late, scatter) : undefined;
  if (joint) {
    return {
      level: joint.offset,
      slope: joint.drift,
      middle: joint.middle,
      levelError: Math.sqrt(joint.covariance[0]),
      slopeError: Math.sqrt(joint.covariance[5]),
      from: "under the tail",
      driftUnknown: false,
      tail: joint,
    };
  }
  const plain = plainBaseline(t, y, before, sd, mode);
  if (!plain || !record || plain.from === "before the injection") return plain;
  const as = plain.from === "after the tail" ? "constant" : "drift";
  const { level, error } = hiddenLevel({ ...late, mode: as }, scatter);
  return { ...plain, hidden: { level: Math.hypot(level, error), as } };
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
