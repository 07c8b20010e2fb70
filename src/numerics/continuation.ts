import { factor, solve } from "./lu.js";

/** Equations F(y, p) = 0 with one parameter; p is best scaled so that it runs from 0 to 1. */
export interface Family {
  /** Components of y. */
  readonly size: number;
  /** What a change of y counts beside one of p. */
  readonly weight: number;
  /** Writes F; false where it cannot be evaluated. */
  residual(y: Float64Array, p: number, f: Float64Array): boolean;
  /** Writes dF/dy, size x size, row-major. */
  jacobian(y: Float64Array, p: number, j: Float64Array): boolean;
}

/** A solution on a curve of them. */
export interface CurvePoint {
  readonly y: Float64Array;
  readonly p: number;
  /** Change of p per length of the curve; 0 where it turns back. */
  readonly slope: number;
  /** True where the curve turns back in p. */
  readonly turn: boolean;
}

export interface Curve {
  readonly points: readonly CurvePoint[];
  /** `left`: p left its range; `closed`: the curve came back to where it began; `stuck`: it could not be followed further. */
  readonly end: "left" | "closed" | "stuck";
}

const longest = 0.03;
const shortest = 1e-7;
const mostSteps = 3000;
const mostCorrections = 6;
const close = 1e-10;
/** Cosine of the angle by which the curve may bend in a step. */
const straight = 0.95;

/**
 * Follows a curve of solutions by its length, past points where it turns back in p, which are located.
 * @param start a solution, with p inside the range
 * @param direction +1 towards larger p at first, -1 towards smaller
 * @see H.B. Keller, in: P.H. Rabinowitz (ed.), Applications of Bifurcation Theory, Academic Press 1977, 359-384
 */
export function followCurve(
  family: Family,
  start: { readonly y: Float64Array; readonly p: number },
  [low, high]: readonly [number, number],
  direction: 1 | -1,
): Curve {
  const n = family.size;
  const first = Float64Array.of(...start.y, start.p);
  const along = new Float64Array(n + 1);
  along[n] = direction;
  let here: Float64Array = first;
  let tangent = tangentAt(family, here, along);
  if (!tangent) return { points: [], end: "stuck" };
  if (tangent[n] * direction < 0) tangent = tangent.map((t) => -t);
  const points: CurvePoint[] = [pointOf(here, tangent[n])];
  let step = longest / 10;
  for (let k = 0; k < mostSteps; k++) {
    const next = advance(family, here, tangent, step);
    const bent = next && dot(family, tangent, next.tangent) < straight && step > 100 * shortest;
    if (!next || bent) {
      step /= 2;
      if (step < shortest) return { points, end: "stuck" };
      continue;
    }
    if (next.tangent[n] * tangent[n] < 0) {
      const turn = turnBetween(family, here, tangent, step);
      if (turn && turn.at[n] >= low && turn.at[n] <= high) points.push({ ...pointOf(turn.at, 0), turn: true });
    }
    const p = next.at[n];
    if (p < low || p > high) {
      const edge = atFixed(family, here, next.at, p < low ? low : high);
      if (edge) points.push(pointOf(edge, next.tangent[n]));
      return { points, end: "left" };
    }
    points.push(pointOf(next.at, next.tangent[n]));
    if (k > 5 && distance(family, next.at, first) < step && next.tangent[n] * points[0].slope > 0) {
      return { points: [...points, points[0]], end: "closed" };
    }
    [here, tangent] = [next.at, next.tangent];
    if (next.corrections <= 3) step = Math.min(1.4 * step, longest);
  }
  return { points, end: "stuck" };
}

const pointOf = (u: Float64Array, slope: number): CurvePoint => ({
  y: u.slice(0, -1),
  p: u[u.length - 1],
  slope,
  turn: false,
});

/** Solves for y at a given p, by Newton's method from y; undefined where that does not converge. */
export function solveAt(family: Family, y: Float64Array, p: number): Float64Array | undefined {
  const n = family.size;
  const at = y.slice();
  const f = new Float64Array(n);
  const j = new Float64Array(n * n);
  for (let k = 0; k < 30; k++) {
    if (!family.residual(at, p, f) || !family.jacobian(at, p, j)) return undefined;
    const lu = factor(j, n);
    if (lu === "singular") return undefined;
    solve(lu, f);
    let moved = 0;
    for (let i = 0; i < n; i++) {
      at[i] -= f[i];
      moved = Math.max(moved, Math.abs(f[i]) / (1 + Math.abs(at[i])));
    }
    if (!Number.isFinite(moved)) return undefined;
    if (moved < close) return at;
  }
  return undefined;
}

