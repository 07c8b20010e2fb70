import { costOfPattern, findPattern } from "./dependence.js";
import type { Pattern } from "./linear-solver.js";
import { type Halt, integrateByOdex, type StretchResult } from "./odex.js";
import { radauIntegrator, type StiffIntegrator, type StiffResult, type StiffStretch } from "./stiff.js";
import { type MethodUsed, methodRace } from "./stiff-switch.js";

export interface IntegrateOptions {
  /** Writes dy/dt at (t, y) into dy. Both arrays are reused: copy what must be kept. */
  readonly rhs: (t: number, y: Float64Array, dy: Float64Array) => void;
  /** State at `from`. */
  readonly start: ArrayLike<number>;
  readonly from: number;
  /** May lie before `from`: time then runs backwards. */
  readonly to: number;
  /** "auto", the default, begins non-stiff and changes as often as the other method gets on at least twice as fast. */
  readonly method?: "auto" | "nonstiff" | "stiff";
  /**
   * For the stiff method: writes d dy_i / d y_j into entries that are 0 before, row by row as in `pattern`, or n x n row-major
   * without one. Left out: by differences. One that is off costs steps, not accuracy.
   */
  readonly jacobian?: (t: number, y: Float64Array, entries: Float64Array) => void;
  /**
   * Where the Jacobian may have entries. Without it and without a `jacobian` it is found by asking the right-hand side at states that are
   * not numbers; where that fails: everywhere, at a cost that grows with n^3.
   */
  readonly pattern?: Pattern;
  /** Relative tolerance of a step, default 1e-9; under 1e-14 it is taken as 1e-14. */
  readonly relative?: number;
  /** Absolute tolerance, in the unit of the state, one for all or one per component; default 1e-12. */
  readonly absolute?: number | ArrayLike<number>;
  /** Times at which the state is wanted, in any order, ends included; those outside `from` to `to` are left out. Default: `to`. */
  readonly outputs?: ArrayLike<number>;
  /** Accepted steps after which the run is given up, default 1e7. */
  readonly maxSteps?: number;
  /** Times, from `from` towards `to`, where the right-hand side jumps or kinks: no step crosses one. */
  readonly stops?: ArrayLike<number>;
}

export type IntegrateEnd = "reached" | { readonly stopped: number; readonly why: Halt };

export interface Integration {
  /** The output times that were reached, in the order in which they were asked for. */
  readonly times: Float64Array;
  /** One state per output time. */
  readonly states: Float64Array[];
  readonly end: IntegrateEnd;
  /** State at `to`, or where the run stopped. */
  readonly last: Float64Array;
  readonly stats: {
    readonly steps: number;
    readonly rejected: number;
    readonly rhs: number;
    readonly jacobians: number;
    readonly factorizations: number;
    /** Which method made the steps. */
    readonly method: MethodUsed;
  };
}

/**
 * Solves dy/dt = rhs(t, y), restarted at every stop: by variable-order extrapolation where it is not stiff, by Radau IIA
 * where it is.
 *
 * At a stop the side before sees only the value before and the side after only the value after, whichever way the
 * right-hand side decides at the stop itself. Outputs between steps are interpolated to the same tolerance, and what they
 * give does not depend on which others are asked.
 *
 * A right-hand side that gives a non-finite number inside a trial step makes the step smaller; where no step is small enough
 * the end says "not-finite". Failure is a value: the outputs reached so far are kept.
 * @throws RangeError where a time, a tolerance or the method is none
 */
