import type { Stays } from "../compartments/stays.js";
import { integrate } from "../numerics/integrate.js";
import type { Kinetics } from "./kinetics.js";

/** Tolerances along a tube, in scaled concentrations. */
const tolerance = { relative: 1e-12, absolute: 1e-16, maxSteps: 20_000 };
/** Places along a tube at which it is seen whether something has run out. */
const looks = 32;

/**
 * Carries a parcel through a tube of residence time tau (s): dy/dt = production, an initial-value problem along the length.
 * @param y inlet, scaled; the outlet is written over it
 * @param sensitivity where given (size x size, row-major): becomes d outlet_i / d inlet_j, by the variational equations
 *   dS/dt = J(y) S, S(0) = 1, solved along with the parcel
 * @returns false where the integrator gave up (a stiff or singular law); y is then worthless
 */
export function passTube(kinetics: Kinetics, tau: number, y: Float64Array, sensitivity?: Float64Array): boolean {
  const n = kinetics.size;
  const parcel = new Parcel(kinetics, sensitivity !== undefined);
  parcel.enter(y);
  if (!parcel.stay(tau)) return false;
  for (let i = 0; i < n; i++) y[i] = Math.max(parcel.state[i], 0);
  sensitivity?.set(parcel.state.subarray(n, n + n * n));
  return true;
}

/**
 * How the composition of a parcel leans on its inlet, after each of several stays.
 * @param stays ascending, in the unit that `kinetics` counts by
 * @param inlet scaled
 * @returns size x size each, row-major; undefined where the integrator gave up
 */
export function parcelSlopes(
  kinetics: Kinetics,
  stays: ArrayLike<number>,
  inlet: ArrayLike<number>,
): Float64Array[] | undefined {
  const n = kinetics.size;
  const parcel = new Parcel(kinetics, true);
  parcel.enter(inlet);
  const found: Float64Array[] = [];
  for (let k = 0; k < stays.length; k++) {
    if (!parcel.stay(stays[k])) return undefined;
    found.push(parcel.state.slice(n, n + n * n));
  }
  return found;
}

/** What is still to come of a segregated body counts no more below this, scaled. */
const nothing = 1e-17;

/**
 * Carries parcels through a body in which each stays by itself: outlet = integral of g(x) y(x) dx, g the density of stays and
 * y(x) a parcel that reacts as in a batch; the integral is followed along with the parcel, under the same error control, and
 * so is that of g alone, by which it is divided: what does not react passes unchanged.
 *
 * Arguments and result as for `passTube`; `kinetics` per unit of the mean stay.
 * @see P.V. Danckwerts, Chem. Eng. Sci. 8 (1958) 93-102
 */
export function passSegregated(kinetics: Kinetics, stays: Stays, y: Float64Array, sensitivity?: Float64Array): boolean {
  const n = kinetics.size;
  const width = sensitivity ? n + n * n : n;
  const parcel = new Parcel(kinetics, sensitivity !== undefined, stays);
  parcel.enter(y);
  const made = new Float64Array(n);
  let rest = 1;
  for (const mark of stays.from > 0 ? [stays.from, ...stays.marks] : stays.marks) {
    if (!parcel.stay(mark)) return false;
    rest = stays.washout(mark);
    kinetics.production(parcel.state, 0, made, 0);
    if (made.every((m) => Math.abs(m) * mark * rest < nothing)) break;
  }
  const { state } = parcel;
  const total = state[2 * width] + rest;
  const mean = (k: number, least: number): number => (state[width + k] + rest * Math.max(state[k], least)) / total;
  for (let i = 0; i < n; i++) y[i] = Math.max(mean(i, 0), 0);
  if (sensitivity) for (let e = 0; e < n * n; e++) sensitivity[e] = mean(n + e, Number.NEGATIVE_INFINITY);
  return true;
}

/**
 * A parcel on its way. `state`: its composition y, then, where asked, S = dy/d(inlet), row-major; with stays, the integrals
 * of g y and g S beside them, and of g.
 */
class Parcel {
  state: Float64Array;
  private readonly rhs: Rhs;
  private at = 0;

  constructor(
    private readonly kinetics: Kinetics,
    private readonly sensitive: boolean,
    stays?: Stays,
  ) {
    const n = kinetics.size;
    const width = sensitive ? n + n * n : n;
    this.state = new Float64Array(stays ? 2 * width + 1 : width);
    const own = sensitive ? withSensitivity(kinetics) : plain(kinetics);
    this.rhs = stays ? gathering(own, stays, width) : own;
  }

