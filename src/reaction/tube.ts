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
  let state: Float64Array = new Float64Array(sensitivity ? n + n * n : n);
  state.set(y);
  if (sensitivity) for (let i = 0; i < n; i++) state[n + i * n + i] = 1;
  const rhs = sensitivity ? withSensitivity(kinetics) : plain(kinetics);
  let from = 0;
  // A law that does not fade with its reactant (zero order) stops short where that runs out; each can run out once.
  for (let times = 0; times <= n; times++) {
    const outputs = kinetics.endures
      ? Array.from({ length: looks }, (_, k) => from + ((tau - from) * (k + 1)) / looks)
      : [tau];
    const { end, states, times: at } = integrate({ rhs, start: state, from, to: tau, outputs, ...tolerance });
    if (end !== "reached") return false;
    const passed = kinetics.endures ? states.findIndex((s) => overdrawn(s, n) >= 0) : -1;
    if (passed < 0) {
      const last = states[states.length - 1];
      for (let i = 0; i < n; i++) y[i] = Math.max(last[i], 0);
      sensitivity?.set(last.subarray(n));
      return true;
    }
    const stop = backToZero(kinetics, rhs, states[passed], at[passed]);
    if (!stop) return false;
    useUp(kinetics, stop.state, stop.gone, sensitivity !== undefined);
    state = stop.state;
    from = stop.time;
  }
  return false;
}

type Rhs = (t: number, y: Float64Array, dy: Float64Array) => void;

const plain =
  (kinetics: Kinetics): Rhs =>
  (_t, s, ds) =>
    kinetics.production(s, 0, ds, 0);

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
