import { studentTQuantile } from "../numerics/distributions.js";
import { linearInterpolant } from "../numerics/interpolation.js";
import { type Autocorrelation, autocorrelationOf } from "./autocorrelation.js";
import { orthonormalBasis } from "./basis.js";
import { type LinearTheory, linearTheory } from "./covariance.js";
import { hangingTogether } from "./hanging-together.js";
import { constantSlope, fullBasis, fullJacobian } from "./jacobian.js";
import { type OneReading, oneReading } from "./one-reading.js";
import type { Estimate, FittedParameter, Matrix, Nuisance } from "./result.js";
import { freedomOf, type Settled } from "./settle.js";

/** Estimates with their uncertainty, and what the findings need to know of it. */
export interface Estimates {
  readonly parameters: readonly FittedParameter[];
  readonly nuisance: Readonly<Record<string, Nuisance>>;
  readonly correlation: Matrix;
  readonly covariance: Matrix;
  readonly freedom: number;
  /** Those of the intervals: fewer where residuals hang together. */
  readonly told: number;
  readonly autocorrelation: Autocorrelation;
  /** Linear theory of parameters and linear terms as declared facts stand, and the names of these unknowns. */
  readonly plain: LinearTheory;
  readonly unknowns: readonly string[];
  /** Intervals before they were cut at bounds, SI. */
  readonly uncut: readonly (readonly [number, number] | undefined)[];
  /** The t-quantile of the intervals. */
  readonly t: number;
  /** Variance of one weighted residual. */
  readonly variance: number;
  /** What residuals that hang together make of the variance along a change of the weighted curve, over `variance`; undefined where they do not. */
  readonly along: ((change: Float64Array) => number) | undefined;
  /** By coordinate: how all unknowns of the search move with it, the others at their best, and its standard error; u. */
  readonly ways: readonly { readonly along: Float64Array; readonly error: number }[];
  /** Standard deviation that uncertain constants bring to each parameter, SI. */
  readonly carried: readonly number[];
  /** The one reading that rules the fit against all others, if there is one. */
  readonly ruledBy: OneReading | undefined;
}

/**
 * Standard errors, intervals and correlations at the end of a fit.
 * @param stands  a problem of fewer points with the same slopes there, from which the errors follow as well
 */
export function estimatesOf(settled: Settled, stands = settled.problem): Estimates {
  const { problem, x, at } = settled;
  const { setup } = problem;
  const n = setup.coordinates.length;
  const few = stands !== problem && setup.constants.length === 0 && setup.blocks.every((b) => b.doubts.length === 0);
  const there = few ? stands.evaluate(x) : undefined;
  const [of, where] = there ? [stands, there] : [problem, at];
  const columns = fullJacobian(of, x, where);
  // A coordinate that moves the curve by no more than this over its whole range moves it by rounding alone.
  const rounding = 1e-6 * signalOf(problem);
  const nothing = columns.map((_, j) => (j < x.length ? rounding : 0));
  const kept = columns.flatMap((_, j) => (j < n || j >= x.length ? [j] : []));
  const own = kept.map((j) => columns[j]);
  const basis = kept.length < columns.length ? orthonormalBasis(own) : fullBasis(of, x, where);
  const plain = linearTheory(
    own,
    kept.map((j) => nothing[j]),
    basis,
  );
  const whole = setup.held.length > 0 && x.length > n ? linearTheory(columns, nothing) : plain;
  const freedom = freedomOf(problem);
  const variance = freedom > 0 ? at.ofAll / freedom : Number.NaN;
  // What a calibration leaves open bends whole curves: it is carried by itself, and is no reason to call readings correlated.
  const shifts = calibrationShifts(settled);
  const wider = orthonormalBasis(shifts, basis);
  const autocorrelation = autocorrelationOf(setup.blocks, at.residuals, {
    count: wider.length,
    columns: () => (there ? fullBasis(problem, x, at) : wider),
  });
  // Errors that hang together are those of all readings, one after another.
  if (there && autocorrelation.significant) return estimatesOf(settled);
  const hanging = hangingTogether(autocorrelation, plain, basis, wider.slice(basis.length), at.residuals, freedom);
  const slopes = setup.coordinates.map((c, j) => c.slope(x[j]));
  const constants = setup.constants.flatMap((c) => {
    const shift = constantSlope(problem, x, at, c);
    return shift ? [whole.respond(shift)] : [];
  });

  for (const shift of shifts) constants.push(whole.respond(shift));

  const plainAt = (i: number, j: number): number => variance * plain.inverse[i * plain.n + j];
  // In coordinates: the data's part grows with autocorrelation, then come held facts, then constants.
  const wideAt = (i: number, j: number): number => {
    const withFacts = variance * whole.inverse[i * whole.n + j] - plainAt(i, j);
    const carried = constants.reduce((sum, d) => sum + d[i] * d[j], 0);
    return (hanging ? hanging.covariance[i * plain.n + j] : plainAt(i, j)) + withFacts + carried;
  };
  const matrix = (entry: (i: number, j: number) => number): Matrix => ({
    names: setup.coordinates.map((c) => c.name),
    rows: setup.coordinates.map((_, i) => setup.coordinates.map((_, j) => entry(i, j))),
  });
  const told = hanging ? hanging.freedom : freedom;
  const t = told > 0 ? studentTQuantile(0.975, told) : Number.NaN;
  const uncut = setup.coordinates.map((c, j): readonly [number, number] | undefined => {
    const half = t * Math.sqrt(wideAt(j, j)) * slopes[j];
    const value = c.toSi(x[j]);
    return Number.isFinite(half) ? [value - half, value + half] : undefined;
  });
  const parameters = setup.coordinates.map((c, j): FittedParameter => {
    const se = finite(Math.sqrt(plainAt(j, j)) * slopes[j]);
    const whole = uncut[j] ?? [c.lower, c.upper];
    const cut: [number, number] = [Math.max(c.lower, whole[0]), Math.min(c.upper, whole[1])];
    return {
      name: c.name,
      ...(c.trial === undefined ? {} : { ofTrial: { name: c.named.name, trial: setup.trials[c.trial].title } }),
      value: c.toSi(x[j]),
      unit: c.unit,
      standardError: se,
      ...(se !== undefined && hanging
        ? { standardErrorCorrelated: Math.sqrt(hanging.covariance[j * plain.n + j]) * slopes[j] }
        : {}),
      interval95: cut.every(Number.isFinite) ? cut : undefined,
      atBound: x[j] <= c.from ? "lower" : x[j] >= c.to ? "upper" : undefined,
    };
  });
  const { nuisance, names } = nuisanceOf(problem, at, (k) => finite(Math.sqrt(plainAt(n + k, n + k))));
  return {
    ruledBy: there ? undefined : oneReading(basis, at.residuals, setup.observations, freedom),
    parameters,
    nuisance,
    correlation: matrix((i, j) => plainAt(i, j) / Math.sqrt(plainAt(i, i) * plainAt(j, j))),
    covariance: matrix((i, j) => wideAt(i, j) * slopes[i] * slopes[j]),
    freedom,
    told,
    autocorrelation,
    plain,
    unknowns: [...setup.coordinates.map((c) => c.name), ...names],
    uncut,
    t,
    variance,
    along: hanging && ((change) => (hanging.variance / variance) * hanging.along(change)),
    ways: setup.coordinates.map((_, j) => ({
      along: Float64Array.from(x, (_, i) => whole.inverse[i * whole.n + j] / whole.inverse[j * whole.n + j]),
      error: Math.sqrt(variance * whole.inverse[j * whole.n + j]),
    })),
    carried: slopes.map((slope, j) => Math.sqrt(constants.reduce((sum, d) => sum + d[j] * d[j], 0)) * Math.abs(slope)),
  };
}

