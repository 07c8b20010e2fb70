import { type LinearTheory, linearTheory } from "../fit/covariance.js";
import { constantSlope, fullJacobian } from "../fit/jacobian.js";
import { networkModel } from "../fit/network-model.js";
import { prepare } from "../fit/prepare.js";
import { problemWith } from "../fit/problem.js";
import { priorsOf } from "../fit/settle.js";
import type { Network } from "../model/network.js";
import type { Reading, Trial } from "../model/trial.js";
import { collector } from "../problems/report.js";
import type { Unit } from "../units/unit.js";
import type { PlannedNoise } from "./noise.js";

/** How well a planned test would tell a parameter. SI. */
export interface ExpectedParameter {
  readonly name: string;
  readonly unit: Unit;
  readonly value: number;
  /** Undefined where the test says nothing about it by itself. */
  readonly sd: number | undefined;
  /** 95 %, cut at the bounds. */
  readonly interval: readonly [number, number] | undefined;
  /** True where the interval spans more than half of the bounds, or the test says nothing. */
  readonly untold: boolean;
}

/** What linear theory expects of a test at the values of the file. */
export interface Expected {
  readonly parameters: readonly ExpectedParameter[];
  /** Groups that move the curve as one: none of their members is told by itself. */
  readonly confounded: readonly (readonly string[])[];
  /** Weighted derivatives, by unknown: rows of the information that each sample gives. */
  readonly columns: readonly Float64Array[];
  readonly observations: number;
}

/** The trial as it would be logged: its readings hold what is expected at the wanted times. */
export function asLogged(trial: Trial, times: readonly Float64Array[], curves: readonly Float64Array[]): Trial {
  const readings = trial.readings.map((r, i): Reading => {
    const series = {
      file: "",
      at: r.where,
      time: times[i],
      value: curves[i],
      row: new Int32Array(times[i].length),
      timeUnit: { name: "s", factor: 1, offset: 0, dimension: [0, 0, 1, 0, 0, 0, 0] as const },
      valueUnit: r.unit,
      missing: 0,
    };
    return { ...r, series, stages: [], doubts: [], censored: undefined, leaveOut: [] };
  });
  return { ...trial, readings };
}

/**
 * Expected intervals by the information of the fit itself: its derivatives, its linear terms, the declared `±`.
 * @param logged the trial with what is expected in its readings
 * @returns undefined where the values make no vessel
 */
export function expectedOf(
  network: Network,
  logged: Trial,
  noise: readonly PlannedNoise[],
  free: readonly string[] | undefined,
): Expected | undefined {
  const { report } = collector();
  const setup = prepare(networkModel(network), network, [logged], free, report, true);
  if (!setup) return undefined;
  const weight = new Float64Array(setup.observations);
  for (const b of setup.blocks) {
    const { sd } = noise[b.reading];
    b.measured.forEach((c, i) => {
      weight[b.from + i] = 1 / sd(c);
    });
  }
  const problem = problemWith(setup, weight, priorsOf(setup, 1));
  const n = setup.coordinates.length;
  const x = new Float64Array(n + setup.held.length);
  setup.coordinates.forEach((c, j) => {
    x[j] = c.fromSi(c.start);
  });
  const at = problem.evaluate(x);
  if (!at) return undefined;
  const columns = fullJacobian(problem, x, at);
  const signal = Math.sqrt(
    setup.blocks.reduce((sum, b) => sum + b.measured.reduce((s, y, i) => s + (y * weight[b.from + i]) ** 2, 0), 0),
  );
  const theory = linearTheory(
    columns,
    columns.map((_, j) => (j < x.length ? 1e-6 * signal : 0)),
  );
  const constants = setup.constants.flatMap((c) => {
    const shift = constantSlope(problem, x, at, c);
    return shift ? [theory.respond(shift)] : [];
  });
  const parameters = setup.coordinates.map((c, j): ExpectedParameter => {
    const variance = theory.inverse[j * theory.n + j] + constants.reduce((sum, d) => sum + d[j] * d[j], 0);
    const sd = Number.isFinite(variance) ? Math.sqrt(variance) * Math.abs(c.slope(x[j])) : undefined;
    const half = sd === undefined ? Number.POSITIVE_INFINITY : 1.96 * sd;
    const low = Math.max(c.lower, c.start - half);
    const high = Math.min(c.upper, c.start + half);
    const wide = Number.isFinite(c.upper - c.lower) ? high - low > 0.5 * (c.upper - c.lower) : half > Math.abs(c.start);
    return {
      name: c.name,
      unit: c.unit,
      value: c.start,
      sd,
      interval: Number.isFinite(high - low) ? [low, high] : undefined,
      untold: sd === undefined || wide,
    };
  });
  const names = setup.coordinates.map((c) => c.name);
  return { parameters, confounded: confoundedIn(theory, names), columns, observations: setup.observations };
}

function confoundedIn({ blind }: LinearTheory, names: readonly string[]): string[][] {
  return blind.map((v) => names.filter((_, j) => Math.abs(v[j]) > 1e-3)).filter((group) => group.length > 0);
}