  enter(y: ArrayLike<number>): void {
    const n = this.kinetics.size;
    this.at = 0;
    this.state.fill(0);
    this.state.set(y);
    if (this.sensitive) for (let i = 0; i < n; i++) this.state[n + i * n + i] = 1;
  }

  /** Goes on until it has stayed for `end` in all; false where the integrator gave up. */
  stay(end: number): boolean {
    const { kinetics, rhs } = this;
    const n = kinetics.size;
    // A law that does not fade with its reactant (zero order) stops short where that runs out; each can run out once.
    for (let times = 0; times <= n; times++) {
      const from = this.at;
      const outputs = kinetics.endures
        ? Array.from({ length: looks }, (_, k) => from + ((end - from) * (k + 1)) / looks)
        : [end];
      const run = integrate({ rhs, start: this.state, from, to: end, outputs, ...tolerance });
      if (run.end !== "reached") return false;
      const passed = kinetics.endures ? run.states.findIndex((s) => overdrawn(s, n) >= 0) : -1;
      if (passed < 0) {
        this.state = run.states[run.states.length - 1];
        this.at = end;
        return true;
      }
      const stop = backToZero(kinetics, rhs, run.states[passed], run.times[passed]);
      if (!stop) return false;
      useUp(kinetics, stop.state, stop.gone, this.sensitive);
      this.state = stop.state;
      this.at = stop.time;
    }
    return false;
  }
}

type Rhs = (t: number, y: Float64Array, dy: Float64Array) => void;

const plain =
  (kinetics: Kinetics): Rhs =>
  (_t, s, ds) =>
    kinetics.production(s, 0, ds, 0);

/** Adds what leaves on the way: g times the first `width` components into the next, and g itself. */
const gathering =
  (own: Rhs, { from, density }: Stays, width: number): Rhs =>
  (x, s, ds) => {
    own(x, s, ds);
    const g = x < from ? 0 : density(x);
    for (let k = 0; k < width; k++) ds[width + k] = g * s[k];
    ds[2 * width] = g;
  };

function withSensitivity(kinetics: Kinetics): Rhs {
  const n = kinetics.size;
  const slope = new Float64Array(n * n);
  return (_t, s, ds) => {
    kinetics.production(s, 0, ds, 0);
    kinetics.jacobian(s, 0, slope, 0);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let sum = 0;
        for (let k = 0; k < n; k++) sum += slope[i * n + k] * s[n + k * n + j];
        ds[n + i * n + j] = sum;
      }
    }
  };
}

/** The species furthest below zero, beyond rounding; -1 where there is none. */
function overdrawn(state: Float64Array, n: number): number {
  let worst = -1;
  for (let i = 0; i < n; i++) if (state[i] < -1e-14 && (worst < 0 || state[i] < state[worst])) worst = i;
  return worst;
}

/** Runs back to the first moment at which a species passed zero, by Newton steps in time. */
function backToZero(
  kinetics: Kinetics,
  rhs: Rhs,
  from: Float64Array,
  at: number,
): { state: Float64Array; time: number; gone: number } | undefined {
  const n = kinetics.size;
  const rate = new Float64Array(n);
  let [state, time, gone] = [from, at, -1];
  for (let k = 0; k < 50; k++) {
    const below = overdrawn(state, n);
    if (below >= 0) gone = below;
    if (Math.abs(state[gone]) <= 1e-14) return { state, time, gone };
    kinetics.production(state, 0, rate, 0);
    const to = time - state[gone] / rate[gone];
    if (!Number.isFinite(to)) return undefined;
    const { end, last } = integrate({ rhs, start: state, from: time, to, ...tolerance });
    if (end !== "reached") return undefined;
    [state, time] = [last, to];
  }
  return undefined;
}

/**
 * Sets a reactant that has run out to zero. The moment t* at which it does moves with the inlet, so sensitivities jump:
 * S+ = S- + (f+ - f-) S_r / f-_r for reactant r.
 */
function useUp(kinetics: Kinetics, state: Float64Array, gone: number, sensitive: boolean): void {
  const n = kinetics.size;
  const before = new Float64Array(n);
  const after = new Float64Array(n);
  state[gone] = Number.MIN_VALUE;
  kinetics.production(state, 0, before, 0);
  state[gone] = 0;
  kinetics.production(state, 0, after, 0);
  if (!sensitive) return;
  for (let j = 0; j < n; j++) {
    const arrival = state[n + gone * n + j] / before[gone];
    for (let i = 0; i < n; i++) state[n + i * n + j] += (after[i] - before[i]) * arrival;
  }
}
