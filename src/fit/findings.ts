import { roughness } from "../data/noise.js";
import { chiSquareQuantile, fQuantile } from "../numerics/distributions.js";
import { type Code, type DataOf, problem } from "../problems/report.js";
import { formatQuantity } from "../units/format.js";
import type { Estimates } from "./estimates.js";
import type { NotLinear } from "./profiles.js";
import type { FitFinding, FittedProfile, FittedReading, FoundOptimum, LackOfFit } from "./result.js";
import type { Setup } from "./setup.js";

/** What the findings look at. */
export interface Ended {
  readonly setup: Setup;
  readonly estimates: Estimates;
  /** One per block of the setup, in its order. */
  readonly readings: readonly FittedReading[];
  readonly optima: readonly FoundOptimum[];
  readonly converged: boolean;
  readonly cancelled: boolean;
  readonly profiles: readonly FittedProfile[];
  /** Parameters whose linear interval does not hold, where there are no profiles. */
  readonly notLinear: readonly NotLinear[];
  readonly lackOfFit: LackOfFit | undefined;
}

/** Everything that a reader of the fit must know, the gravest first. */
export function findingsOf(ended: Ended): FitFinding[] {
  return [
    ...howItEnded(ended),
    ...explainsNothing(ended),
    ...ruledByOne(ended),
    ...contradicted(ended),
    ...lacking(ended),
    ...cannotTell(ended),
    ...bounds(ended),
    ...crooked(ended),
    ...correlated(ended),
    ...residuals(ended),
    ...unequal(ended),
    ...others(ended),
  ];
}

function say<C extends Code>(
  { setup }: Ended,
  code: C,
  data: DataOf<C>,
  about: readonly string[],
  evidence: FitFinding["evidence"],
): FitFinding {
  const { message, fix } = problem(code, setup.network.at, data);
  return { code, message, fix, evidence, about };
}

function howItEnded(e: Ended): FitFinding[] {
  const { evaluations } = e.setup.cost;
  if (e.cancelled) return [say(e, "fit-cancelled", { evaluations }, [], { evaluations })];
  return e.converged ? [] : [say(e, "fit-not-converged", { evaluations }, [], { evaluations })];
}

/** Weighted sums of squares that a fit leaves, and that a flat line through each reading would. */
export function flatLines(readings: readonly FittedReading[]): { readonly fitted: number; readonly flat: number } {
  let [fitted, flat] = [0, 0];
  for (const { measured, residual, weight } of readings) {
    let [sum, total] = [0, 0];
    for (let i = 0; i < weight.length; i++) {
      total += weight[i] ** 2;
      sum += weight[i] ** 2 * measured[i];
    }
    const level = sum / total;
    for (let i = 0; i < weight.length; i++) {
      fitted += (weight[i] * residual[i]) ** 2;
      flat += (weight[i] * (measured[i] - level)) ** 2;
    }
  }
  return { fitted, flat };
}

/** Is a flat line through each reading as good? */
function explainsNothing(e: Ended): FitFinding[] {
  if (e.cancelled || e.setup.blocks.some((b) => b.declared.of || b.censored)) return [];
  const { fitted, flat } = flatLines(e.readings);
  return fitted >= flat && flat > 0 ? [say(e, "explains-nothing", { times: fitted / flat }, [], { fitted, flat })] : [];
}

/** Does one reading hold the fit against all others? */
function ruledByOne(e: Ended): FitFinding[] {
  const { ruledBy } = e.estimates;
  if (!ruledBy) return [];
  const { observation, leverage, off } = ruledBy;
  const block = e.setup.blocks.find((b) => observation < b.from + b.time.length);
  if (!block) return [];
  const share = 1 - ruledBy.without / ruledBy.whole;
  const seconds = block.time[observation - block.from];
  const time = formatQuantity(seconds, e.setup.network.units.time);
  const atInjection = e.setup.trials[block.trial].injections.some((i) => i.start === seconds);
  return [
    say(e, "one-reading-rules", { key: block.key, time, share, atInjection }, [block.key], {
      share,
      leverage,
      off,
      seconds,
    }),
  ];
}

