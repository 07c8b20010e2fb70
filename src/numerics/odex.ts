import { Solver } from "odex";

/** Why an integration ended early. */
export type Halt = "step-too-small" | "too-many-steps" | "not-finite";

/** One smooth stretch of an initial-value problem: the right-hand side has no jump inside. */
export interface Stretch {
  readonly rhs: (t: number, y: Float64Array, dy: Float64Array) => void;
  readonly from: number;
  readonly to: number;
  readonly relative: number;
  readonly absolute: number | readonly number[];
  readonly maxSteps: number;
  /** Times inside the stretch, in its direction, at which the state is wanted. */
  readonly outputs: ArrayLike<number>;
  /** Work, in evaluations of the right-hand side, after which it pauses at the next accepted step; default: never. */
  readonly budget?: number;
}

export interface StretchResult {
  /** Where it ended: `to`, or the last accepted time. */
  readonly t: number;
  readonly halt?: Halt;
  /** The budget is used up; `t` is where to go on. */
  readonly paused?: true;
  readonly steps: number;
  readonly rejected: number;
  readonly rhs: number;
}

/** Thrown through `odex`, which has no other way out of a step, and caught below. */
class Halted {
  constructor(readonly why: Halt | "paused") {}
}

/** Size of what stands for a derivative that is not a number: so steep that the error test must reject the step. */
const steep = 1e100;
/** Evaluations without an accepted step after which the step size is going nowhere. */
const patience = 50_000;

/**
 * Carries `y` over one stretch by extrapolated midpoint steps of variable order and writes the outputs.
 *
 * `odex` accepts NaN derivatives in silence, has no smallest step and reports the wrong end on failure, so all three are
 * watched here. It sees time as a fraction of the stretch, which keeps its fixed first step (1e-4) inside any interval, and
 * the right-hand side is never asked at the ends themselves but just inside, so that a jump at a stop stays outside.
 *
 * @param y      state, changed in place to the state at the returned `t`
 * @param output called for each output reached, in order; the array is reused
 * @see   E. Hairer, S.P. Nørsett, G. Wanner, Solving Ordinary Differential Equations I, 2nd ed., Springer 1993, sec. II.9
 */
export function integrateByOdex(p: Stretch, y: Float64Array, output: (y: Float64Array) => void): StretchResult {
  const n = y.length;
  const span = p.to - p.from;
  const nudge = Math.max(Math.abs(p.from), Math.abs(p.to), Math.abs(span)) * 2 ** -52;
  const last = Math.abs(span) - nudge;
  const budget = p.budget ?? Number.POSITIVE_INFINITY;
  const state = new Float64Array(n);
  const dy = new Float64Array(n);
  const row = new Float64Array(n);
  let evaluations = 0;
  let steps = 0;
  let accepted = 0;
  let idle = 0;
  let gapSeen = false;
  let finite = true;
  let next = 0;

  const time = (s: number): number => {
    const offset = s * Math.abs(span);
    return p.from + Math.sign(span) * Math.max(nudge, Math.min(offset, last));
  };
  const rhs = (s: number, values: number[]): Float64Array => {
    evaluations++;
    const ahead = s - accepted;
    const stuck = ahead > 0 && ahead < 1e-15 * Math.max(accepted, 1e-10) && accepted < 1 - 1e-12;
    if (stuck || ++idle > patience) throw new Halted(gapSeen ? "not-finite" : "step-too-small");
    state.set(values);
    p.rhs(time(s), state, dy);
    finite = true;
    for (let i = 0; i < n; i++) {
      const scaled = dy[i] * span;
      if (Math.abs(scaled) < steep) dy[i] = scaled;
      else {
        finite = false;
        dy[i] = steep * (1 + (evaluations % 7)); // never the same twice, or the step would look smooth
      }
    }
    if (!finite) gapSeen = true;
    return dy;
  };
  const solver = new Solver(n);
  solver.relativeTolerance = p.relative;
  solver.absoluteTolerance = typeof p.absolute === "number" ? p.absolute : [...p.absolute];
  solver.maxSteps = Number.MAX_SAFE_INTEGER;
  // Always, for it bears on step sizes: the path must not depend on the times asked.
  solver.denseOutput = true;
  // Its look ahead for instability compares slopes by their ratio: near a steady state that is rounding over rounding, and it
  // halves the step for ever. The error test alone is enough.
  solver.stabilityCheckCount = 0;

  let halt: Halt | "paused" | undefined;
  let rejected = 0;
  try {
    rhs(0, Array.from(y));
    if (!finite) throw new Halted("not-finite");
    solver.initialStepSize = firstStep(p, y, dy.slice(), (s, at) => rhs(s, Array.from(at)));
    const outcome = solver.solve(rhs, 0, Array.from(y), 1, (step, xOld, x, values, dense) => {
      if (step === 1) return;
      while (dense && next < p.outputs.length) {
        const s = (p.outputs[next] - p.from) / span;
        if (s > x) break;
        if (s <= xOld) row.set(y);
        else for (let i = 0; i < n; i++) row[i] = dense(i, s);
        output(row);
        next++;
      }
      y.set(values);
      accepted = x;
      steps++;
      idle = 0;
      // With dense output the last evaluation was at the accepted state itself: no smaller step can mend that.
      if (dense && !finite) throw new Halted("not-finite");
      gapSeen = false;
      if (steps >= p.maxSteps && x < 1) throw new Halted("too-many-steps");
      if (evaluations >= budget && x < 1) throw new Halted("paused");
      return;
    });
    rejected = outcome.nReject;
  } catch (thrown) {
    if (!(thrown instanceof Halted)) throw thrown;
    halt = thrown.why;
  }
  const t = p.from + accepted * span;
  if (halt === "paused") return { t, paused: true, steps, rejected, rhs: evaluations };
  if (halt !== undefined) return { t, halt, steps, rejected, rhs: evaluations };
  for (; next < p.outputs.length; next++) output(y);
  return { t: p.to, steps, rejected, rhs: evaluations };
}

/**
 * First step as a fraction of the stretch, by the size of the first two derivatives in units of the tolerance, for a method of
 * eighth order. `odex` takes 1e-4 where this is less.
 * @see Hairer, Nørsett & Wanner (1993), sec. II.4
 */
function firstStep(
  p: Stretch,
  y: Float64Array,
  slope: Float64Array,
  rhs: (s: number, y: number[]) => Float64Array,
): number {
  const n = y.length;
  const scale = y.map(
    (v, i) => (typeof p.absolute === "number" ? p.absolute : p.absolute[i]) + p.relative * Math.abs(v),
  );
  const size = (v: (i: number) => number): number => {
    let sum = 0;
    for (let i = 0; i < n; i++) sum += (v(i) / scale[i]) ** 2;
    return Math.sqrt(sum / n);
  };
  const d0 = size((i) => y[i]);
  const d1 = size((i) => slope[i]);
  const probe = d0 < 1e-5 || d1 < 1e-5 ? 1e-6 : Math.min(1e-3, (0.01 * d0) / d1);
  const beyond = rhs(
    probe,
    Array.from(y, (v, i) => v + probe * slope[i]),
  );
  const d2 = size((i) => beyond[i] - slope[i]) / probe;
  const largest = Math.max(d1, d2);
  return largest < 1e-15 ? 1 : Math.min((0.01 / largest) ** (1 / 9), d0 < 1e-5 ? 1 : 100 * probe);
}