/** The linear terms of each block in people's units, in the order of the Jacobian's columns: scale, offset, drift. */
function nuisanceOf(
  problem: Settled["problem"],
  at: Settled["at"],
  errorOf: (k: number) => number | undefined,
): { nuisance: Record<string, Nuisance>; names: string[] } {
  const { network, blocks } = problem.setup;
  const perTime = network.units.time;
  const nuisance: Record<string, Nuisance> = {};
  const names: string[] = [];
  for (const [b, block] of blocks.entries()) {
    const unit = block.declared.unit;
    const { scale, offset, drift } = at.terms[b];
    const add = (name: string, value: number, of: Estimate["unit"]): Estimate => {
      const estimate = { value, unit: of, standardError: errorOf(names.length) };
      names.push(`the ${name} of '${block.key}'`);
      return estimate;
    };
    const drifting = {
      name: `${unit.name}/${perTime.name}`,
      factor: unit.factor / perTime.factor,
      offset: 0,
      dimension: unit.dimension.map((d, i) => d - perTime.dimension[i]) as unknown as Estimate["unit"]["dimension"],
    };
    const bare = { name: "", factor: 1, offset: 0, dimension: [0, 0, 0, 0, 0, 0, 0] as const };
    nuisance[block.key] = {
      ...(block.declared.scale === "free" ? { scale: add("scale", scale, bare) } : {}),
      ...(block.declared.baseline !== "none" ? { offset: add("offset", offset, { ...unit, offset: 0 }) } : {}),
      ...(block.declared.baseline === "drift" ? { drift: add("drift", drift, drifting) } : {}),
      ...(block.declared.correlated === "fitted"
        ? { correlation: { value: block.hangsTogether ?? 0, unit: perTime, standardError: undefined } }
        : {}),
    };
  }
  return { nuisance, names };
}

/**
 * Weighted change of the measurements for one standard deviation of each thing that a calibration leaves open, with rows for priors.
 * It is that of the fitted values: the change of what was measured holds the noise itself, and would explain all of it.
 */
function calibrationShifts({ problem: { setup, weight, priors, projectors }, at }: Settled): Float64Array[] {
  return setup.blocks.flatMap((b, k) => {
    const order = Int32Array.from(b.measured.keys()).sort((i, j) => b.measured[i] - b.measured[j]);
    const measured = Float64Array.from(order, (i) => b.measured[i]);
    return b.doubts.map((doubt) => {
      const ofMeasured = linearInterpolant(
        measured,
        Float64Array.from(order, (i) => doubt[i]),
      );
      const shift = new Float64Array(setup.observations + priors.length);
      for (let i = 0; i < doubt.length; i++) {
        const w = weight[b.from + i];
        const fitted = w > 0 ? b.measured[i] - at.residuals[b.from + i] / w : b.measured[i];
        shift[b.from + i] = ofMeasured(fitted) * w;
      }
      projectors[k].apart(shift);
      return shift;
    });
  });
}

/** Length of the weighted measurements. */
function signalOf({ setup, weight }: Settled["problem"]): number {
  let sum = 0;
  for (const b of setup.blocks) {
    for (let i = 0; i < b.measured.length; i++) sum += (b.measured[i] * weight[b.from + i]) ** 2;
  }
  return Math.sqrt(sum);
}

const finite = (v: number): number | undefined => (Number.isFinite(v) ? v : undefined);
