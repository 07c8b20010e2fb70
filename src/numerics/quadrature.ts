export interface QuadratureOptions {
  /** Points inside where f jumps, kinks or peaks. */
  readonly breaks?: ArrayLike<number>;
  /** Wanted relative error, default 1e-10. */
  readonly relative?: number;
  /** Wanted absolute error, default 0. */
  readonly absolute?: number;
  /** Pieces after which it is given up, default 2000. */
  readonly maxPieces?: number;
}

export interface Quadrature {
  readonly value: number;
  /** Estimated absolute error, on the safe side for smooth pieces. */
  readonly error: number;
  readonly converged: boolean;
  readonly evaluations: number;
}

/** One piece of the interval. */
interface Piece {
  readonly from: number;
  readonly to: number;
  readonly value: number;
  readonly error: number;
}

/**
 * Integral of f from `from` to `to`, either of which may be infinite, by bisecting the worst piece (7 and 15 point
 * Gauss-Kronrod). f is never called at the ends or at a break.
 * A non-finite value of f makes the result non-finite and `converged` false.
 * @see R. Piessens et al., QUADPACK, Springer 1983 (QAG and its error estimate; QAGI's transform for infinite ranges)
 */
export function quadrature(f: (x: number) => number, from: number, to: number, o: QuadratureOptions = {}): Quadrature {
  if (from === to) return { value: 0, error: 0, converged: true, evaluations: 0 };
  if (to < from) {
    const turned = quadrature(f, to, from, o);
    return { ...turned, value: -turned.value };
  }
  const inside = Array.from(o.breaks ?? []).filter((x) => x > from && x < to);
  const edges = [from, ...[...new Set(inside)].sort((a, b) => a - b), to];
  if (from === Number.NEGATIVE_INFINITY && to === Number.POSITIVE_INFINITY && edges.length === 2) edges.splice(1, 0, 0);
  const pieces = edges.slice(1).map((end, k) => finite(f, edges[k], end));
  const jobs = pieces.map(({ g, from, to }) => ({ g, ...piece(g, from, to) }));
  let evaluations = 15 * jobs.length;
  const maxPieces = o.maxPieces ?? 2000;
  for (;;) {
    const value = jobs.reduce((sum, j) => sum + j.value, 0);
    const error = jobs.reduce((sum, j) => sum + j.error, 0);
    const enough =
      Number.isFinite(value) && error <= Math.max(o.absolute ?? 0, (o.relative ?? 1e-10) * Math.abs(value));
    if (enough || !Number.isFinite(value)) return { value, error, converged: enough, evaluations };
    const worst = jobs.reduce((w, j, k) => (j.error > jobs[w].error ? k : w), 0);
    const { g, from: a, to: b } = jobs[worst];
    const middle = (a + b) / 2;
    const exhausted = jobs.length >= maxPieces || b - a <= 64 * Number.EPSILON * Math.max(Math.abs(a), Math.abs(b));
    if (exhausted) return { value, error, converged: false, evaluations };
    jobs[worst] = { g, ...piece(g, a, middle) };
    jobs.push({ g, ...piece(g, middle, b) });
    evaluations += 30;
  }
}

/** The same integral over a finite range: x = a + u / (1 - u), or its mirror image. */
function finite(
  f: (x: number) => number,
  from: number,
  to: number,
): { g: (u: number) => number; from: number; to: number } {
  if (Number.isFinite(from) && Number.isFinite(to)) return { g: f, from, to };
  const sign = Number.isFinite(from) ? 1 : -1;
  const start = sign > 0 ? from : to;
  return { g: (u) => f(start + (sign * u) / (1 - u)) / (1 - u) ** 2, from: 0, to: 1 };
}

function piece(f: (x: number) => number, from: number, to: number): Piece {
  const middle = (from + to) / 2;
  const half = (to - from) / 2;
  const below = new Float64Array(7);
  const above = new Float64Array(7);
  const centre = f(middle);
  let kronrod = centre * kronrodWeights[7];
  let gauss = centre * gaussWeights[3];
  let size = Math.abs(kronrod);
  for (let k = 0; k < 7; k++) {
    below[k] = f(middle - half * nodes[k]);
    above[k] = f(middle + half * nodes[k]);
    kronrod += kronrodWeights[k] * (below[k] + above[k]);
    size += kronrodWeights[k] * (Math.abs(below[k]) + Math.abs(above[k]));
    if (k % 2 === 1) gauss += gaussWeights[k >> 1] * (below[k] + above[k]);
  }
  let spread = kronrodWeights[7] * Math.abs(centre - kronrod / 2);
  for (let k = 0; k < 7; k++) {
    spread += kronrodWeights[k] * (Math.abs(below[k] - kronrod / 2) + Math.abs(above[k] - kronrod / 2));
  }
  const raw = Math.abs((kronrod - gauss) * half);
  const scale = spread * half;
  const sharpened = scale > 0 && raw > 0 ? scale * Math.min(1, ((200 * raw) / scale) ** 1.5) : raw;
  const rounding = 50 * Number.EPSILON * size * half;
  return { from, to, value: kronrod * half, error: sharpened <= rounding ? Math.min(sharpened, rounding) : sharpened };
}

/** Abscissae above 0 of the 15-point rule, every second one of the 7-point rule; weights (from memory, held by the tests). */
const nodes = [
  0.9914553711208126, 0.9491079123427585, 0.8648644233597691, 0.7415311855993945, 0.5860872354676911,
  0.4058451513773972, 0.20778495500789848,
];
const kronrodWeights = [
  0.022935322010529224, 0.06309209262997856, 0.10479001032225019, 0.14065325971552592, 0.1690047266392679,
  0.19035057806478542, 0.20443294007529889, 0.20948214108472782,
];
const gaussWeights = [0.1294849661688697, 0.27970539148927664, 0.3818300505051189, 0.4179591836734694];
