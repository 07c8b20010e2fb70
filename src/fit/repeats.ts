import { notComparable } from "../data/across-trials.js";
import type { Known } from "../data/figure.js";
import { meanAndArea } from "../data/standard-curve.js";
import { thresholds } from "../data/thresholds.js";
import type { DutyFeed } from "../model/duty.js";
import type { Trial } from "../model/trial.js";
import type { Env, Value } from "../model/value.js";
import type { Block } from "./observations.js";

/** What repeats are told from. */
export interface Repeatable {
  readonly trials: readonly Trial[];
  readonly blocks: readonly Block[];
  readonly env: Env;
  /** Do parameters have a value of their own in each trial? Then trials are no repeats of one another. */
  readonly apart: boolean;
}

/** Blocks of which each point should be as the others' at the same time, and tests that are declared alike but are not. */
export interface Repeats {
  readonly families: readonly (readonly number[])[];
  /** Titles, in the order of the trials. */
  readonly unlike: readonly string[];
}

/**
 * Readings under the same conditions, as far as the files say so and the readings themselves do not say otherwise: what tests with
 * different mean times or areas differ by is more than the error of a reading, and would hide what the network misses.
 */
export function repeatsOf(of: Repeatable): Repeats {
  const { trials, blocks } = of;
  const alike = new Map<string, number[]>();
  for (const [b, block] of blocks.entries()) {
    const key = keyOf(trials[block.trial], block, of);
    if (!block.censored) alike.set(key, [...(alike.get(key) ?? []), b]);
  }
  const families: number[][] = [];
  const unlike = new Set<number>();
  for (const family of alike.values()) {
    const parts = partsOf(family, of);
    families.push(...parts);
    if (parts.length > 1) for (const b of family) unlike.add(blocks[b].trial);
  }
  return { families, unlike: [...unlike].sort((a, b) => a - b).map((t) => trials[t].title) };
}

/** Every block joins the first part of which it agrees with all. */
function partsOf(family: readonly number[], { trials, blocks }: Repeatable): number[][] {
  if (new Set(family.map((b) => blocks[b].trial)).size < 2) return [[...family]];
  const seen = new Map(
    family.map((b) => {
      const { trial, declared } = blocks[b];
      const known =
        trials[trial].reacting || notComparable(trials[trial]) ? undefined : meanAndArea(trials[trial], declared);
      return [b, known];
    }),
  );
  const agree = (a: number, b: number): boolean => {
    const [one, other] = [seen.get(a), seen.get(b)];
    if (!one || !other || blocks[a].trial === blocks[b].trial) return true;
    const scaled = blocks[a].declared.scale === "free";
    return within(one.mean, other.mean) && (scaled || within(one.area, other.area));
  };
  const parts: number[][] = [];
  for (const b of family) {
    const part = parts.find((p) => p.every((a) => agree(a, b)));
    if (part) part.push(b);
    else parts.push([b]);
  }
  return parts;
}

/** By no more than noise makes; errors that are not known tell nothing. */
const within = (a: Known, b: Known): boolean =>
  !(Math.abs(a.value - b.value) > thresholds.across.sure * Math.hypot(a.sd ?? Number.NaN, b.sd ?? Number.NaN));

/** The same for readings of which each point should be as the other's at the same time. */
function keyOf(trial: Trial, { trial: index, declared }: Block, { env, apart }: Repeatable): string {
  const number = (v: Value | undefined): string | undefined => v?.of(env).toPrecision(6);
  const { flows, injections, contents, reacting, tracer, conditions } = trial;
  const levels = (of: ReadonlyMap<string, DutyFeed>) =>
    [...of].map(([name, { species }]) => [name, [...species].map(([s, { value }]) => [s, number(value)])]);
  const alone = apart || trial.flowLogs || injections.some((i) => i.form.is === "signal");
  return JSON.stringify([
    alone ? index : -1,
    declared.places.map(({ name, share }) => [name, share]),
    declared.of?.name,
    declared.of?.steady,
    declared.unit.dimension,
    declared.scale,
    [number(declared.line.delay), number(declared.line.lag)],
    [...flows].map(([name, v]) => [name, number(v)]),
    [...trial.with].map(([name, v]) => [name, number(v)]),
    [...(conditions ?? [])],
    injections.map(({ at, lasting, form }) => [
      at,
      lasting,
      form.is,
      form.is === "pulse" ? number(form.amount) : form.is === "step" ? [number(form.level), number(form.from)] : "",
    ]),
    contents?.levels.map(({ of, level }) => [of, number(level)]),
    tracer,
    reacting && [
      reacting.chemistry.path,
      reacting.vessel?.path,
      number(reacting.temperature),
      levels(reacting.feeds),
      levels(reacting.contents),
    ],
  ]);
}

/** In words. */
export const unlikeText = (titles: readonly string[]): string =>
  `tests under the same conditions differ in mean time or area by more than noise, and are no repeats (${titles.map((t) => `'${t}'`).join(", ")})`;
