import { BoundaryNewton, type BoundaryProblem } from "./boundary-newton.js";
import { type CollocationMesh, collocation, evaluateAt, stageCount as s } from "./collocation.js";

export type { BoundaryProblem };

export interface BoundarySolution {
  readonly mesh: CollocationMesh;
  /** y(1). */
  readonly end: Float64Array;
  /** How y(1) moves with `fed`: size x (length of fed), row-major; undefined where that is singular. */
  sensitivity(): Float64Array | undefined;
}

/** Share of a solution's size that the last Legendre coefficient of a stretch may have; its ends are far better than that. */
const resolved = 1e-8;
const floor = 1e-8;
const mostStretches = 600;
const mostRounds = 40;

/**
 * Solves a boundary-value problem by collocation at 7 Radau points a stretch (order 13 at the ends of stretches; damped
 * towards the left, where what grows to the right must fade) with Newton's method, halving stretches until each follows the
 * solution.
 * @param guess a first idea on a mesh of its own; left as it is
 * @returns undefined where Newton's method did not converge
 * @see U.M. Ascher, R.M.M. Mattheij, R.D. Russell, Numerical Solution of Boundary Value Problems for Ordinary Differential
 *      Equations, SIAM 1995, ch. 5 (collocation and condensation), ch. 9 (mesh selection)
 */
export function solveBoundary(problem: BoundaryProblem, guess: CollocationMesh): BoundarySolution | undefined {
  let mesh: CollocationMesh = { edges: guess.edges, values: guess.values.slice(), end: guess.end.slice() };
  for (let round = 0; round < mostRounds; round++) {
    const newton = new BoundaryNewton(problem, mesh);
    if (!newton.run()) return undefined;
    const coarse = unresolved(problem, mesh);
    if (coarse.length === 0 || mesh.edges.length - 1 + coarse.length > mostStretches) {
      return { mesh, end: mesh.end, sensitivity: () => newton.sensitivity() };
    }
    mesh = halved(mesh, problem.size, coarse);
  }
  return undefined;
}

/** Stretches on which the solution still bends more than the polynomials follow. */
function unresolved({ size: m, rhs }: BoundaryProblem, { edges, values }: CollocationMesh): number[] {
  const { leadingLegendre } = collocation();
  const count = edges.length - 1;
  const f = new Float64Array(m);
  const coefficient = new Float64Array(m);
  const scale = new Float64Array(m);
  const coarse: number[] = [];
  for (let e = 0; e < count; e++) {
    coefficient.fill(0);
    scale.fill(floor);
    for (let i = 0; i < s; i++) {
      const at = (e * s + i) * m;
      rhs(values, at, f, 0);
      for (let k = 0; k < m; k++) {
        coefficient[k] += leadingLegendre[i] * f[k];
        scale[k] = Math.max(scale[k], Math.abs(values[at + k]));
      }
    }
    const h = edges[e + 1] - edges[e];
    if (h > 1e-9 && coefficient.some((c, k) => h * Math.abs(c) > resolved * scale[k])) coarse.push(e);
  }
  return coarse;
}

/** The same solution with the given stretches cut in two. */
function halved({ edges, values, end }: CollocationMesh, m: number, which: readonly number[]): CollocationMesh {
  const { places } = collocation();
  const cut = new Set(which);
  const newEdges: number[] = [edges[0]];
  const newValues: number[] = [];
  for (let e = 0; e + 1 < edges.length; e++) {
    const start = e + 2 < edges.length ? values.subarray(((e + 1) * s + s - 1) * m, ((e + 1) * s + s) * m) : end;
    const own = values.subarray(e * s * m, (e + 1) * s * m);
    if (cut.has(e)) {
      // Places count from the right end of a stretch: the left half lies at 1/2 to 1.
      for (const half of [0.5, 0]) {
        for (let i = 0; i < s; i++) newValues.push(...evaluateAt(own, start, m, half + places[i] / 2));
      }
      newEdges.push((edges[e] + edges[e + 1]) / 2);
    } else newValues.push(...own);
    newEdges.push(edges[e + 1]);
  }
  return { edges: Float64Array.from(newEdges), values: Float64Array.from(newValues), end: end.slice() };
}