function atFixed(family: Family, a: Float64Array, b: Float64Array, p: number): Float64Array | undefined {
  const n = family.size;
  const share = (p - a[n]) / (b[n] - a[n]);
  const y = solveAt(
    family,
    Float64Array.from({ length: n }, (_, i) => a[i] + share * (b[i] - a[i])),
    p,
  );
  return y && Float64Array.of(...y, p);
}

interface Step {
  readonly at: Float64Array;
  readonly tangent: Float64Array;
  readonly corrections: number;
}

/** One step of a given length along the tangent, corrected at right angles to it. */
function advance(family: Family, from: Float64Array, tangent: Float64Array, length: number): Step | undefined {
  const n = family.size;
  const guess = from.map((u, i) => u + length * tangent[i]);
  const at = guess.slice();
  const rhs = new Float64Array(n + 1);
  for (let k = 1; k <= mostCorrections; k++) {
    const matrix = bordered(family, at, tangent);
    if (!matrix || !family.residual(at.subarray(0, n), at[n], rhs.subarray(0, n))) return undefined;
    rhs[n] = dot(
      family,
      tangent,
      at.map((u, i) => u - guess[i]),
    );
    const lu = factor(matrix, n + 1);
    if (lu === "singular") return undefined;
    solve(lu, rhs);
    let moved = 0;
    for (let i = 0; i <= n; i++) {
      at[i] -= rhs[i];
      moved = Math.max(moved, Math.abs(rhs[i]) / (1 + Math.abs(at[i])));
    }
    if (!Number.isFinite(moved) || moved > 1) return undefined;
    if (moved < close) {
      const next = tangentAt(family, at, tangent);
      return next && { at, tangent: next, corrections: k };
    }
  }
  return undefined;
}

/** The point within a step at which p turns back, by halving the step. */
function turnBetween(family: Family, from: Float64Array, tangent: Float64Array, length: number): Step | undefined {
  const n = family.size;
  let [low, high] = [0, length];
  let found: Step | undefined;
  for (let k = 0; k < 45 && high - low > 1e-10; k++) {
    const middle = (low + high) / 2;
    const step = advance(family, from, tangent, middle);
    if (!step) return found;
    found = step;
    if (step.tangent[n] * tangent[n] > 0) low = middle;
    else high = middle;
  }
  return found;
}

/** The direction of the curve, of length 1, on the side of `towards`. */
function tangentAt(family: Family, at: Float64Array, towards: Float64Array): Float64Array | undefined {
  const n = family.size;
  const matrix = bordered(family, at, towards);
  const lu = matrix ? factor(matrix, n + 1) : "singular";
  if (lu === "singular") return undefined;
  const t = new Float64Array(n + 1);
  t[n] = 1;
  solve(lu, t);
  const length = Math.sqrt(dot(family, t, t));
  return Number.isFinite(length) && length > 0 ? t.map((x) => x / length) : undefined;
}

/** dF/dy and dF/dp, and under them the direction. */
function bordered(family: Family, at: Float64Array, direction: Float64Array): Float64Array | undefined {
  const n = family.size;
  const m = n + 1;
  const [y, p] = [at.subarray(0, n), at[n]];
  const j = new Float64Array(n * n);
  const byP = byParameter(family, y, p);
  if (!byP || !family.jacobian(y, p, j)) return undefined;
  const matrix = new Float64Array(m * m);
  const w = family.weight ** 2;
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) matrix[i * m + k] = j[i * n + k];
    matrix[i * m + n] = byP[i];
    matrix[n * m + i] = w * direction[i];
  }
  matrix[n * m + n] = direction[n];
  return matrix;
}

const nudge = 1e-5;

/** dF/dp by differences, one-sided where F ends. */
function byParameter(family: Family, y: Float64Array, p: number): Float64Array | undefined {
  const at = (q: number): Float64Array | undefined => {
    const f = new Float64Array(family.size);
    return family.residual(y, q, f) && f.every(Number.isFinite) ? f : undefined;
  };
  const [above, below] = [at(p + nudge), at(p - nudge)];
  if (above && below) return above.map((f, i) => (f - below[i]) / (2 * nudge));
  const here = at(p);
  if (!here) return undefined;
  if (above) return above.map((f, i) => (f - here[i]) / nudge);
  return below?.map((f, i) => (here[i] - f) / nudge);
}

function dot({ weight, size: n }: Family, a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < n; i++) sum += a[i] * b[i];
  return weight * weight * sum + a[n] * b[n];
}

const distance = (family: Family, a: Float64Array, b: Float64Array): number => {
  const d = a.map((x, i) => x - b[i]);
  return Math.sqrt(dot(family, d, d));
};
