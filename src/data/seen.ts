import type { Injection, Reading } from "../model/trial.js";
import { type Basis, dosedInto } from "../units/basis.js";
import { sameDimension } from "../units/dimension.js";
import { formatNumber } from "../units/format.js";
import { one } from "../units/unit.js";
import type { CleanCurve } from "./clean.js";
import { type Figure, figure, type Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { roughness } from "./noise.js";
import { inflation } from "./persistence.js";
import { pulseResponse, type Response, stepResponse } from "./response.js";
import type { Rule } from "./weights.js";

/**
 * The curve to take moments of; for a step also how much of it came through.
 * @param flow      that a dosed rate is spread over, m3/s
 * @param dilution  share of all feeds that a dosed level comes with
 */
export function seenResponse(
  { form }: Injection,
  reading: Reading,
  curve: CleanCurve,
  flow: Known | undefined,
  rule: Rule,
  dilution = 1,
  basis: Basis = "volume",
): { response: Response; recovered: Figure | undefined } | Finding {
  if (form.is !== "step") return { response: pulseResponse(curve, rule), recovered: undefined };

  const n = curve.value.length;
  const size = Math.max(2, Math.floor((n - curve.before) / 10));
  const [plateau, earlier] = [meanOf(curve.value, n - size, n), meanOf(curve.value, n - 2 * size, n - size)];
  const measured = curve.before > 0 && !curve.baseline;
  const before = measured ? meanOf(curve.value, 0, curve.before) : 0;
  const scatter = (points: number): number =>
    (curve.noise.sd[0] ?? 0) * Math.sqrt(Math.min(1, inflation(curve.noise.persistence.lag1) / points));
  const trusted = reading.scale === "known";
  const declared = trusted && form.from && sameDimension(form.from.dimension, curve.unit.dimension);
  const start: Known = declared
    ? { value: dilution * form.from.of([]), sd: dilution * (form.from.sd?.([]) ?? 0) }
    : { value: before, sd: measured ? scatter(curve.before) : curve.baseline?.levelError };
  const from = start.value;
  const level = form.level.of([]);
  const isLevel = sameDimension(form.level.dimension, curve.unit.dimension);
  const isRate = flow && sameDimension(dosedInto(form.level.dimension, basis), curve.unit.dimension);
  const relative =
    (isLevel ? 0 : (flow?.sd ?? 0) / (flow?.value ?? 1)) ** 2 + ((form.level.sd?.([]) ?? 0) / level) ** 2;
  const to = !trusted ? undefined : isLevel ? dilution * level : isRate ? level / flow.value : undefined;
  const noise = roughness(curve.time, curve.value);
  const rise = Math.abs(plateau - from);
  const spread = scatter(size);
  const apart = 2 * Math.SQRT2 * Math.max(noise / Math.sqrt(size), spread);
  const settled = Math.abs(plateau - earlier) <= Math.max(apart, 2e-3 * rise);
  if (!settled && to === undefined) {
    return finding(
      "step-level",
      curve.at,
      `the last tenth still changes by ${formatNumber((100 * Math.abs(plateau - earlier)) / rise, 3)} % of the step`,
    );
  }
  const step = Math.abs((to ?? plateau) - from);
  const first = start.sd ?? 0;
  const declaredError = Math.sqrt(relative) * Math.abs(to ?? 0);
  const ends = settled
    ? { points: size, last: spread / rise, first: first / rise }
    : { points: 0, last: declaredError / step, first: first / step };
  const response = stepResponse(curve, { from, to: settled || to === undefined ? plateau : to, ends }, rule);
  if (to === undefined || !settled) return { response, recovered: undefined };
  const share = (plateau - from) / (to - from);
  const error = Math.hypot(spread, (1 - share) * first, share * declaredError) / step;
  return { response, recovered: figure(share, one, error) };
}

function meanOf(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += values[i];
  return sum / (to - from);
}
