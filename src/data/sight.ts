import type { Unit } from "../units/unit.js";
import type { CleanCurve } from "./clean.js";
import { type Distribution, distributionOf } from "./distribution.js";
import { momentErrors, ownError } from "./error.js";
import type { Figure } from "./figure.js";
import { figure } from "./figure.js";
import { percentileError } from "./read-curve.js";
import type { figures, RawMoments, Response } from "./response.js";
import { washoutError } from "./washout-error.js";
import type { Rule } from "./weights.js";

/** A curve with all that is read off it along one axis: the time since the injection, or the volume that has passed. SI. */
export interface Sight {
  readonly curve: CleanCurve;
  readonly response: Response;
  readonly found: RawMoments;
  readonly errors: Readonly<Record<keyof typeof figures, number>>;
  readonly F: Distribution;
  /** One standard error of F at each point by noise and sampling; what else leaves the area open, as a share of it. */
  readonly error: Float64Array;
  readonly unsure: number;
  /** Is the tail told, and with it the moments? */
  readonly known: boolean;
  /** Less what line, pulse and inlet add. */
  readonly mean: number;
  readonly variance: number;
  readonly third: number;
  /** When a share has come, with its error; undefined where the inlet was measured or the record ends before. */
  readonly at: (share: number) => number | undefined;
  readonly errorAt: (share: number) => number | undefined;
  readonly percentile: (share: number, unit: Unit) => Figure;
}

/** @param inlet moments of a measured inlet, which are taken off */
export function sightOf(
  curve: CleanCurve,
  response: Response,
  found: RawMoments,
  rule: Rule,
  inlet: RawMoments | undefined,
): Sight {
  const errors = momentErrors(curve, response, found, rule);
  const F = distributionOf(response, found);
  const error = washoutError(response, found.area, curve);
  // What baseline and tail leave open of the area, beside points and what lies between them, moves every share of it.
  const unsure = Math.sqrt(Math.max(0, errors.area ** 2 - ownError("area", response, found, curve) ** 2)) / found.area;
  const at = (share: number): number | undefined => {
    const t = inlet ? undefined : F.quantile(share);
    return t === undefined ? undefined : t - curve.added.mean;
  };
  const errorAt = (share: number): number | undefined => percentileError(F, error, F.quantile(share), unsure);
  return {
    curve,
    response,
    found,
    errors,
    F,
    error,
    unsure,
    known: response.tail.is === "closed" || response.tail.is === "exponential",
    mean: found.mean - curve.added.mean - (inlet?.mean ?? 0),
    variance: found.variance - curve.added.variance - (inlet?.variance ?? 0),
    third: found.third - curve.added.third - (inlet?.third ?? 0),
    at,
    errorAt,
    percentile: (share, unit) => figure(at(share), unit, errorAt(share)),
  };
}