export function integrate(o: IntegrateOptions): Integration {
  const direction = o.to < o.from ? -1 : 1;
  const y = Float64Array.from(o.start);
  requireSound(o);
  const asked = Array.from(o.outputs ?? [o.to]).filter(
    (t) => (t - o.from) * direction >= 0 && (o.to - t) * direction >= 0,
  );
  const order = [...asked.keys()].sort((a, b) => (asked[a] - asked[b]) * direction);
  const wanted = order.map((k) => asked[k]);
  const states: Float64Array[] = [];
  const keep = (state: Float64Array): void => {
    states.push(state.slice());
  };
  const stats = { steps: 0, rejected: 0, rhs: 0, jacobians: 0, factorizations: 0 };
  const finish = (end: IntegrateEnd): Integration => {
    // As they were asked for.
    const reached = [...states.keys()].sort((a, b) => order[a] - order[b]);
    return {
      times: Float64Array.from(reached, (k) => wanted[k]),
      states: reached.map((k) => states[k]),
      end,
      last: y,
      stats: { ...stats, method: method.used() },
    };
  };
  const relative = Math.max(o.relative ?? 1e-9, 1e-14);
  const method = methodOf(o, y.length, relative);
  if (!y.every(Number.isFinite)) return finish({ stopped: o.from, why: "not-finite" });
  const floor = 1e-150; // a tolerance of 0 would divide 0 by 0 where a state is 0
  const absolute =
    typeof o.absolute === "object"
      ? Array.from(o.absolute, (a) => Math.max(a, floor))
      : Math.max(o.absolute ?? 1e-12, floor);
  const maxSteps = o.maxSteps ?? 1e7;
  let from = o.from;
  for (const to of [...inside(o.stops ?? [], o.from, o.to), o.to]) {
    while (states.length < wanted.length && wanted[states.length] === from) keep(y);
    if (to === from || y.length === 0) continue;
    let count = states.length;
    while (count < wanted.length && (to - wanted[count]) * direction >= 0) count++;
    const outputs = wanted.slice(states.length, count);
    const stretch = { rhs: o.rhs, from, to, relative, absolute, maxSteps: maxSteps - stats.steps, outputs };
    const result = method.run(stretch, y, keep);
    stats.steps += result.steps;
    stats.rejected += result.rejected;
    stats.rhs += result.rhs;
    stats.jacobians += result.jacobians ?? 0;
    stats.factorizations += result.factorizations ?? 0;
    if (result.halt !== undefined) return finish({ stopped: result.t, why: result.halt });
    from = to;
  }
  while (states.length < wanted.length) keep(y);
  return finish("reached");
}

const methods = ["auto", "nonstiff", "stiff"];

function requireSound({ from, to, outputs, stops, method, relative, absolute, maxSteps }: IntegrateOptions): void {
  const finite = (...numbers: number[]): boolean => numbers.every(Number.isFinite);
  if (!finite(from, to)) throw new RangeError("`from` and `to` must be finite");
  if (!finite(...Array.from(outputs ?? []), ...Array.from(stops ?? [])))
    throw new RangeError("`outputs` and `stops` must be finite");
  const tolerances = [relative ?? 0, ...(typeof absolute === "object" ? Array.from(absolute) : [absolute ?? 0])];
  if (!tolerances.every((x) => x >= 0)) throw new RangeError("tolerances must be numbers, not below zero");
  if (method !== undefined && !methods.includes(method)) throw new RangeError(`no method '${method}'`);
  if (Number.isNaN(maxSteps)) throw new RangeError("`maxSteps` must be a number");
}

interface Method {
  run(p: StiffStretch, y: Float64Array, output: (y: Float64Array) => void): StretchResult & Partial<StiffResult>;
  used(): MethodUsed;
}

function methodOf(o: IntegrateOptions, size: number, relative: number): Method {
  if (o.method === "nonstiff") return { run: integrateByOdex, used: () => "nonstiff" };
  const stiff = (): StiffIntegrator => {
    let made: StiffIntegrator | undefined;
    return (p, y, output) => {
      if (made) return made(p, y, output);
      const ask = o.pattern === undefined && o.jacobian === undefined;
      const found = ask ? findPattern(o.rhs, p.from, y) : undefined;
      made = radauIntegrator({ ...o, size, ...(found && { pattern: found }) }, relative);
      const result = made(p, y, output);
      const cost = ask ? costOfPattern(size) : 0;
      return { ...result, rhs: result.rhs + cost, work: result.work + cost };
    };
  };
  return o.method === "stiff" ? { run: stiff(), used: () => "stiff" } : methodRace(stiff);
}

/** The stops strictly between, sorted in the direction of time, each once, none closer to its neighbour than rounding allows. */
function inside(stops: ArrayLike<number>, from: number, to: number): number[] {
  const direction = to < from ? -1 : 1;
  const apart = 16 * Number.EPSILON * Math.max(Math.abs(from), Math.abs(to));
  const kept: number[] = [];
  let before = from;
  for (const t of Array.from(stops).sort((a, b) => (a - b) * direction)) {
    if ((t - before) * direction <= apart || (to - t) * direction <= apart) continue;
    kept.push(t);
    before = t;
  }
  return kept;
}
