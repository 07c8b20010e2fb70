import { columnNorm, compress } from "./linear-model.js";
import { scaledLength, trustStep } from "./trust-step.js";

/** A point of the search. */
export interface Point {
  readonly p: Float64Array;
  readonly residuals: Float64Array;
  readonly sum: number;
}

/** What polishing needs of a search. */
export interface Polishing {
  readonly jacobian: (at: Point) => Float64Array;
  readonly tryStep: (p: Float64Array, step: Float64Array) => Point | undefined;
  readonly halted: () => boolean;
}

/**
 * Gauss-Newton steps on the accurate Jacobian for as long as they get shorter: near the optimum the sum of squares is flat to
 * rounding long before the parameters are. Residuals that stay make the steps shrink by a constant factor only, so every
 * second step is extrapolated to the limit of that series (Aitken 1926).
 */
export function polished(from: Point, lower: Float64Array, upper: Float64Array, search: Polishing): Point {
  const n = from.p.length;
  let at = from;
  let before = Number.POSITIVE_INFINITY;
  let plain: Float64Array | undefined;
  for (let round = 0; round < 40; round++) {
    const model = compress(search.jacobian(at), at.residuals, n);
    if (search.halted()) return at;
    const scale = Float64Array.from({ length: n }, (_, j) => columnNorm(model, j) || 1);
    const box = { p: at.p, lower, upper };
    const { step, length } = trustStep(model, box, scale, Number.POSITIVE_INFINITY);
    const size = scaledLength(at.p, scale);
    if (!(length < 0.9 * before) || length <= 1e-13 * size || length > 1e-3 * size) return at;
    const rate = plain ? shrinkage(step, plain, scale) : 0;
    const next = search.tryStep(at.p, rate === 0 ? step : step.map((v) => v / (1 - rate)));
    if (!next || search.halted() || next.sum > at.sum * (1 + 1e-12)) return at;
    plain = rate === 0 ? step : undefined;
    before = length;
    at = next;
  }
  return at;
}

/** Factor between one step and the step before it, along that one; 0 where it is no use. */
function shrinkage(step: Float64Array, before: Float64Array, scale: Float64Array): number {
  let dot = 0;
  for (let j = 0; j < step.length; j++) dot += scale[j] ** 2 * step[j] * before[j];
  const rate = dot / scaledLength(before, scale) ** 2;
  return Math.abs(rate) < 0.95 ? rate : 0;
}
