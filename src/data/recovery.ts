import type { Injection, Reading, Trial } from "../model/trial.js";
import { type Basis, concentrationOf } from "../units/basis.js";
import { sameDimension } from "../units/dimension.js";
import { one } from "../units/unit.js";
import type { CleanCurve } from "./clean.js";
import { type Figure, figure, type Known } from "./figure.js";
import type { RawMoments } from "./response.js";

/** Tracer seen over tracer given, with the errors of area, flow and dose. */
export function recoveryOf(
  { form }: Injection,
  reading: Reading,
  curve: CleanCurve,
  found: RawMoments,
  flow: Known | undefined,
  recovered: Figure | undefined,
  inlet: RawMoments | undefined,
  areaError: number,
  basis: Basis,
): Figure {
  if (form.is === "step") return recovered ?? figure(undefined, one);
  if (reading.scale === "free") return figure(undefined, one);
  if (inlet) return figure(found.area / inlet.area, one, areaError / inlet.area);
  if (form.is !== "pulse" || !flow) return figure(undefined, one);
  const dose = form.amount.of([]);
  if (!sameDimension(concentrationOf(form.amount.dimension, basis), curve.unit.dimension))
    return figure(undefined, one);
  const recovery = (flow.value * found.area) / dose;
  const relative = Math.hypot((flow.sd ?? 0) / flow.value, (form.amount.sd?.([]) ?? 0) / dose);
  return figure(recovery, one, Math.hypot(relative, areaError / found.area) * recovery);
}

/** In words: what is missing for a recovery. */
export const whyNoRecovery = (reading: Reading, flow: Known | undefined): string =>
  reading.scale === "free"
    ? "`scale: free` trusts the shape only"
    : flow
      ? "the level of the step or the unit of the dose does not give it"
      : "no flow is known";

/** The one flow of a trial that names one only and reads one place: all of it passes there. */
export function onlyFlow(trial: Trial): Known | undefined {
  const [flow] = [...trial.flows.values()];
  const places = new Set(trial.readings.map((r) => r.at));
  if (trial.flows.size !== 1 || places.size !== 1 || flow.uses.length > 0) return undefined;
  return { value: flow.of([]), sd: flow.sd?.([]) };
}

/** Volume over flow, where both are known, s. */
export function tauOf(
  { volume, throughflow }: { readonly volume?: Known | undefined; readonly throughflow?: Known | undefined },
  flow: Known | undefined,
): Known | undefined {
  const through = throughflow ?? flow;
  if (!volume || !through || !(through.value > 0) || !(volume.value > 0)) return undefined;
  const relative = Math.hypot((volume.sd ?? 0) / volume.value, (through.sd ?? 0) / through.value);
  const tau = volume.value / through.value;
  return { value: tau, sd: relative * tau };
}
