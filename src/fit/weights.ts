import { countingVariance } from "../data/counting.js";
import type { Reading } from "../model/trial.js";
import type { Env } from "../model/value.js";
import { links } from "../numerics/autoregression.js";
import { chainOf } from "./autocorrelation.js";
import { standFor } from "./censored.js";
import type { Block } from "./observations.js";
import type { Evaluation } from "./problem.js";
import type { Setup } from "./setup.js";

/** Weights of a fit, and how many variances were estimated to get them. */
export interface Weights {
  /** 1 / SI per observation. */
  readonly weight: Float64Array;
  /** Standard deviation of each observation, SI, but for a factor where there is no `noise:`; of censored ones too. */
  readonly sigma: Float64Array;
  /** Sum of ln sigma^2 of the observations, sigma in the unit of their group, and of what hanging together takes from it: the part of the likelihood that weights carry. */
  readonly logVariances: number;
  /** Variances and correlation times that were estimated. */
  readonly variances: number;
  /** True where another fit could change them: they depend on the fitted curve or on the residuals. */
  readonly moving: boolean;
  /** Residuals are in the unit of their one group; otherwise in standard deviations. */
  readonly inUnit: boolean;
  /** Blocks with working values for what is censored, once there is a fit; undefined where all was seen. */
  readonly blocks?: readonly Block[];
}

/**
 * Weights from `noise:` where it is declared; without it all readings of one dimension share one unknown variance, which is
 * estimated group by group where there are several groups (iterated generalised least squares: Seber & Wild, Nonlinear
 * Regression, 1989, section 2.8.8). A relative noise is taken of the fitted curve, of the measured one before there is
 * any, and never below a thousandth of its peak. What is censored counts as likely as the fitted curve makes it.
 */
export function weightsFor(setup: Setup, fitted?: Evaluation & { readonly before: Float64Array }): Weights {
  const weight = new Float64Array(setup.observations);
  const sigmas = new Float64Array(setup.observations);
  const groups = Math.max(...setup.blocks.map((b) => b.group)) + 1;
  const anyNoise = setup.blocks.some((b) => b.declared.noise);
  const anyCensored = setup.blocks.some((b) => b.censored);
  const spread = groups > 1 || anyNoise || anyCensored ? groupSpreads(setup, groups, fitted) : undefined;
  let logVariances = 0;
  let moving = anyCensored;
  const stands: Block[] = [];
  for (const [k, b] of setup.blocks.entries()) {
    const noise = b.declared.noise;
    const floor = floorOf(b.declared, setup.env);
    const relative = noise?.relative ?? 0;
    const counts = countingVariance(b.declared);
    moving ||= relative > 0 || counts !== undefined || (!noise && spread !== undefined);
    const curve = fitted ? fittedCurve(b.time, b.origin, fitted, k) : b.measured;
    const least = 1e-3 * relative * peakOf(curve);
    const values = b.censored ? Float64Array.from(b.measured) : b.measured;
    const information = new Float64Array(b.censored ? b.time.length : 0).fill(1);
    if (!noise && !b.censored) {
      const sigma = spread ? spread[b.group] : b.unit.factor;
      weight.fill(1 / sigma, b.from, b.from + b.time.length);
      sigmas.fill(sigma, b.from, b.from + b.time.length);
      logVariances += b.time.length * 2 * Math.log(sigma / b.unit.factor);
      if (b.hangsTogether) logVariances += logLinks(b);
      stands.push(b);
      continue;
    }
    for (let i = 0; i < b.time.length; i++) {
      const sigma = noise
        ? Math.max(Math.sqrt(floor ** 2 + (relative * curve[i]) ** 2 + (counts?.(curve[i]) ?? 0)), least)
        : spread
          ? spread[b.group]
          : b.unit.factor;
      sigmas[b.from + i] = sigma;
      const side = b.censored?.[i] ?? 0;
      if (side !== 0) {
        // Before there is a fit, what was not seen says nothing.
        const limit = (side < 0 ? b.declared.limits.below : b.declared.limits.above) ?? b.measured[i];
        const stand = fitted ? standFor(side, limit, curve[i], sigma) : undefined;
        weight[b.from + i] = stand ? Math.sqrt(stand.information) / sigma : 0;
        values[i] = stand?.value ?? b.measured[i];
        information[i] = stand?.information ?? 0;
        continue;
      }
      weight[b.from + i] = 1 / sigma;
      logVariances += 2 * Math.log(sigma / b.unit.factor);
    }
    if (b.hangsTogether) logVariances += logLinks(b);
    stands.push(b.censored ? { ...b, measured: values, information } : b);
  }
  const times = setup.blocks.filter((b) => b.declared.correlated === "fitted").length;
  const unknown = new Set(setup.blocks.filter((b) => !b.declared.noise).map((b) => b.group)).size;
  return {
    weight,
    sigma: sigmas,
    logVariances,
    variances: Math.max(1, unknown) + times,
    moving: moving || times > 0,
    inUnit: !spread,
    ...(anyCensored ? { blocks: stands } : {}),
  };
}

/** What hanging together takes from the sum of ln sigma^2. */
const logLinks = (b: Block): number =>
  links(chainOf(b), b.hangsTogether ?? 0).reduce((sum, f) => sum + Math.log(1 - f * f), 0);

/** Standard deviation of each group without `noise:`, SI: of its residuals, or of its data before there are any. */
function groupSpreads(
  setup: Setup,
  groups: number,
  fitted: (Evaluation & { readonly before: Float64Array }) | undefined,
): Float64Array {
  const sum = new Float64Array(groups);
  const count = new Float64Array(groups);
  for (const b of setup.blocks) {
    if (b.declared.noise) continue;
    const mean = b.measured.reduce((s, y) => s + y, 0) / b.measured.length;
    for (let i = 0; i < b.time.length; i++) {
      if (b.censored?.[i]) continue;
      const r = fitted ? fitted.residuals[b.from + i] / fitted.before[b.from + i] : b.measured[i] - mean;
      sum[b.group] += r * r;
      count[b.group]++;
    }
  }
  return sum.map((s, g) => Math.sqrt(s / Math.max(1, count[g])) || 1);
}

/** The declared floor, SI of the concentration. */
const floorOf = ({ noise }: Reading, env: Env): number => noise?.floor?.of(env) ?? 0;

/** Model with its linear terms, SI. */
export function fittedCurve(time: Float64Array, origin: number, at: Evaluation, block: number): Float64Array {
  const { scale, offset, drift } = at.terms[block];
  return at.curves[block].map((c, i) => scale * c + offset + drift * (time[i] - origin));
}

const peakOf = (y: Float64Array): number => y.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
