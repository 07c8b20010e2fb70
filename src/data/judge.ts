import { formatNumber, formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import type { CleanCurve } from "./clean.js";
import { extent } from "./extent.js";
import type { Figure, Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { isNoise } from "./noise.js";
import { inflation } from "./persistence.js";
import type { RawMoments, Response } from "./response.js";

const percent = (x: number): string => `${formatNumber(100 * x, 3)} %`;

/** The finding that leaves nothing to compute, if the data are hopeless. */
export function hopeless(curve: CleanCurve): Finding | undefined {
  const value = curve.value.subarray(curve.before);
  const time = curve.time.subarray(curve.before);
  const all = curve.value;
  const [low, high] = extent(all);
  const show = (x: number): string => formatQuantity(x, curve.unit);
  if (high === low) return finding("no-signal", curve.at, `all ${all.length} points are ${show(high)}`);
  const settled = all.length > 0 && curve.before > 0 ? curve.value[0] : 0;
  const peak = extent(value)[1] - Math.min(0, settled);
  const points = value.reduce((n, c) => n + (c > 0.01 * peak ? 1 : 0), 0);
  if (value.length < 5 || points < 3) {
    return finding(
      "few-points",
      curve.at,
      `${value.length} points since the injection, ${points} of them above 1 % of the highest`,
    );
  }
  if (isNoise(time, value)) {
    return finding(
      "only-noise",
      curve.at,
      `readings lie between ${show(low)} and ${show(high)}, no more apart than noise is`,
    );
  }
  return undefined;
}

/** What the ends of a curve say: baseline, early part, tail. `wanted`: was a baseline asked for? */
export function judgeEnds(curve: CleanCurve, response: Response, moments: RawMoments, wanted: boolean): Finding[] {
  const found: Finding[] = [];
  const { at, unit, value, before } = curve;
  if (wanted && !curve.baseline) found.push(finding("baseline-unknown", at, `${before} points before the injection`));
  if (curve.baseline?.driftUnknown) {
    found.push(
      finding(
        "drift-unknown",
        at,
        `constant taken ${curve.baseline.from}: ${formatQuantity(curve.baseline.level, unit)}`,
      ),
    );
  }
  const peak = extent(value)[1];
  if (!wanted && before >= 3 && response.is === "density") {
    const early = value.subarray(0, before);
    const mean = early.reduce((sum, c) => sum + c, 0) / before;
    const own = early.reduce((sum, c) => sum + (c - mean) ** 2, 0) / (before - 1) / before;
    const error = Math.sqrt(own * inflation(curve.noise.persistence.lag1));
    if (Math.abs(mean) > Math.max(3 * error, 0.005 * peak)) {
      found.push(
        finding(
          "baseline-left",
          at,
          `${formatQuantity(mean, unit, 3)} on average before it, ${percent(mean / peak)} of the peak`,
        ),
      );
    }
  }
  if (response.is === "density" && before === 0 && curve.time[0] > curve.start && value[0] > 0.05 * peak) {
    const first = formatQuantity(curve.time[0], curve.timeUnit, 3);
    found.push(
      finding(
        "early-part",
        at,
        `the first point, ${first} after the injection, is at ${percent(value[0] / peak)} of the peak`,
      ),
    );
  }
  const { tail } = response;
  if (tail.is === "open" || tail.is === "power") {
    const share = response.is === "density" ? tail.level / peak : tail.level;
    found.push(
      finding(
        tail.is === "power" ? "tail-power" : "tail-open",
        at,
        `it ends at ${percent(share)} of ${response.is === "density" ? "the peak" : "the step"}`,
      ),
    );
  } else if (moments.tail.area > 0.05 || moments.tail.variance > 0.2) {
    const { area, mean, variance } = moments.tail;
    found.push(
      finding(
        "tail-share",
        at,
        `extrapolated: ${percent(area)} of the area, ${percent(mean)} of the mean, ${percent(variance)} of the variance`,
      ),
    );
  }
  return found;
}

/**
 * Recovery outside 90 to 110 % of what is expected, by more than two of its standard errors where they are known.
 * @param expected share of the tracer that a well-mixed vessel would send this way: 1 at an only outlet
 * @param unseen   the other outlets, which were not measured
 */
export function judgeRecovery(at: string, recovery: Figure, expected = 1, unseen: readonly string[] = []): Finding[] {
  if (recovery.value === undefined) return [];
  const error = recovery.standardError;
  const share = expected === 1 ? "" : `, ${percent(expected)} of the flow leaves here`;
  const others = unseen.length === 0 ? "" : `; not measured: ${unseen.join(", ")}`;
  const evidence = `recovery ${percent(recovery.value)}${!error || error < 1e-3 * recovery.value ? "" : ` ± ${percent(error)}`}${share}${others}`;
  const ratio = recovery.value / expected;
  if (isClose(ratio) || Math.abs(ratio - 1) <= (2 * (error ?? 0)) / expected) return [];
  return [finding(ratio < 1 ? "recovery-low" : "recovery-high", at, evidence)];
}

const isClose = (ratio: number): boolean => ratio >= 0.9 && ratio <= 1.1;

/** What baseline and noise leave open of the moments, by the tail that they may hide. */
export function judgeBaseline(curve: CleanCurve, found: RawMoments, meanError: number): Finding[] {
  const { baseline, at, timeUnit } = curve;
  const { area, mean } = found.doubt;
  const error = formatQuantity(meanError, timeUnit, 2);
  const judged: Finding[] = [];
  const tail = baseline?.tail;
  if (tail && baseline.slope !== 0) {
    const slow = formatQuantity(1 / tail.rate, timeUnit, 3);
    judged.push(finding("tail-with-baseline", at, `time constant of the tail ${slow}; mean ± ${error} with it`));
  }
  if (baseline?.hidden && (area.hidden > 0.01 * found.area || mean.hidden > 0.02 * found.mean)) {
    const evidence = `it could hold ${percent(area.hidden / found.area)} of the area and add ${formatQuantity(mean.hidden, timeUnit, 2)} to the mean`;
    judged.push(finding("tail-hidden", at, evidence));
  }
  return judged;
}

/** Mean against volume over flow: told only where they differ by more than two standard errors. */
export function judgeMean(
  at: string,
  mean: Figure,
  tau: Known,
  unit: Unit,
  unseen: number,
  byVolume = false,
): Finding[] {
  if (mean.value === undefined) return [];
  const error = Math.hypot(mean.standardError ?? 0, tau.sd ?? 0);
  const evidence = `${byVolume ? "mean of the volume passed" : "mean"} ${formatQuantity(mean.value, unit)}, ${byVolume ? "volume" : "volume over flow"} ${formatQuantity(tau.value, unit)}, ratio ${formatNumber(mean.value / tau.value, 3)} ± ${formatNumber(error / tau.value, 2)}`;
  // Rounding of a file's numbers is no evidence: 0.5 % apart at least.
  const apart = Math.max(2 * error, 0.005 * tau.value);
  if (mean.value > tau.value + apart) return [finding("mean-late", at, evidence)];
  if (mean.value > tau.value - apart) return [];
  return [finding(unseen > 0.05 ? "dead-or-tail" : "mean-early", at, evidence)];
}

/** What a grade looks at: recovery over what was expected, where it is known, and the mean. */
export interface Graded {
  readonly recovery: number | undefined;
  readonly mean: Figure;
}

/** A: fit for a number that others rely on; B: for modelling; C: to look at only. */
export function gradeOf(findings: readonly Finding[], readings: readonly Graded[]): "A" | "B" | "C" {
  if (findings.some((f) => f.weight === "stop" || f.code === "tail-open" || f.code === "tail-power")) return "C";
  if (readings.some(({ recovery: r }) => r !== undefined && (r < 0.7 || r > 1.3))) return "C";
  // A mean that falls short of the volume is no number to rely on, whatever the reason.
  const short = findings.some((f) => f.code === "mean-early" || f.code === "dead-or-tail");
  const sure = ({ recovery, mean }: Graded): boolean =>
    recovery !== undefined &&
    isClose(recovery) &&
    mean.value !== undefined &&
    (mean.standardError ?? 0) <= 0.1 * mean.value;
  const all = readings.length > 0 && readings.every(sure);
  return all && !short && findings.every((f) => f.weight === "note") ? "A" : "B";
}
