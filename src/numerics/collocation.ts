import { once } from "./once.js";
import { radauCoefficients } from "./radau-coefficients.js";

/**
 * A function on stretches of [0, 1], by polynomials through collocation points. Points of a stretch are counted from its
 * right end to its left one, which is a point itself.
 */
export interface CollocationMesh {
  /** Ends of the stretches, ascending, from 0 to 1. */
  readonly edges: Float64Array;
  /** Values at the points, stretch by stretch, point by point, component by component. */
  readonly values: Float64Array;
  /** Values at 1. */
  readonly end: Float64Array;
}

export const stageCount = 7;

/** What a stretch is made of; most programs never ask. */
export const collocation = once(() => {
  const { c, inverse } = radauCoefficients(stageCount);
  return {
    /** Places of the points in a stretch, from its right end (0) to its left end (1). */
    places: c,
    /** Slopes at the points of the polynomial through them and the right end: sum over j of slopes[i, j] (y_j - y_right). */
    slopes: inverse,
    /** Weights of values at the points in the last Legendre coefficient of the polynomial through them. */
    leadingLegendre: c.map((x, i) => {
      // The leading coefficient of the shifted Legendre polynomial of degree 6 is 12! / 6!^2.
      return c.reduce((product, other, j) => (j === i ? product : product / (x - other)), 1) / 924;
    }),
  };
});

/** The polynomial of a stretch at a place in it, by Lagrange's formula. */
export function evaluateAt(values: Float64Array, right: Float64Array, m: number, place: number): Float64Array {
  const nodes = [0, ...collocation().places];
  const result = new Float64Array(m);
  nodes.forEach((x, i) => {
    let weight = 1;
    for (const [j, other] of nodes.entries()) if (j !== i) weight *= (place - other) / (x - other);
    for (let k = 0; k < m; k++) result[k] += weight * (i === 0 ? right[k] : values[(i - 1) * m + k]);
  });
  return result;
}

/** The function at x in [0, 1]; m components. */
export function valueAt({ edges, values, end }: CollocationMesh, m: number, x: number): Float64Array {
  const last = edges.length - 2;
  let e = 0;
  while (e < last && edges[e + 1] < x) e++;
  const next = (e + 1) * stageCount * m;
  // A stretch ends where the next begins: at that one's leftmost point.
  const right = e < last ? values.subarray(next + (stageCount - 1) * m, next + stageCount * m) : end;
  const place = (edges[e + 1] - x) / (edges[e + 1] - edges[e]);
  return evaluateAt(values.subarray(e * stageCount * m, next), right, m, place);
}

/** A mesh filled from a function of the place. */
export function meshOf(edges: Float64Array, m: number, y: (x: number) => ArrayLike<number>): CollocationMesh {
  const c = collocation().places;
  const values = new Float64Array((edges.length - 1) * stageCount * m);
  for (let e = 0; e + 1 < edges.length; e++) {
    const h = edges[e + 1] - edges[e];
    for (let i = 0; i < stageCount; i++) values.set(Array.from(y(edges[e + 1] - h * c[i])), (e * stageCount + i) * m);
  }
  return { edges, values, end: Float64Array.from(Array.from(y(1))) };
}
