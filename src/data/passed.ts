import type { Trial } from "../model/trial.js";
import { dimensions } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import type { Baseline } from "./baseline.js";
import type { CleanCurve } from "./clean.js";

/** What has passed a vessel while its flow varied. */
export interface Passed {
  /** m3 (kg where the vessel is on the basis of mass) since the middle of the injection; negative before it. */
  readonly volumes: Float64Array;
  /** The same for when the injection began. */
  readonly start: number;
  /** Mean flow over the record, its least and most there, m3/s. */
  readonly flow: number;
  readonly least: number;
  readonly most: number;
  /** Relative error of all of it, as the flow meters' are declared. */
  readonly unsure: number;
}

/**
 * The volume that has passed by each reading of a curve: integral of the flow, straight between the rows of its logs and level
 * beyond them. Undefined where all flows are steady.
 * @param feeds mean flow of every feed, m3/s; those that are not logged are steady
 */
export function passedBy(trial: Trial, curve: CleanCurve, feeds?: ReadonlyMap<string, number>): Passed | undefined {
  const logs = [...(trial.flowLogs ?? [])];
  if (logs.length === 0 || curve.time.length < 2) return undefined;
  const means = feeds ?? new Map([...trial.flows].map(([name, flow]) => [name, flow.of([])]));
  const steady = [...means].reduce((sum, [name, q]) => sum + (trial.flowLogs?.has(name) ? 0 : q), 0);
  const injection = trial.injections[0];
  const width = injection.form.is === "pulse" ? injection.lasting : 0;
  const zero = injection.start + width / 2;
  const sums = logs.map(([, log]) => integralOf(log.time, log.value));
  const passed = (t: number): number => sums.reduce((sum, by) => sum + by(zero + t) - by(zero), steady * t);
  const n = curve.time.length;
  const span = curve.time[n - 1] - curve.start;
  const relative = (name: string): number => {
    const flow = trial.flows.get(name);
    return flow ? (flow.sd?.([]) ?? 0) / flow.of([]) : 0;
  };
  const value = (passed(curve.time[n - 1]) - passed(curve.start)) / span;
  const error = Math.hypot(...[...means].map(([name, q]) => q * relative(name)));
  const volumes = curve.time.map(passed);
  let [least, most] = [Number.POSITIVE_INFINITY, 0];
  for (let i = 1; i < n; i++) {
    const q = (volumes[i] - volumes[i - 1]) / (curve.time[i] - curve.time[i - 1]);
    if (curve.time[i] > curve.start && Number.isFinite(q)) [least, most] = [Math.min(least, q), Math.max(most, q)];
  }
  return { volumes, start: passed(curve.start), flow: value, least, most, unsure: error / value };
}

/** Integral of a row of points, straight between them and level beyond, from the first point. */
function integralOf(t: Float64Array, y: Float64Array): (at: number) => number {
  const n = t.length;
  const sum = new Float64Array(n);
  for (let i = 1; i < n; i++) sum[i] = sum[i - 1] + ((y[i] + y[i - 1]) / 2) * (t[i] - t[i - 1]);
  return (at) => {
    if (at <= t[0]) return y[0] * (at - t[0]);
    if (at >= t[n - 1]) return sum[n - 1] + y[n - 1] * (at - t[n - 1]);
    let [low, high] = [0, n - 1];
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (t[middle] <= at) low = middle;
      else high = middle;
    }
    const x = (at - t[low]) / (t[high] - t[low]);
    return sum[low] + (t[high] - t[low]) * x * (y[low] + ((y[high] - y[low]) * x) / 2);
  };
}

/**
 * The curve over the volume that has passed in place of time: where all flows rise and fall together, a vessel of constant volume
 * sees volumes (E. B. Nauman, B. A. Buffham, Mixing in Continuous Flow Systems, 1983; from memory).
 * Its tail is told anew, what is under it stays taken off.
 */
export function overVolume(curve: CleanCurve, { volumes, start, flow: q }: Passed): CleanCurve {
  const { baseline, noise, added } = curve;
  return {
    ...curve,
    time: volumes,
    start,
    noise: { ...noise, persistence: { ...noise.persistence, spacing: noise.persistence.spacing * q } },
    baseline: baseline && {
      ...withoutTail(baseline),
      slope: baseline.slope / q,
      middle: baseline.middle * q,
      slopeError: baseline.slopeError / q,
    },
    added: { mean: added.mean * q, variance: added.variance * q ** 2, third: added.third * q ** 3 },
  };
}

function withoutTail({ tail, hidden, ...rest }: Baseline): Baseline {
  return rest;
}

/** In words: between which flows it varied. */
export function flowRange({ least, most, flow }: Passed, volume: Unit, time: Unit): string {
  const unit: Unit = {
    name: `${volume.name}/${time.name}`,
    factor: volume.factor / time.factor,
    offset: 0,
    dimension: dimensions.flow,
  };
  const show = (q: number): string => formatQuantity(q, unit, 3);
  return `between ${show(least)} and ${show(most)}, ${show(flow)} on average over the record`;
}
