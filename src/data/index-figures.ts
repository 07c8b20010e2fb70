import { one, type Unit } from "../units/unit.js";
import { type Figure, figure, type Known } from "./figure.js";
import { areaError, closedPeclet, efficiency, holdback, meanOver, segregation, slopeOf } from "./indices.js";
import type { Sight } from "./sight.js";

/** Spread of a curve in one number each: t90 over t10, tanks in a row, closed dispersion. */
export function spreadIndices({ at, errorAt, known, mean, variance, errors }: Sight): Record<string, Figure> {
  const [t10, t90] = [at(0.1), at(0.9)];
  const part = (share: number, t: number | undefined): number => (errorAt(share) ?? Number.NaN) / (t ?? 1);
  const relative = variance / mean ** 2;
  return {
    morrill: figure(
      t10 !== undefined && t90 !== undefined && t10 > 0 ? t90 / t10 : undefined,
      one,
      ((t90 ?? 0) / (t10 ?? 1)) * Math.hypot(part(0.1, t10), part(0.9, t90)),
    ),
    tanks: figure(known && variance > 0 ? 1 / relative : undefined, one, errors.relative / relative ** 2),
    peclet: figure(known ? closedPeclet(relative) : undefined, one, slopeOf(closedPeclet, relative) * errors.relative),
  };
}

/**
 * What a curve says against the volume of its vessel, by P. V. Danckwerts and others (see each).
 * @param tau volume over flow; the volume itself where the curve is read over the volume that has passed
 */
export function vesselIndices(sight: Sight, tau: Known, withInlet: boolean): Record<string, Figure> {
  const { F, error, unsure, known, mean, errors, response } = sight;
  const times = { ...tau, error: meanOver(F.time, error, tau.value) + unsure };
  const spread = tau.sd ?? 0;
  const t10 = sight.at(0.1);
  const area = (of: typeof holdback): Figure =>
    figure(
      known ? of(F, tau.value) : undefined,
      one,
      areaError((t) => of(F, t), times),
    );
  return {
    ...(withInlet
      ? {}
      : {
          holdback: area(holdback),
          segregation: area(segregation),
          "t10-over-tau": figure(
            t10 === undefined ? undefined : t10 / tau.value,
            one,
            Math.hypot(sight.errorAt(0.1) ?? Number.NaN, (spread * (t10 ?? 0)) / tau.value) / tau.value,
          ),
          ...(response.is === "density" ? { "hydraulic-efficiency": efficiency(response, tau) } : {}),
        }),
    "mean-over-tau": figure(
      known ? mean / tau.value : undefined,
      one,
      Math.hypot(errors.mean / tau.value, (spread * mean) / tau.value ** 2),
    ),
  };
}

/** Flow times mean: what takes part, at the one outlet of a vessel (errors of flow and mean carried). */
export function effectiveVolume(flow: Known, { known, mean, errors }: Sight, unit: Unit): Figure {
  if (!known) return figure(undefined, unit);
  return figure(flow.value * mean, unit, Math.hypot(flow.value * errors.mean, (flow.sd ?? 0) * mean));
}
