import type { Facts } from "./held.js";
import { type LinearTerms, type Projector, projectorFor } from "./nuisance.js";
import { curvesOf, factsAt, type Setup } from "./setup.js";

/** What one point of the search gives. */
export interface Evaluation {
  readonly facts: Facts;
  /** Curves of the blocks, SI, and the best linear terms beside them. */
  readonly curves: readonly Float64Array[];
  readonly terms: readonly LinearTerms[];
  /** Weighted residuals, measured - fitted, of all observations, then of the priors. */
  readonly residuals: Float64Array;
  /** Sum of squared residuals, observations only and with priors. */
  readonly ofData: number;
  readonly ofAll: number;
}

/** A fact that pulls one coordinate towards what is declared, as one more residual. */
export interface Prior {
  readonly index: number;
  /** Spread of the data's weighted residuals that it is counted in. */
  readonly spread: number;
  /** (declared - x) / sd times the spread of the data's weighted residuals, and its derivative with respect to x. */
  residual(x: number): number;
  slope(x: number): number;
}

/** The curves of a point and how they move by coordinate, as `curvesOf` and `allCurveSlopes` give them. */
export interface Known {
  readonly x: Float64Array;
  readonly curves: readonly Float64Array[];
  readonly slopes: readonly (readonly Float64Array[] | undefined)[];
}

/** A least-squares problem with its linear terms already taken out. */
export interface Problem {
  readonly setup: Setup;
  /** 1 / SI per observation. */
  readonly weight: Float64Array;
  readonly projectors: readonly Projector[];
  readonly priors: readonly Prior[];
  /** Linear terms of all blocks. */
  readonly linear: number;
  /** The last full Jacobian, and where it was taken: a fit ends where its errors begin. */
  readonly last: {
    at?: Evaluation;
    columns?: readonly Float64Array[];
    /** Orthonormal, of all the columns. */
    basis?: readonly Float64Array[] | undefined;
  };
  /** What is known of one point before it is asked for. */
  readonly known: Known | undefined;
  /** undefined where the point makes no vessel. */
  evaluate(x: Float64Array): Evaluation | undefined;
}

/**
 * The problem at given weights and priors. It remembers the last point, so asking twice costs once.
 * @param weight  1 / SI of each observation; owned by the problem from here on
 * @param known   of the same model at the same times
 */
export function problemWith(setup: Setup, weight: Float64Array, priors: readonly Prior[] = [], known?: Known): Problem {
  const projectors = setup.blocks.map((b) => projectorFor(b, weight));
  const linear = projectors.reduce((n, p) => n + p.terms, 0);
  let lastPoint: Float64Array | undefined;
  let found: Evaluation | undefined;
  const evaluate = (x: Float64Array): Evaluation | undefined => {
    if (lastPoint && samePoint(lastPoint, x)) return found;
    lastPoint = Float64Array.from(x);
    const facts = factsAt(setup, x);
    const curves = known && samePoint(known.x, x) ? known.curves : curvesOf(setup, facts);
    found = curves && withTerms(setup, projectors, priors, facts, curves, x);
    return found;
  };
  return { setup, weight, projectors, priors, linear, last: {}, known, evaluate };
}

function withTerms(
  setup: Setup,
  projectors: readonly Projector[],
  priors: readonly Prior[],
  facts: Facts,
  curves: readonly Float64Array[],
  x: Float64Array,
): Evaluation | undefined {
  const residuals = new Float64Array(setup.observations + priors.length);
  const terms = projectors.map((p, b) => p.project(curves[b], residuals));
  let ofData = 0;
  for (let i = 0; i < setup.observations; i++) ofData += residuals[i] * residuals[i];
  let ofAll = ofData;
  for (const [j, prior] of priors.entries()) {
    const r = prior.residual(x[prior.index]);
    residuals[setup.observations + j] = r;
    ofAll += r * r;
  }
  return Number.isFinite(ofAll) ? { facts, curves, terms, residuals, ofData, ofAll } : undefined;
}

function samePoint(a: Float64Array, b: Float64Array): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}