/** Combinations that leave the curve as it is, as far as parameters take part. */
function cannotTell(e: Ended): FitFinding[] {
  const { plain, unknowns } = e.estimates;
  const n = e.setup.coordinates.length;
  return plain.blind.flatMap((vector) => {
    const most = vector.reduce((m, v) => Math.max(m, Math.abs(v)), 0);
    const about = unknowns.filter((_, j) => Math.abs(vector[j]) > 1e-2 * most);
    if (!about.some((name) => unknowns.indexOf(name) < n)) return [];
    const evidence = Object.fromEntries(about.map((name) => [name, vector[unknowns.indexOf(name)] / most]));
    return [say(e, "cannot-tell", { names: about }, about, evidence)];
  });
}

function bounds(e: Ended): FitFinding[] {
  return e.estimates.parameters.flatMap((p, j) => {
    const { lower, upper } = e.setup.coordinates[j];
    const { name } = p;
    const evidence = { value: p.value, lower, upper };
    if (p.atBound) {
      const bound = formatQuantity(p.atBound === "lower" ? lower : upper, p.unit);
      return [say(e, "parameter-at-bound", { name, side: p.atBound, bound }, [name], evidence)];
    }
    const whole = e.estimates.uncut[j];
    if (!whole) return [];
    const [low, high] = [whole[0] < lower, whole[1] > upper];
    const intervals = { ...evidence, from: whole[0], to: whole[1] };
    if (low && high) return [say(e, "wide-interval", { name }, [name], intervals)];
    return low || high ? [say(e, "interval-cut", { name, side: low ? "lower" : "upper" }, [name], intervals)] : [];
  });
}

/** Intervals that linear theory gets wrong by a third or more on a side. */
function crooked(e: Ended): FitFinding[] {
  const guessed = e.notLinear.map(({ name, times }) =>
    say(e, "interval-not-linear", { name, times }, [name], { times }),
  );
  const profiled = e.profiles.flatMap(({ name, unit, interval95: [low, high], ends }) => {
    const p = e.estimates.parameters.find((q) => q.name === name);
    if (!p?.interval95) return [];
    const sides = [low, high].map((end, k) => {
      const linear = Math.abs((p.interval95 as readonly [number, number])[k] - p.value);
      return end === undefined ? Number.POSITIVE_INFINITY : Math.abs(end - p.value) / linear;
    });
    if (sides.every((s) => s > 0.75 && s < 1.33)) return [];
    const text = (si: number | undefined): string => (si === undefined ? "no end" : formatQuantity(si, unit, 4));
    const [from, to] = p.interval95;
    const data = {
      name,
      from: text(low),
      to: text(high),
      linear: [text(from), text(to)] as const,
      step: ends.includes("step"),
    };
    const evidence = { from: low ?? "no end", to: high ?? "no end", linearFrom: from, linearTo: to };
    return [say(e, "interval-by-profile", data, [name], evidence)];
  });
  return [...guessed, ...profiled];
}

function correlated(e: Ended): FitFinding[] {
  const { names, rows } = e.estimates.correlation;
  return names.flatMap((a, i) =>
    names.slice(i + 1).flatMap((b, k) => {
      const r = rows[i][i + 1 + k];
      return Math.abs(r) > 0.95 ? [say(e, "strongly-correlated", { a, b, r }, [a, b], { correlation: r })] : [];
    }),
  );
}

function residuals(e: Ended): FitFinding[] {
  const { lag1, deviations, significant, effective, strands } = e.estimates.autocorrelation;
  const points = e.setup.observations;
  const told = strands.map(({ block, phi }) => ({ key: e.setup.blocks[block].key, correlation: middle(phi) }));
  const time = strands.reduce((most, s) => Math.max(most, s.time), 0);
  const evidence = { lag1, deviations, points, effective, time };
  const negative = Object.entries(e.estimates.nuisance).filter(([, n]) => n.scale && !(n.scale.value > 0));
  return [
    ...negative.map(([key, n]) => say(e, "scale-not-positive", { key }, [key], { scale: n.scale?.value ?? 0 })),
    ...(significant ? [say(e, "residuals-correlated", { strands: told, points, effective }, [], evidence)] : []),
  ];
}

/**
 * Readings that share one variance for want of `noise:`, though they scatter more than tenfold differently. What a coarse
 * reading drags the curve of a fine one off is smooth, and not counted.
 */
