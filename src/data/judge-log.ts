import type { Reading, Trial } from "../model/trial.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import type { CleanCurve } from "./clean.js";
import { type Finding, finding } from "./finding.js";
import { inflation } from "./persistence.js";
import type { RawMoments, Response } from "./response.js";

const percent = (x: number): string => `${formatNumber(100 * x, 3)} %`;

/** What the log itself says of how far it can be trusted: limits, gaps, errors that hang together, tracer that is lost. */
export function judgeLog(
  trial: Trial,
  reading: Reading,
  curve: CleanCurve,
  response: Response,
  moments: RawMoments,
): Finding[] {
  return [
    ...judgeLimits(reading, curve),
    ...judgeGaps(curve, response, moments),
    ...judgePersistence(curve),
    ...judgeLoss(trial, curve, response),
  ];
}

function judgeLimits({ limits }: Reading, { censored, at, unit }: CleanCurve): Finding[] {
  const found: Finding[] = [];
  if (censored && censored.above > 0 && limits.above !== undefined) {
    const evidence = `${censored.above} at or above ${formatQuantity(limits.above, unit)}`;
    found.push(finding("limits-above", at, evidence));
  }
  if (censored && censored.below > 0 && limits.below !== undefined) {
    const cut = censored.cut > 0 ? `, ${censored.cut} of them at the end, where the tail is extrapolated` : "";
    const evidence = `${censored.below} at or below ${formatQuantity(limits.below, unit)}${cut}`;
    found.push(finding("limits-below", at, evidence));
  }
  return found;
}

/** A gap is five usual steps wide or more, and holds more than 2 % of the area by the line across it. */
function judgeGaps({ at, timeUnit }: CleanCurve, { time, value, is }: Response, { area }: RawMoments): Finding[] {
  if (is !== "density" || time.length < 8) return [];
  const steps = Float64Array.from({ length: time.length - 1 }, (_, i) => time[i + 1] - time[i]);
  let worst: { from: number; to: number; share: number } | undefined;
  for (let i = 1; i + 1 < steps.length; i++) {
    // Sampling that grows sparser step by step is a plan, not a gap: what counts is the neighbours.
    const usual = Math.max(steps[i - 1], steps[i + 1]);
    const share = (Math.abs(value[i + 1] + value[i]) / 2) * (steps[i] / area);
    if (steps[i] > 5 * usual && usual > 0 && share > Math.max(0.02, worst?.share ?? 0))
      worst = { from: time[i], to: time[i + 1], share };
  }
  if (!worst) return [];
  const between = `${formatQuantity(worst.from, timeUnit, 3)} to ${formatQuantity(worst.to, timeUnit, 3)}`;
  return [finding("gap", at, `no reading from ${between}; the line across holds ${percent(worst.share)} of the area`)];
}

function judgePersistence({ noise, at, time }: CleanCurve): Finding[] {
  const { lag1, from, judged } = noise.persistence;
  if (!from) return [];
  const effective = time.length / inflation(lag1);
  const evidence = `correlation of neighbours ${formatNumber(lag1, 2)} over ${from.points} points ${judged === "silence" ? "before the injection" : "about a smooth curve"}; ${time.length} points are worth ${formatNumber(effective, 3)}`;
  return [finding("noise-correlated", at, evidence)];
}

function judgeLoss({ tracer }: Trial, { at, timeUnit }: CleanCurve, { is }: Response): Finding[] {
  const found: Finding[] = [];
  if (tracer?.decay)
    found.push(finding("decay-corrected", at, `half-life ${formatQuantity(Math.LN2 / tracer.decay, timeUnit, 3)}`));
  if (tracer?.loss) {
    const evidence = `time constant of the loss ${formatQuantity(1 / tracer.loss, timeUnit, 3)}`;
    found.push(finding(is === "density" ? "loss-corrected" : "loss-left", at, evidence));
  }
  return found;
}
