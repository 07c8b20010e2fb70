import { formatNumber, formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import type { CleanCurve } from "./clean.js";
import { extent } from "./extent.js";
import type { Figure, Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { isNoise } from "./noise.js";
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
    const error = Math.sqrt(early.reduce((sum, c) => sum + (c - mean) ** 2, 0) / (before - 1) / before);
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

/** Recovery outside 90 to 110 %, by more than two of its standard errors where they are known. */
export function judgeRecovery(at: string, recovery: Figure): Finding[] {
  if (recovery.value === undefined) return [];
  const error = recovery.standardError;
  const evidence = `recovery ${percent(recovery.value)}${!error ? "" : ` ± ${percent(error)}`}`;
  if (recovery.value < 0.9) return [finding("recovery-low", at, evidence)];
  return recovery.value > 1.1 ? [finding("recovery-high", at, evidence)] : [];
}

/** Mean against volume over flow: told only where they differ by more than two standard errors. */
export function judgeMean(at: string, mean: Figure, tau: Known, time: Unit, unseen: number): Finding[] {
  if (mean.value === undefined) return [];
  const error = Math.hypot(mean.standardError ?? 0, tau.sd ?? 0);
  const evidence = `mean ${formatQuantity(mean.value, time)}, volume over flow ${formatQuantity(tau.value, time)}, ratio ${formatNumber(mean.value / tau.value, 3)} ± ${formatNumber(error / tau.value, 2)}`;
  // Rounding of a file's numbers is no evidence: 0.5 % apart at least.
  const apart = Math.max(2 * error, 0.005 * tau.value);
  if (mean.value > tau.value + apart) return [finding("mean-late", at, evidence)];
  if (mean.value > tau.value - apart) return [];
  return [finding(unseen > 0.05 ? "dead-or-tail" : "mean-early", at, evidence)];
}

/** A: fit for a number that others rely on; B: for modelling; C: to look at only. Tells no more than the findings do. */
export function gradeOf(findings: readonly Finding[], recovery: readonly Figure[]): "A" | "B" | "C" {
  if (findings.some((f) => f.weight === "stop" || f.code === "tail-open" || f.code === "tail-power")) return "C";
  const known = recovery.length > 0 && recovery.every((r) => r.value !== undefined);
  if (known && recovery.some((r) => r.value !== undefined && (r.value < 0.7 || r.value > 1.3))) return "C";
  return known && findings.every((f) => f.weight === "note") ? "A" : "B";
}
