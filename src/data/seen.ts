import type { Injection, Reading } from "../model/trial.js";
import { type Basis, dosedInto } from "../units/basis.js";
import { sameDimension } from "../units/dimension.js";
import { formatNumber } from "../units/format.js";
import type { CleanCurve } from "./clean.js";
import type { Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { roughness } from "./noise.js";
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
): { response: Response; recovered: number | undefined } | Finding {
  if (form.is !== "step") return { response: pulseResponse(curve, rule), recovered: undefined };
  const n = curve.value.length;
  const size = Math.max(2, Math.floor((n - curve.before) / 10));
  const [plateau, earlier] = [meanOf(curve.value, n - size, n), meanOf(curve.value, n - 2 * size, n - size)];
  const before = curve.before > 0 && !curve.baseline ? meanOf(curve.value, 0, curve.before) : 0;
  const trusted = reading.scale === "known";
  const from =
    trusted && form.from && sameDimension(form.from.dimension, curve.unit.dimension)
      ? dilution * form.from.of([])
      : before;
  const level = form.level.of([]);
  const isLevel = sameDimension(form.level.dimension, curve.unit.dimension);
  const isRate = flow && sameDimension(dosedInto(form.level.dimension, basis), curve.unit.dimension);
  const to = !trusted ? undefined : isLevel ? dilution * level : isRate ? level / flow.value : undefined;
  const noise = roughness(curve.time, curve.value);
  const rise = Math.abs(plateau - from);
  const settled = Math.abs(plateau - earlier) <= Math.max(2 * noise * Math.sqrt(2 / size), 2e-3 * rise);
  if (!settled && to === undefined) {
    return finding(
      "step-level",
      curve.at,
      `the last tenth still changes by ${formatNumber((100 * Math.abs(plateau - earlier)) / rise, 3)} % of the step`,
    );
  }
  const response = stepResponse(curve, { from, to: settled || to === undefined ? plateau : to }, rule);
  return { response, recovered: to === undefined || !settled ? undefined : (plateau - from) / (to - from) };
}

function meanOf(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += values[i];
  return sum / (to - from);
}
