import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import { integrate } from "../numerics/integrate.js";
import { bindKinetics } from "./kinetics.js";

/** A closed vessel of stirred bodies at one temperature: what reacts in it, and what it held. SI. */
export interface Flask {
  readonly plant: Plant;
  readonly chemistry: Chemistry;
  /** Constants, then the temperature: the tail of an Env. */
  readonly constants: ArrayLike<number>;
  /** Concentrations at the start, node by node: start[node * species + i]. */
  readonly start: Float64Array;
}

/**
 * Concentrations in a closed vessel: dc/dt = (sum of flow * (c from - c)) / V + R(c), integrated to 1e-11 of each step.
 * @param times  s after the start, ascending, from 0 on
 * @returns one state per time, laid out as `start`; undefined where the integration gave up
 */
export function followFlask(flask: Flask, times: Float64Array): Float64Array[] | undefined {
  const { plant, chemistry, constants, start } = flask;
  const n = chemistry.species.length;
  const { size, volume } = plant.columns;
  const { from, to, flow } = plant;
  const scale = scaleOf(start, n);
  const kinetics = bindKinetics(chemistry, constants, scale, "limited");
  const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
    for (let node = 0; node < size; node++) kinetics.production(y, node * n, dy, node * n);
    for (let k = 0; k < from.length; k++) {
      const rate = flow[k] / volume[to[k]];
      for (let i = 0; i < n; i++) dy[to[k] * n + i] += rate * (y[from[k] * n + i] - y[to[k] * n + i]);
    }
  };
  const end = times[times.length - 1] ?? 0;
  if (end === 0) return Array.from(times, () => start.slice());
  const run = integrate({
    rhs,
    start: start.map((c, k) => c / scale[k % n]),
    from: 0,
    to: end,
    outputs: times,
    relative: 1e-11,
    absolute: 1e-14,
    maxSteps: 20_000,
  });
  if (run.end !== "reached") return undefined;
  return run.states.map((state) => state.map((y, k) => y * scale[k % n]));
}

/** Each species by its own largest start; one that is not there at the start by the largest of all. */
function scaleOf(start: Float64Array, n: number): Float64Array {
  const scale = new Float64Array(n);
  start.forEach((c, k) => {
    scale[k % n] = Math.max(scale[k % n], c);
  });
  const largest = scale.reduce((most, c) => Math.max(most, c), 0) || 1;
  return scale.map((c) => c || largest);
}
