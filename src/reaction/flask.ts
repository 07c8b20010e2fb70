import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import { integrate } from "../numerics/integrate.js";
import { bindKinetics, type Kinetics } from "./kinetics.js";

/** A closed vessel of stirred bodies at one temperature: what reacts in it, and what it held. SI. */
export interface Flask {
  readonly plant: Plant;
  readonly chemistry: Chemistry;
  /** Constants, then the temperature: the tail of an Env. */
  readonly constants: ArrayLike<number>;
  /** Concentrations at the start, node by node: start[node * species + i]. */
  readonly start: Float64Array;
}

/** A direction in which a flask moves: the flask `by` to one side and to the other. */
export interface FlaskMove {
  readonly above: Flask;
  readonly below: Flask;
  readonly by: number;
}

/** Concentrations by time, laid out as `start`, and how they move, by direction. */
export interface FlaskCourse {
  readonly states: readonly Float64Array[];
  readonly slopes: readonly (readonly Float64Array[])[];
}

/**
 * Concentrations in a closed vessel, dc/dt = (sum of flow * (c from - c)) / V + R(c), and their derivatives s along directions,
 * ds/dt = J s + df/dp, integrated beside them. df/dp is a central difference of the right-hand side at one state, not of two
 * integrations, so that it is as good as the rate law is smooth.
 * @param times  s after the start, ascending, from 0 on
 * @returns undefined where the integration gave up
 * @see sensitivity equations: M. Caracotsios, W. E. Stewart, Comput. Chem. Eng. 9 (1985) 359-365
 */
export function followFlask(
  flask: Flask,
  times: Float64Array,
  moves: readonly FlaskMove[] = [],
): FlaskCourse | undefined {
  const n = flask.chemistry.species.length;
  const length = flask.start.length;
  const scale = scaleOf(flask);
  const here = bodyOf(flask, scale);
  const sides = moves.map(({ above, below }) => [bodyOf(above, scale), bodyOf(below, scale)] as const);
  const start = new Float64Array(length * (1 + moves.length));
  for (let k = 0; k < length; k++) {
    start[k] = flask.start[k] / scale[k % n];
    moves.forEach(({ above, below, by }, d) => {
      start[(1 + d) * length + k] = (above.start[k] - below.start[k]) / (2 * by * scale[k % n]);
    });
  }
  const [up, down] = [new Float64Array(length), new Float64Array(length)];
  const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
    here.rate(y, dy);
    if (moves.length > 0) here.linearize(y);
    for (let d = 0; d < moves.length; d++) {
      const at = (1 + d) * length;
      sides[d][0].rate(y, up);
      sides[d][1].rate(y, down);
      here.along(y, at, dy);
      for (let k = 0; k < length; k++) dy[at + k] += (up[k] - down[k]) / (2 * moves[d].by);
    }
  };
  const end = times[times.length - 1] ?? 0;
  const run = integrate({ rhs, start, from: 0, to: end || 1e-300, outputs: times, ...tolerance });
  if (run.end !== "reached") return undefined;
  const part = (state: Float64Array, d: number): Float64Array =>
    state.subarray(d * length, (d + 1) * length).map((y, k) => y * scale[k % n]);
  return {
    states: run.states.map((s) => part(s, 0)),
    slopes: moves.map((_, d) => run.states.map((s) => part(s, 1 + d))),
  };
}

const tolerance = { relative: 1e-9, absolute: 1e-12, maxSteps: 20_000 };

/** The balances of a flask in scaled concentrations. */
interface Body {
  /** Writes dy/dt of the first states of y. */
  rate(y: Float64Array, dy: Float64Array): void;
  /** Takes the kinetics' derivatives at y. */
  linearize(y: Float64Array): void;
  /** Writes J s, s the states of y from `at` on, to the same place of dy. */
  along(y: Float64Array, at: number, dy: Float64Array): void;
}

function bodyOf({ plant, chemistry, constants }: Flask, scale: Float64Array): Body {
  const kinetics: Kinetics = bindKinetics(chemistry, constants, scale, "limited");
  const n = kinetics.size;
  const { size, volume } = plant.columns;
  const { from, to, flow } = plant;
  const pace = Float64Array.from(flow, (q, k) => q / volume[to[k]]);
  const slopes = new Float64Array(size * n * n);
  const exchange = (y: Float64Array, at: number, dy: Float64Array): void => {
    for (let k = 0; k < pace.length; k++) {
      const [a, b] = [at + from[k] * n, at + to[k] * n];
      for (let i = 0; i < n; i++) dy[b + i] += pace[k] * (y[a + i] - y[b + i]);
    }
  };
  return {
    rate(y, dy) {
      for (let node = 0; node < size; node++) kinetics.production(y, node * n, dy, node * n);
      exchange(y, 0, dy);
    },
    linearize(y) {
      for (let node = 0; node < size; node++) kinetics.jacobian(y, node * n, slopes, node * n * n);
    },
    along(y, at, dy) {
      for (let node = 0; node < size; node++) {
        for (let i = 0; i < n; i++) {
          let sum = 0;
          for (let j = 0; j < n; j++) sum += slopes[(node * n + i) * n + j] * y[at + node * n + j];
          dy[at + node * n + i] = sum;
        }
      }
      exchange(y, at, dy);
    },
  };
}

/**
 * Each species by its own largest start, but by no less than a millionth of the largest among those that reactions link it with
 * (which are counted alike); one that is not there at the start by that largest.
 */
function scaleOf({ start, chemistry: { species, reactions } }: Flask): Float64Array {
  const n = species.length;
  const own = new Float64Array(n);
  start.forEach((c, k) => {
    own[k % n] = Math.max(own[k % n], c);
  });
  const linked = own.slice();
  for (let pass = 0; pass < n; pass++) {
    for (const { makes } of reactions) {
      const most = makes.reduce((m, { species: i }) => Math.max(m, linked[i]), 0);
      for (const { species: i } of makes) linked[i] = most;
    }
  }
  const largest = own.reduce((most, c) => Math.max(most, c), 0) || 1;
  return own.map((c, i) => (c > 0 ? Math.max(c, 1e-6 * linked[i]) : linked[i] || largest));
}