function unequal(e: Ended): FitFinding[] {
  const spreads = e.readings.flatMap(({ key, time, measured, residual }, b) => {
    const { declared, group } = e.setup.blocks[b];
    const spread = roughness(time, residual);
    // What is left of exact data is rounding.
    return declared.noise || residual.length < 4 ? [] : [{ key, group, spread, floor: 1e-9 * rms(measured) }];
  });
  const groups = [...new Set(spreads.map((s) => s.group))];
  return groups.flatMap((group) => {
    const among = spreads.filter((s) => s.group === group).sort((a, b) => a.spread - b.spread);
    const [narrow, wide] = [among[0], among[among.length - 1]];
    const times = wide.spread / Math.max(narrow.spread, narrow.floor);
    if (!(times > 10) || wide.spread <= 1e3 * wide.floor) return [];
    const evidence = { wide: wide.spread, narrow: narrow.spread };
    return [say(e, "spreads-differ", { wide: wide.key, narrow: narrow.key, times }, [wide.key, narrow.key], evidence)];
  });
}

/** Standard deviations of its own, root mean square, that a trial may be off. */
const mostOff = 2;

/**
 * Trials that are off by more than the errors that all their readings declare: twice these on the average, and by a chi-square
 * that these would give once in a thousand times (common practice).
 */
function contradicted(e: Ended): FitFinding[] {
  const { blocks, trials } = e.setup;
  return trials.flatMap((trial, t) => {
    const own = e.readings.flatMap((reading, b) => (blocks[b].trial === t ? [{ reading, block: blocks[b] }] : []));
    if (own.length === 0 || own.some(({ block }) => !block.declared.noise || block.censored)) return [];
    const offs = own.map(({ reading: { key, residual, weight } }) => ({
      key,
      count: residual.length,
      square: residual.reduce((sum, r, i) => sum + (r * weight[i]) ** 2, 0),
    }));
    const [square, count] = [offs.reduce((s, o) => s + o.square, 0), offs.reduce((s, o) => s + o.count, 0)];
    const off = Math.sqrt(square / count);
    if (!(off > mostOff) || !(square > chiSquareQuantile(0.999, count))) return [];
    const worst = offs.reduce((a, b) => (b.square / b.count > a.square / a.count ? b : a));
    const most = Math.sqrt(worst.square / worst.count);
    const data = { trial: trial.title, key: worst.key, off: most, alone: trials.length === 1 };
    return [say(e, "trial-contradicted", data, [worst.key], { chiSquare: square, points: count, off: most })];
  });
}

/** The chance below which a network is said to miss what repeats show. */
const unlikely = 0.01;

function lacking(e: Ended): FitFinding[] {
  const { lackOfFit: lack } = e;
  if (!lack || !(lack.p < unlikely)) return [];
  const { f, p, readings, moments, pure, lack: rest } = lack;
  const evidence = { F: f, p, freedom: rest.freedom, pureFreedom: pure.freedom, readings, moments };
  return [say(e, "lack-of-fit", { times: Math.sqrt(f), readings, p }, [], evidence)];
}

/** The middle of the correlations of neighbours. */
const middle = (phi: Float64Array): number => [...phi.slice(1)].sort((a, b) => a - b)[(phi.length - 1) >> 1] ?? 0;

const rms = (y: Float64Array): number => Math.sqrt(y.reduce((sum, v) => sum + v * v, 0) / y.length);

/** Other optima inside the 95 % region of the best one's sum of squares (Beale, J. R. Statist. Soc. B 22 (1960) 41-88). */
function others(e: Ended): FitFinding[] {
  const { freedom, parameters } = e.estimates;
  const k = parameters.length;
  const best = e.optima[0];
  if (!best || freedom === 0) return [];
  const limit = best.residualSumOfSquares * (1 + (k / freedom) * fQuantile(0.95, k, freedom));
  const close = e.optima
    .slice(1)
    .filter(
      (o) =>
        o.residualSumOfSquares <= limit &&
        parameters.some(
          (p) => p.standardError !== undefined && Math.abs(o.values[p.name] - p.value) > 2 * p.standardError,
        ),
    );
  const evidence = { best: best.residualSumOfSquares, next: close[0]?.residualSumOfSquares ?? 0, limit };
  return close.length > 0 ? [say(e, "several-optima", { others: close.length }, [], evidence)] : [];
}
