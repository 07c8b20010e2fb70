import { type Reading, readingLabel, type Trial } from "../model/trial.js";
import { type Contrast, type Member, type Pair, pairOf, type TrialOfDay } from "./contrast.js";
import type { Known } from "./figure.js";
import { onlyFlow } from "./recovery.js";
import { heldAgainst, together, type Verdict } from "./repeated.js";
import { ages, type Noisy, standardCurve } from "./standard-curve.js";
import { thresholds } from "./thresholds.js";

const limit = thresholds.across;

/** Two curves at one place, each counted in its own half time. */
export interface Compared {
  readonly at: string;
  /** The one with the larger flow last. */
  readonly trials: readonly [Trial, Trial];
  readonly contrast: Contrast;
  /** What differs, in words. */
  readonly differs: readonly string[];
  /** Larger over smaller flow; undefined where one is not known. */
  readonly flowRatio: number | undefined;
  /** Largest difference of F, the second less the first, at which age in half times, and one standard error of it there. */
  readonly apart: { readonly value: number; readonly age: number; readonly error: number };
  /** By how much F surely (95 %) differs at most, anywhere. */
  readonly atMost: number;
  /** At the larger flow less has left late in the curve (from 90 % on), by so many standard errors: a longer tail; 0 where it is not longer. */
  readonly longer: number;
  /** Variance over squared mean of both, and one standard error of their difference. */
  readonly relative: readonly [number, number];
  readonly relativeError: number;
  /** Flow times mean of both, m3, with one standard error each; undefined where a flow is not known. */
  readonly volumes: readonly [Known, Known] | undefined;
  /** Tracer seen over tracer given in both, one standard error with those of flow and dose; undefined where it is not known. */
  readonly recoveries: readonly [Known, Known] | undefined;
  /** Do flow times mean and recovery agree, where they are known? */
  readonly times: Verdict;
  readonly amounts: Verdict;
}

/** Comparisons of one contrast at one place, judged together. */
export interface Contrasted {
  readonly at: string;
  readonly contrast: Contrast;
  readonly pairs: readonly Compared[];
  /** The chance that noise makes curves that are one differ as much somewhere. */
  readonly chance: number;
  /** `differ`: by more than noise and sampling; `coincide`: within the margin for sure; `open`: neither. */
  readonly verdict: Verdict;
  /** The same of the curves alone, counted in half times; repeats must agree in time and recovery too. */
  readonly shape: Verdict;
}

/** What the trials of a study say together, without a model. */
export interface AcrossTrials {
  readonly contrasts: readonly Contrasted[];
  /** Curves that cannot be compared, and why. */
  readonly left: readonly { readonly trial: Trial; readonly at: string; readonly why: string }[];
}

/**
 * Holds curves of several trials at one place against one another. Every curve is counted in its own half time, so that curves of
 * one shape coincide whatever the flow; what noise makes of a difference is found by drawing it anew (seeded), and all pairs
 * of one contrast are judged together by the largest difference of F in its standard errors.
 * @returns undefined where no place was read in two trials
 * @see equivalence by two one-sided tests: D. J. Schuirmann, J. Pharmacokinet. Biopharm. 15 (1987) 657-680; Monte Carlo tests: A. C. Davison, D. V. Hinkley,
 * Bootstrap Methods and their Application, Cambridge 1997, section 4.2 (both from memory)
 */
export function acrossTrials(days: readonly TrialOfDay[], seed = 1): AcrossTrials | undefined {
  const places = new Map<string, { day: TrialOfDay; reading: Reading }[]>();
  for (const day of days) {
    if (day.options.closed) continue;
    const seen = new Set<string>();
    for (const reading of day.trial.readings) {
      const at = readingLabel(reading);
      if (!reading.series || seen.has(at)) continue;
      seen.add(at);
      places.set(at, [...(places.get(at) ?? []), { day, reading }]);
    }
  }
  const contrasts: Contrasted[] = [];
  const left: { trial: Trial; at: string; why: string }[] = [];
  for (const [at, all] of places) {
    if (all.length < 2) continue;
    const members = all.flatMap(({ day, reading }, k): Member[] => {
      const curve = notComparable(day.trial) ?? standardCurve(day.trial, reading, day.options, 1000 * seed + k);
      if (typeof curve !== "string")
        return [{ day, curve, flow: day.options.throughflow ?? onlyFlow(day.trial), index: k }];
      left.push({ trial: day.trial, at, why: curve });
      return [];
    });
    contrasts.push(...contrastsAt(at, members));
  }
  return contrasts.length + left.length > 0 ? { contrasts, left } : undefined;
}

/** Why the curve of a trial is not that of one vessel in steady flow. */
export function notComparable({ injections, contents, flowLogs }: Trial): string | undefined {
  if (contents || injections.length === 0) return "tracer was inside at the start";
  if (injections.length > 1) return "several injections overlap in it";
  if (injections[0].form.is === "signal") return "a measured inlet gives moments only";
  return flowLogs && flowLogs.size > 0 ? "the flow varied while it was taken" : undefined;
}

const order: readonly Contrast[] = ["repeat", "dosing", "conditions", "flow", "several"];

function contrastsAt(at: string, members: readonly Member[]): Contrasted[] {
  const pairs = members.flatMap((a, i) => members.slice(i + 1).map((b) => pairOf(a, b)));
  let repeats: Float64Array | undefined;
  return order.flatMap((contrast): Contrasted[] => {
    const own = pairs.filter((p) => p.contrast === contrast);
    if (own.length === 0) return [];
    const judged = judge(at, contrast, own, repeats);
    // What tests that should be alike differ by is no effect of what differs elsewhere.
    if (contrast === "repeat" && judged.shape === "differ")
      repeats = ages.map((_, i) => Math.max(...own.map(({ a, b }) => Math.abs(a.curve.F[i] - b.curve.F[i]))));
    return [judged];
  });
}

/** Below it a standard error of F is rounding. */
const finest = 1e-3;

/** Times that the draws of two curves are set against each other. */
const rounds = 2;

const drawsOf = ({ a, b }: Pick<Pair, "a" | "b">): number => Math.min(a.curve.noise.length, b.curve.noise.length);

function judge(at: string, contrast: Contrast, pairs: readonly Pair[], repeats: Float64Array | undefined): Contrasted {
  const looked = pairs.map((p) => look(at, p, repeats));
  const count = rounds * Math.min(...pairs.map((p) => drawsOf(p)));
  const largest = Math.max(...looked.map((l) => l.sure));
  let above = 0;
  for (let k = 0; k < count; k++) if (Math.max(...looked.map((l) => l.noise(k))) >= largest) above++;
  const chance = (1 + above) / (1 + count);
  const compared = looked.map((l) => l.compared);
  const differ = chance <= limit.chance && looked.some((l) => l.beyond >= limit.least);
  const coincide = compared.every((c) => c.atMost < limit.margin);
  const shape: Verdict = differ ? "differ" : coincide ? "coincide" : "open";
  const all: readonly Verdict[] =
    contrast === "repeat" ? [shape, ...compared.flatMap((c) => [c.times, c.amounts])] : [shape];
  return { at, contrast, pairs: compared, chance, verdict: together(all), shape };
}

/** A pair, with the largest difference in standard errors and the same of differences that noise alone makes. */
function look(at: string, { a, b, contrast, differs, flowRatio }: Pair, repeats: Float64Array | undefined) {
  const [one, other] = [a.curve, b.curve];
  const draws = drawsOf({ a, b });
  const count = rounds * draws;
  // Every round pairs the draws anew.
  const drawn = ({ index, curve: { noise } }: Member, k: number): Float64Array =>
    noise[(k + Math.floor(k / draws) * index) % draws];
  const noise = (k: number, i: number): number => drawn(b, k)[i] - drawn(a, k)[i];
  const error = ages.map((_, i) => {
    let square = 0;
    for (let k = 0; k < count; k++) square += noise(k, i) ** 2;
    return Math.hypot(Math.sqrt(square / count), finest);
  });
  const difference = ages.map((_, i) => other.F[i] - one.F[i]);
  const doubt = ages.map((_, i) => one.doubt[i] + other.doubt[i] + (repeats?.[i] ?? 0));
  let [sure, beyond, most, worst, longer] = [0, 0, 0, 0, 0];
  for (let i = 0; i < ages.length; i++) {
    const excess = Math.max(0, Math.abs(difference[i]) - doubt[i]);
    sure = Math.max(sure, excess / error[i]);
    if (one.F[i] >= 0.9 && difference[i] < 0) longer = Math.max(longer, excess / error[i]);
    if (excess > 3 * error[i]) beyond = Math.max(beyond, excess);
    most = Math.max(most, Math.abs(difference[i]) + doubt[i] + 1.645 * error[i]);
    if (Math.abs(difference[i]) > Math.abs(difference[worst])) worst = i;
  }
  const volume = ({ flow, curve: { mean, meanError } }: Member): Known | undefined =>
    flow && { value: flow.value * mean, sd: Math.hypot(flow.value * meanError, (flow.sd ?? 0) * mean) };
  const [va, vb] = [volume(a), volume(b)];
  const timed = ({ flow, curve: { mean, meanError } }: Member): Noisy => {
    const [value, noise] = [(flow?.value ?? 1) * mean, (flow?.value ?? 1) * meanError];
    return { value, noise, whole: Math.hypot(noise, (flow?.sd ?? 0) * mean) };
  };
  const [ra, rb] = [one.recovery, other.recovery];
  const compared: Compared = {
    at,
    trials: [a.day.trial, b.day.trial],
    contrast,
    differs,
    flowRatio,
    apart: { value: difference[worst], age: ages[worst], error: error[worst] },
    atMost: most,
    longer,
    relative: [one.relative, other.relative],
    relativeError: Math.hypot(one.relativeError, other.relativeError),
    volumes: va && vb ? [va, vb] : undefined,
    recoveries: ra &&
      rb && [
        { value: ra.value, sd: ra.whole },
        { value: rb.value, sd: rb.whole },
      ],
    times: va && vb ? heldAgainst(timed(a), timed(b)) : "coincide",
    amounts: ra && rb ? heldAgainst(ra, rb) : "coincide",
  };
  return {
    compared,
    sure,
    beyond,
    // A draw is measured by the others, as the difference itself is.
    noise: (k: number): number =>
      ages.reduce((m, _, i) => {
        const own = noise(k, i) ** 2;
        const others = (count * (error[i] ** 2 - finest ** 2) - own) / (count - 1);
        return Math.max(m, Math.sqrt(own / (Math.max(0, others) + finest ** 2)));
      }, 0),
  };
}
